import { realpath } from 'node:fs/promises';
import { basename, join, resolve } from 'node:path';
import { parseParameters } from '../../core/parameters/parse.ts';
import type { Parameters } from '../../core/parameters/table.ts';
import type { LookName } from '../../core/presets/lookName.ts';
import { fullParameters } from '../../core/presets/parametersSchema.ts';
import { defaultOutputSettings, type OutputSettings } from '../../core/recipes/outputSettings.ts';
import { currentParameters, lookNameOf } from '../../core/recipes/recipeHistory.ts';
import { allMatchParts } from '../../core/series/frameMatch.ts';
import { lookOfFrame, partsOfFrame, type SeriesDocument } from '../../core/series/seriesDocument.ts';
import type { Shard } from '../../core/series/shards.ts';
import { FileError } from '../files/fileError.ts';
import { letGo, readAnyPhoto } from '../painting/holdPhoto.ts';
import type { RunOrder } from '../series/runSeries.ts';
import { type PlannedFrame, planSeries, type SeriesPlan } from '../series/seriesPlan.ts';
import { lookNamer } from '../store/lookNames.ts';
import { loadSeries } from '../store/seriesFile.ts';
import { chosenLook, readSettings } from './chosenLook.ts';
import { commandStores, readRecipe } from './photoRecipe.ts';
import { type PrintValues, readPrintOrder } from './printOptions.ts';
import { readNumber } from './readWords.ts';
import { UsageError } from './usage.ts';

/** What the words of `oxgall series` ask for. */
export interface SeriesValues extends PrintValues {
  preset?: string;
  set?: string[];
  recipes?: boolean;
  lead?: string;
  match?: string;
  format?: string;
  depth?: string;
  shard?: string;
  resume?: boolean;
}

/** What is to be painted, wherever it is painted, and what is to be said of it beforehand. */
export interface SeriesTask {
  order: RunOrder;
  plan: SeriesPlan;
  remarks: string[];
}

/**
 * Finds out what to paint: the folder's photos by the options, and by the series file where they say nothing.
 * @throws UsageError, ParameterError; FileError where the folder, the lead or a recipe cannot be used
 */
export async function readSeriesTask(
  folder: string,
  outFolder: string,
  values: SeriesValues,
): Promise<SeriesTask> {
  const { document, remarks: said } = await loadSeries(folder);
  const output = readOutput(values, document);
  const plan = await planSeries(folder, output.format);
  if (plan.frames.length === 0)
    throw new FileError(folder, 'holds no photos', 'Name a folder of JPEG, PNG, TIFF, WebP or AVIF photos.');
  await refusePhotoFolder(folder, outFolder);
  const leftOut = new Set(document?.leftOut ?? []);
  const frames = plan.frames.filter(({ name }) => !leftOut.has(name));
  const looks = await readLooks(values, document, plan);
  const amount01 = readNumber(values.match ?? String(document?.match.amount01 ?? 1), '--match', 0, 1);
  const lead = await chooseLead(folder, values.lead, document, { frames, all: plan.frames, amount01 });
  const order: RunOrder = {
    folder,
    outFolder,
    frames,
    parametersOf: looks.parametersOf,
    lookOf: looks.lookOf,
    lead: lead.name,
    leadPath: join(folder, lead.name ?? ''),
    amount01,
    partsOf: (name) => (document ? partsOfFrame({ ...document, lead: lead.name }, name) : allMatchParts),
    output,
    shard: values.shard === undefined ? null : readShard(values.shard),
    resumes: values.resume === true,
  };
  return { order, plan, remarks: [...said, ...looks.remarks, ...lead.remarks] };
}

/** @throws FileError where the paintings would lie among the photos, also by way of a link */
async function refusePhotoFolder(folder: string, outFolder: string): Promise<void> {
  const real = (path: string) => realpath(path).catch(() => resolve(path));
  if ((await real(folder)) === (await real(outFolder)))
    throw new FileError(folder, 'is where the photos are', 'Choose another folder for the paintings.');
}

interface Looks {
  parametersOf(name: string): Parameters;
  lookOf(name: string): LookName;
  remarks: string[];
}

/** `--set` over the photo's recipe where `--recipes` is given, else over `--preset`, else over the series file's look. */
async function readLooks(
  values: SeriesValues,
  document: SeriesDocument | null,
  { frames, withRecipe }: SeriesPlan,
): Promise<Looks> {
  const stores = commandStores();
  const settings = readSettings(values.set ?? []);
  const isFromFile = values.preset === undefined && document !== null;
  const look = isFromFile ? null : await chosenLook(stores.presets, values.preset, []);
  const own = new Map<string, { parameters: Parameters; name: LookName }>();
  const remarks: string[] = [];
  if (!values.recipes && withRecipe.length > 0)
    remarks.push(
      `${withRecipe.join(', ')}: painted by the look of the series, not by recipes of their own; --recipes changes that.`,
    );
  for (const { name, path } of values.recipes ? frames : []) {
    if (!withRecipe.includes(name)) continue;
    // A photo that cannot be read is named when its turn comes.
    const read = await readRecipe(stores, path).catch(() => null);
    if (read?.recipe)
      own.set(name, { parameters: currentParameters(read.recipe), name: lookNameOf(read.recipe) });
    remarks.push(...(read?.remarks ?? []).map((remark) => `${name}: ${remark}`));
  }
  const parametersOf = (name: string) => {
    const base =
      own.get(name)?.parameters ??
      look?.parameters ??
      fullParameters(lookOfFrame(document!, name).parameters);
    return parseParameters(settings, base);
  };
  const nameOf = await lookNamer(stores.presets);
  const isChanged = Object.keys(settings).length > 0;
  const lookOf = (name: string): LookName => {
    const named = look && { title: look.preset.title, stateNumber: look.state.number, isChanged: false };
    const found = own.get(name)?.name ?? named ?? nameOf(lookOfFrame(document!, name));
    return isChanged ? { ...found, isChanged } : found;
  };
  // Wrong settings are found out before anything is begun.
  parametersOf(frames[0].name);
  return { parametersOf, lookOf, remarks };
}

/** The photo that leads: as asked for, as the series file has it, or the first that can be read. */
async function chooseLead(
  folder: string,
  asked: string | undefined,
  document: SeriesDocument | null,
  series: { frames: readonly PlannedFrame[]; all: readonly PlannedFrame[]; amount01: number },
): Promise<{ name: string | null; remarks: string[] }> {
  const { frames, all, amount01 } = series;
  const find = (name: string) => all.find((frame) => frame.name === name) ?? null;
  if (asked !== undefined) {
    const named = find(basename(asked));
    const isThere = named && [resolve(asked), resolve(folder, asked)].includes(resolve(named.path));
    if (!isThere) throw new UsageError(`Expected a photo of the folder for --lead, received ${asked}`);
    if (amount01 > 0) await requireReadable(named);
    return { name: named.name, remarks: [] };
  }
  if (amount01 <= 0) return { name: document?.lead ?? null, remarks: [] };
  const noted = document?.lead ? find(document.lead) : null;
  if (noted && (await isReadable(noted))) return { name: noted.name, remarks: [] };
  // Nobody named a lead: a photo that cannot be read must not keep the others from being painted.
  for (const frame of frames) {
    if (!(await isReadable(frame))) continue;
    const why = document?.lead ? [`${document.lead} cannot lead the series: ${frame.name} does.`] : [];
    return { name: frame.name, remarks: why };
  }
  return { name: null, remarks: [] };
}

async function requireReadable({ path }: PlannedFrame): Promise<void> {
  try {
    letGo(await readAnyPhoto(path));
  } catch (failure) {
    if (!(failure instanceof FileError)) throw failure;
    throw new FileError(path, `cannot lead the series: ${failure.problem}`, 'Choose another lead photo.', {
      cause: failure,
    });
  }
}

async function isReadable(frame: PlannedFrame): Promise<boolean> {
  return requireReadable(frame).then(
    () => true,
    (failure) => {
      if (failure instanceof FileError) return false;
      throw failure;
    },
  );
}

function readOutput(values: SeriesValues, document: SeriesDocument | null): OutputSettings {
  const base = document?.output ?? { ...defaultOutputSettings(), format: 'png' as const };
  const format = values.format === undefined ? base.format : readFormat(values.format);
  const { output } = readPrintOrder(values, null);
  const long = values['print-long-edge'] ?? String(base.printLongEdgeMm);
  return {
    ...base,
    ...output,
    format,
    depth: readDepth(values.depth ?? String(base.depth), format),
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
