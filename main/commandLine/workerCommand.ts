import { createEngine } from '../engine/paintEngine.ts';
import { EnginePainter } from '../series/enginePainter.ts';
import { readWhole, readWords } from './readWords.ts';
import { type Command, exitCode, UsageError } from './usage.ts';

const options = {
  queue: { type: 'string' },
  workers: { type: 'string' },
  'dead-letters': { type: 'boolean' },
  json: { type: 'boolean' },
} as const;

export const workerCommand: Command = {
  name: 'worker',
  usage: 'worker --queue redis://HOST:PORT [--workers N] [--dead-letters [--json]]',
  summary: 'Paints frames that oxgall series --queue puts on a queue, until it is interrupted.',
  options: [
    ['--queue redis://…', 'The queue. Photos and output folders must be there under the same paths.'],
    ['--workers N', 'Worker threads; one for each processor unless given.'],
    ['--dead-letters', 'Paints nothing: lists the frames that nobody could paint, of any run, and why.'],
    ['--json', 'Lists them as JSON.'],
  ],
  run: work,
};

async function work(words: string[]): Promise<number> {
  const { values } = readWords(words, options, { least: 0, most: 0, what: 'no further words' });
  const { queue: address } = values;
  if (address === undefined)
    throw new UsageError('Expected --queue with an address such as redis://localhost');
  if (values['dead-letters']) return listDeadLetters(address, values.json === true);
  const workers = values.workers === undefined ? undefined : readWhole(values.workers, '--workers', 1, 64);
  const { workOnQueue } = await import('../series/queueWorker.ts');
  const engine = await createEngine({ workers });
  try {
    await workOnQueue(address, new EnginePainter(engine), (name, problem) => {
      process.stdout.write(`${name}: ${problem ?? 'painted'}\n`);
    });
    process.stdout.write('Waiting for frames\n');
    // Ends by an interrupt: a frame that is under way then is painted again by another worker.
    await new Promise(() => undefined);
  } finally {
    await engine.close();
  }
  return exitCode.done;
}

async function listDeadLetters(address: string, asJson: boolean): Promise<number> {
  const { openQueue, readDeadLetters } = await import('../series/seriesQueue.ts');
  const queue = await openQueue(address);
  try {
    const letters = await readDeadLetters(queue);
    if (asJson) process.stdout.write(`${JSON.stringify({ frames: letters }, null, 2)}\n`);
    else for (const { photoPath, reason } of letters) process.stdout.write(`${photoPath}: ${reason}\n`);
  } finally {
    await queue.close();
  }
  return exitCode.done;
}
