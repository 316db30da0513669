import { resolve } from 'node:path';
import { setTimeout as pause } from 'node:timers/promises';
import { defaultPrintLongEdgeMm } from '../../core/parameters/lengths.ts';
import { framesOfShard } from '../../core/series/shards.ts';
import { createEngine } from '../engine/paintEngine.ts';
import { EnginePainter } from '../series/enginePainter.ts';
import { RunProgress } from '../series/runProgress.ts';
import { type RunControl, type RunOrder, type RunOutcome, runSeries } from '../series/runSeries.ts';
import { printOptionHelp, printOptions } from './printOptions.ts';
import { ProgressLine, timeInWords } from './progressLine.ts';
import { readWhole, readWords } from './readWords.ts';
import { reportSeries } from './seriesReport.ts';
import { readSeriesTask } from './seriesTask.ts';
import { type Command, UsageError } from './usage.ts';

const options = {
  out: { type: 'string' },
  preset: { type: 'string' },
  set: { type: 'string', multiple: true },
  recipes: { type: 'boolean' },
  lead: { type: 'string' },
  match: { type: 'string' },
  format: { type: 'string' },
  depth: { type: 'string' },
  'print-long-edge': { type: 'string' },
  shard: { type: 'string' },
  workers: { type: 'string' },
  resume: { type: 'boolean' },
  queue: { type: 'string' },
  json: { type: 'boolean' },
  ...printOptions,
} as const;

export const seriesCommand: Command = {
  name: 'series',
  usage: 'series FOLDER --out DIR [--preset NAME[@STATE]] [--set KEY=VALUE]… [--lead FILE] [--match 0…1]',
  summary: 'Paints every photo of a folder, matched to a lead photo.',
  options: [
    ['--out DIR', 'Where the paintings go; made when it is not there.'],
    [
      '--preset NAME[@STATE]',
      "The preset to paint with; the series file's look, or the default, unless given.",
    ],
    ['--set KEY=VALUE', 'Changes one parameter, as often as needed.'],
    ['--recipes', 'Paints photos that have recipes of their own by those instead.'],
    [
      '--lead FILE',
      "The photo that the others are matched to; the series file's, or the first, unless given.",
    ],
    ['--match 0…1', 'How far they are matched; 1 unless given.'],
    ['--format NAME', "png, jpg, tif or webp; the series file's, or png, unless given."],
    ['--depth 8|16', "Bits a sample; the series file's, or 8, unless given."],
    ['--print-long-edge MM', `Long edge of the prints; ${defaultPrintLongEdgeMm} unless given.`],
    ...printOptionHelp,
    ['--shard K/N', 'Paints one of N parts; all parts together are the whole run.'],
    ['--workers N', 'Worker threads; one for each processor unless given.'],
    ['--resume', 'Goes on with an earlier run into that folder: nothing is painted again without a reason.'],
    ['--queue redis://…', 'Puts the frames on a queue and waits; oxgall worker paints them, on any machine.'],
    ['--json', 'Prints one JSON object with every frame, its state, reason, figures and hash.'],
  ],
  run: series,
};

async function series(words: string[]): Promise<number> {
  const { values, positionals } = readWords(words, options, { least: 1, most: 1, what: 'one folder' });
  if (values.out === undefined) throw new UsageError('Expected --out with a folder for the paintings');
  const workers = values.workers === undefined ? undefined : readWhole(values.workers, '--workers', 1, 64);
  const task = await readSeriesTask(resolve(positionals[0]), resolve(values.out), values);
  const { order } = task;
  const startMs = performance.now();
  const line = new ProgressLine();
  const progress = new RunProgress(framesOfShard(order.frames, order.shard).length);
  const control: RunControl = {
    onFrame: (name, change) => {
      progress.note(name, change);
      line.update(progress.fraction01, 'series', detailOf(progress));
    },
  };
  try {
    const outcome =
      values.queue === undefined
        ? await paintHere(order, control, workers)
        : await paintByQueue(values.queue, order, control);
    line.clear();
    return reportSeries(values.json === true, task, outcome, performance.now() - startMs);
  } finally {
    line.clear();
  }
}

function detailOf(progress: RunProgress): string {
  const leftMs = progress.leftMs();
  const left = leftMs === null ? '' : `, about ${timeInWords(leftMs)} left`;
  return ` (${progress.ended} of ${progress.total}${left})`;
}

async function paintHere(order: RunOrder, control: RunControl, workers?: number): Promise<RunOutcome> {
  const engine = await createEngine({ workers });
  try {
    return await runSeries(new EnginePainter(engine), order, control);
  } finally {
    await engine.close();
  }
}

/** Time for workers that start together with the run. */
const workersExpectedMs = 5_000;

async function paintByQueue(address: string, order: RunOrder, control: RunControl): Promise<RunOutcome> {
  // Loaded only here: nothing else needs the queue engine.
  const { QueuePainter } = await import('../series/queuePainter.ts');
  const painter = await QueuePainter.open(address);
  const ended = new AbortController();
  const warning = pause(workersExpectedMs, undefined, { signal: ended.signal }).then(async () => {
    if ((await painter.countWorkers()) === 0)
      process.stderr.write('Nobody paints yet: start oxgall worker --queue … on one machine or more.\n');
  });
  warning.catch(() => undefined);
  try {
    return await runSeries(painter, order, control);
  } finally {
    ended.abort();
    await painter.close();
  }
}
