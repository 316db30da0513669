import { basename, join, resolve } from 'node:path';
import { defaultPrintLongEdgeMm } from '../../core/parameters/lengths.ts';
import { parseParameters } from '../../core/parameters/parse.ts';
import type { Parameters } from '../../core/parameters/table.ts';
import { fullParameters } from '../../core/presets/parametersSchema.ts';
import { defaultOutputSettings, type OutputSettings } from '../../core/recipes/outputSettings.ts';
import { allMatchParts, type MatchParts } from '../../core/series/frameMatch.ts';
import { oddOnesOut } from '../../core/series/oddOnesOut.ts';
import { lookOfFrame, partsOfFrame, type SeriesDocument } from '../../core/series/seriesDocument.ts';
import { createEngine } from '../engine/paintEngine.ts';
import { FileError } from '../files/fileError.ts';
import { letGo, readAnyPhoto } from '../painting/holdPhoto.ts';
import { EnginePainter } from '../series/framePainter.ts';
import type { FrameResult } from '../series/runSeries.ts';
import { planSeries, type SeriesPlan, type Shard } from '../series/seriesPlan.ts';
import { loadSeries } from '../store/seriesFile.ts';
import { chosenLook, readSettings } from './chosenLook.ts';
import { commandStores } from './photoRecipe.ts';
import { printOptionHelp, printOptions, readPrintOrder } from './printOptions.ts';
import { ProgressLine } from './progressLine.ts';
import { readNumber, readWhole, readWords } from './readWords.ts';
import { type Command, exitCode, UsageError } from './usage.ts';

const options = {
  out: { type: 'string' },
  preset: { type: 'string' },
  set: { type: 'string', multiple: true },
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
    [
      '--lead FILE',
      "The photo that the others are matched to; the series file's, or the first, unless given.",
    ],
    ['--match 0…1', 'How far they are matched; 1 unless given.'],
    ['--format NAME', 'png, jpg, tif or webp; png unless given.'],
    ['--depth 8|16', 'Bits a sample; 8 unless given.'],
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

/** What is to be painted, wherever it is painted. */
export interface SeriesTask {
  folder: string;
  outFolder: string;
  plan: SeriesPlan;
  parametersOf(name: string): Parameters;
  partsOf(name: string): MatchParts;
  lead: string | null;
  leadPath: string;
  amount01: number;
  output: OutputSettings;
}

async function series(words: string[]): Promise<number> {
  const { values, positionals } = readWords(words, options, { least: 1, most: 1, what: 'one folder' });
  if (values.out === undefined) throw new UsageError('Expected --out with a folder for the paintings');
  const task = await readTask(resolve(positionals[0]), resolve(values.out), values);
  const shard = values.shard === undefined ? null : readShard(values.shard);
  const workers = values.workers === undefined ? undefined : readWhole(values.workers, '--workers', 1, 64);
  const progress = new ProgressLine();
  const startMs = performance.now();
  const done = new Map<string, number>();
  const onFrame = (name: string, change: { fraction01: number } | { result: FrameResult }) => {
    done.set(name, 'result' in change ? 1 : change.fraction01);
    const sum = [...done.values()].reduce((total, fraction01) => total + fraction01, 0);
    progress.update(sum / Math.max(1, task.plan.frames.length / (shard?.count ?? 1)), 'series');
  };
  const common = { ...task, frames: task.plan.frames, shard, resumes: values.resume === true };
  let results: FrameResult[];
  try {
    const { runSeries } = await import('../series/runSeries.ts');
    if (values.queue === undefined) {
      const engine = await createEngine({ workers });
      try {
        results = await runSeries(new EnginePainter(engine), common, { onFrame });
      } finally {
        await engine.close();
      }
    } else {
      const { QueuePainter } = await import('../series/seriesQueue.ts');
      const painter = new QueuePainter(values.queue);
      try {
        results = await runSeries(painter, common, { onFrame });
      } finally {
        await painter.close();
      }
    }
  } finally {
    progress.clear();
  }
  return report(values.json === true, task, results, performance.now() - startMs);
}

type Values = ReturnType<typeof readWords<typeof options>>['values'];

async function readTask(folder: string, outFolder: string, values: Values): Promise<SeriesTask> {
  const format = readFormat(values.format ?? 'png');
  const plan = await planSeries(folder, format);
  if (plan.frames.length === 0)
    throw new FileError(folder, 'holds no photos', 'Name a folder of JPEG, PNG, TIFF, WebP or AVIF photos.');
  if (resolve(outFolder) === folder)
    throw new FileError(folder, 'is where the photos are', 'Choose another folder for the paintings.');
  const { document } = await loadSeries(folder);
  const { presets } = commandStores();
  const settings = readSettings(values.set ?? []);
  const look = values.preset === undefined && document ? null : await chosenLook(presets, values.preset, []);
  const base = look ? look.parameters : null;
  const parametersOf = (name: string) =>
    parseParameters(settings, base ?? fullParameters(lookOfFrame(document!, name).parameters));
  // Wrong settings are found out before anything is begun.
  parametersOf(plan.frames[0].name);
  const leftOut = new Set(document?.leftOut ?? []);
  const frames = plan.frames.filter(({ name }) => !leftOut.has(name));
  const named = values.lead ?? document?.lead ?? null;
  const lead = named === null ? await firstReadable(frames) : readLead(named, plan);
  const amount01 = readNumber(values.match ?? String(document?.match.amount01 ?? 1), '--match', 0, 1);
  return {
    folder,
    outFolder,
    plan: { ...plan, frames },
    parametersOf,
    partsOf: (name) => (document ? partsOfFrame(document, name) : allMatchParts),
    lead,
    leadPath: join(folder, lead),
    amount01,
    output: readOutput(values, format, document),
  };
}

/** Nobody named a lead: a photo that cannot be read must not keep the others from being painted. */
async function firstReadable(frames: SeriesPlan['frames']): Promise<string> {
  for (const { name, path } of frames) {
    const photo = await readAnyPhoto(path).catch((failure) => {
      if (failure instanceof FileError) return null;
      throw failure;
    });
    if (!photo) continue;
    letGo(photo);
    return name;
  }
  return frames[0].name;
}

function readLead(named: string, plan: SeriesPlan): string {
  const name = basename(named);
  if (plan.frames.some((frame) => frame.name === name)) return name;
  throw new UsageError(`Expected a photo of the folder for --lead, received ${named}`);
}

function readOutput(
  values: Values,
  format: OutputSettings['format'],
  document: SeriesDocument | null,
): OutputSettings {
  const base = document?.output ?? defaultOutputSettings();
  const { output } = readPrintOrder(values, null);
  const long = values['print-long-edge'] ?? String(base.printLongEdgeMm);
  return {
    ...base,
    ...output,
    format,
    depth: readDepth(values.depth ?? '8', format),
    printLongEdgeMm: readNumber(long, '--print-long-edge', 10, 20_000),
  };
}

function readDepth(text: string, format: OutputSettings['format']): 8 | 16 {
  if (text !== '8' && text !== '16') throw new UsageError(`Expected 8 or 16 for --depth, received ${text}`);
  return text === '16' && (format === 'png' || format === 'tiff') ? 16 : 8;
}

const formats: Record<string, OutputSettings['format']> = {
  png: 'png',
  jpg: 'jpeg',
  jpeg: 'jpeg',
  tif: 'tiff',
  tiff: 'tiff',
  webp: 'webp',
};

function readFormat(text: string): OutputSettings['format'] {
  if (Object.hasOwn(formats, text)) return formats[text];
  throw new UsageError(`Expected png, jpg, tif or webp for --format, received ${text}`);
}

function readShard(text: string): Shard {
  const [, index, count] = /^(\d+)\/(\d+)$/.exec(text) ?? [];
  const shard = { index: Number(index), count: Number(count) };
  if (shard.count >= 1 && shard.index >= 1 && shard.index <= shard.count) return shard;
  throw new UsageError(`Expected a part such as 2/3 for --shard, received ${text}`);
}

function report(asJson: boolean, task: SeriesTask, results: FrameResult[], tookMs: number): number {
  const measured = results.filter(({ figures }) => figures !== null);
  const odd = oddOnesOut(measured.map(({ figures }) => figures!.before));
  const oddOf = (result: FrameResult) => odd[measured.indexOf(result)] ?? null;
  const count = (state: FrameResult['state']) => results.filter((result) => result.state === state).length;
  const failed = count('failed') + count('waiting');
  if (asJson) {
    const told = {
      folder: task.folder,
      out: task.outFolder,
      lead: task.amount01 > 0 ? task.lead : null,
      match: task.amount01,
      output: task.output,
      frames: results.map((result) => ({ ...result, odd: oddOf(result) })),
      others: task.plan.others.map((name) => ({ name, reason: 'This is no photo.' })),
      painted: count('painted'),
      kept: count('kept'),
      failed,
      milliseconds: Math.round(tookMs),
    };
    process.stdout.write(`${JSON.stringify(told, null, 2)}\n`);
    return failed > 0 ? exitCode.failed : exitCode.done;
  }
  for (const name of task.plan.others)
    process.stderr.write(`${name}: this is no photo, so it was left out.\n`);
  for (const result of results) {
    for (const remark of result.remarks) process.stderr.write(`${result.name}: ${remark}\n`);
    const strange = oddOf(result);
    if (strange) process.stderr.write(`${result.name}: odd one out. ${strange.reason}\n`);
    if (result.state === 'failed') process.stderr.write(`${result.name}: ${result.reason}\n`);
  }
  const seconds = (tookMs / 1000).toFixed(1);
  process.stdout.write(
    `${task.outFolder}: ${count('painted')} painted, ${count('kept')} kept, ${failed} failed in ${seconds} s\n`,
  );
  return failed > 0 ? exitCode.failed : exitCode.done;
}
