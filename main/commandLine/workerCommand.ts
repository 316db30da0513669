import { createEngine } from '../engine/paintEngine.ts';
import { EnginePainter } from '../series/framePainter.ts';
import { readWhole, readWords } from './readWords.ts';
import { type Command, exitCode, UsageError } from './usage.ts';

const options = {
  queue: { type: 'string' },
  workers: { type: 'string' },
} as const;

export const workerCommand: Command = {
  name: 'worker',
  usage: 'worker --queue redis://HOST:PORT [--workers N]',
  summary: 'Paints frames that oxgall series --queue puts on a queue, until it is interrupted.',
  options: [
    ['--queue redis://…', 'The queue. Photos and output folders must be there under the same paths.'],
    ['--workers N', 'Worker threads; one for each processor unless given.'],
  ],
  run: work,
};

async function work(words: string[]): Promise<number> {
  const { values } = readWords(words, options, { least: 0, most: 0, what: 'no further words' });
  if (values.queue === undefined)
    throw new UsageError('Expected --queue with an address such as redis://localhost');
  const workers = values.workers === undefined ? undefined : readWhole(values.workers, '--workers', 1, 64);
  const { workOnQueue } = await import('../series/seriesQueue.ts');
  const engine = await createEngine({ workers });
  workOnQueue(values.queue, new EnginePainter(engine), (name, problem) => {
    process.stdout.write(`${name}: ${problem ?? 'painted'}\n`);
  });
  process.stdout.write('Waiting for frames\n');
  // Ends by an interrupt: a frame that is under way then is painted again by another worker.
  await new Promise(() => undefined);
  return exitCode.done;
}
