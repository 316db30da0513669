import { engineVersion } from '../../core/engineVersion.ts';
import { defaultPrintLongEdgeMm } from '../../core/parameters/lengths.ts';
import { planBody } from '../../core/pipeline/bodyPlan.ts';
import { defaultOutputSettings } from '../../core/recipes/outputSettings.ts';
import { createEngine } from '../engine/paintEngine.ts';
import { outputFormatFor } from '../files/outputFormat.ts';
import { defaultOutputPath } from '../files/outputPath.ts';
import { describePainting } from '../painting/describePainting.ts';
import { type PaintedFile, paintToFile } from '../painting/paintToFile.ts';
import { fingerprintPhoto } from '../store/photoFingerprint.ts';
import { choosePaintWork, keepPainted } from './paintWork.ts';
import { commandStores } from './photoRecipe.ts';
import { printOptionHelp, printOptions, readPrintOrder } from './printOptions.ts';
import { ProgressLine } from './progressLine.ts';
import { readNumber, readWhole, readWords } from './readWords.ts';
import { type Command, exitCode, UsageError } from './usage.ts';

const options = {
  preset: { type: 'string' },
  set: { type: 'string', multiple: true },
  out: { type: 'string' },
  depth: { type: 'string' },
  'print-long-edge': { type: 'string' },
  ...printOptions,
  keep: { type: 'boolean' },
  workers: { type: 'string' },
  json: { type: 'boolean' },
} as const;

export const paintCommand: Command = {
  name: 'paint',
  usage: 'paint PHOTO [--preset NAME[@STATE]] [--set KEY=VALUE]… [--out FILE] [--keep]',
  summary: 'Paints one photo to a file, by its recipe where it has one.',
  options: [
    [
      '--preset NAME[@STATE]',
      'The preset to paint with, at its newest state unless one such as @3 or @III is named; instead of the recipe.',
    ],
    ['--set KEY=VALUE', 'Changes one parameter, as often as needed; oxgall params lists them.'],
    ['--out FILE', 'The painted file: .png, .jpg, .tif or .webp. Beside the photo unless given.'],
    ['--depth 8|16', "Bits a sample; the photo's own unless given."],
    [
      '--print-long-edge MM',
      `Long edge of the print, for lengths in mm; the recipe's, or ${defaultPrintLongEdgeMm}, unless given.`,
    ],
    ...printOptionHelp,
    ['--keep', "Notes what was painted in the photo's recipe, which is made where there is none."],
    ['--workers N', 'Worker threads; one for each processor unless given.'],
    ['--json', 'Prints one JSON object with everything that was done.'],
  ],
  run: paint,
};

async function paint(words: string[]): Promise<number> {
  const read = readWords(words, options, { least: 1, most: 1, what: 'one photo' });
  const photoPath = read.positionals[0];
  const workers =
    read.values.workers === undefined ? undefined : readWhole(read.values.workers, '--workers', 1, 64);
  const isKept = read.values.keep === true;
  const stores = commandStores();
  const work = await choosePaintWork(stores, photoPath, {
    preset: read.values.preset,
    settings: read.values.set ?? [],
    isKept,
  });
  const { parameters } = work;
  const printLongEdgeMm = readNumber(
    read.values['print-long-edge'] ?? String(work.printLongEdgeMm),
    '--print-long-edge',
    10,
    20_000,
  );
  const askedDepth = readDepth(read.values.depth);
  const usedRecipe = work.look === null ? (work.read?.recipe ?? null) : null;
  const { print, output } = readPrintOrder(read.values, usedRecipe?.work.output ?? null);
  const { layers, quality, metadata } = { layers: 'none' as const, ...usedRecipe?.work.output, ...output };
  const layersKind = layers === 'none' ? undefined : layers;
  const named = read.values.out;
  const out = named ?? (await defaultOutputPath(photoPath, 'png'));
  const format = outputFormatFor(out);

  const startMs = performance.now();
  const progress = new ProgressLine();
  // The workers start while the photo is being read.
  const starting = createEngine({ workers });
  starting.catch(() => undefined);
  try {
    const asked = { depth: askedDepth, quality, printLongEdgeMm, print, layers: layersKind };
    const told = { metadata, ...describePainting({ title: work.title, stateNumber: work.state }) };
    const order = { parameters, out, format, ...asked, ...told };
    const painted = await paintToFile(starting, photoPath, order, {
      onProgress: (fraction01, stage) => progress.update(0.05 + 0.95 * fraction01, stage),
    });
    const totalMs = performance.now() - startMs;
    const { widthPx, heightPx, times } = painted;
    const kept = isKept ? await keepFile(painted) : null;
    const scale = { longEdgePx: Math.max(widthPx, heightPx), printLongEdgeMm };
    progress.clear();
    report(read.values.json === true, {
      photo: photoPath,
      output: painted.path,
      layers: painted.layersPath,
      width: widthPx,
      height: heightPx,
      depth: painted.depth,
      engineVersion,
      preset: work.preset,
      state: work.state,
      recipe: kept?.path ?? work.read?.path ?? null,
      parameters,
      printLongEdgeMm,
      noiseFloor: planBody(parameters, scale, 0, painted.noiseFloor).noiseFloor,
      workers: (await starting).workers,
      milliseconds: roundAll({
        decode: painted.readMs,
        grain: painted.openMs + times.grainMs,
        body: times.bodyMs,
        line: times.lineMs,
        relief: times.reliefMs,
        compose: times.composeMs,
        encode: times.encodeMs,
        total: totalMs,
      }),
      peakMemoryBytes: process.resourceUsage().maxRSS * 1024,
      pixelsSha256: painted.pixelsSha256,
      remarks: [...work.remarks, ...painted.remarks, ...(kept?.remarks ?? [])],
    });
    return exitCode.done;
  } finally {
    progress.clear();
    await (await starting.catch(() => null))?.close();
  }

  async function keepFile({ path, depth, pixelsSha256 }: PaintedFile) {
    const { sha256 } = await fingerprintPhoto(path);
    const written = { path, sha256, pixelsSha256, photoSha256: work.read!.photo.sha256, parameters };
    const asked = { ...output, format, depth, printLongEdgeMm, layers };
    // A recipe that was not painted by has settings of its own, which are no part of this file.
    const used = { ...(usedRecipe?.work.output ?? defaultOutputSettings()), ...asked };
    return keepPainted(stores, photoPath, work, { ...written, output: used }, asked);
  }
}

function readDepth(text: string | undefined): 8 | 16 | undefined {
  if (text === undefined) return undefined;
  if (text !== '8' && text !== '16') throw new UsageError(`Expected 8 or 16 for --depth, received ${text}`);
  return text === '8' ? 8 : 16;
}

function roundAll<T extends Record<string, number>>(times: T): T {
  return Object.fromEntries(Object.entries(times).map(([key, ms]) => [key, Math.round(ms * 10) / 10])) as T;
}

interface PaintReport {
  [detail: string]: unknown;
  photo: string;
  output: string;
  layers: string | null;
  width: number;
  height: number;
  milliseconds: { total: number };
  remarks: string[];
}

function report(asJson: boolean, painted: PaintReport): void {
  if (asJson) {
    process.stdout.write(`${JSON.stringify(painted, null, 2)}\n`);
    return;
  }
  for (const remark of painted.remarks) process.stderr.write(`${remark}\n`);
  const seconds = (painted.milliseconds.total / 1000).toFixed(1);
  if (painted.layers) process.stdout.write(`${painted.layers}\n`);
  process.stdout.write(`${painted.output}  ${painted.width} × ${painted.height} px in ${seconds} s\n`);
}
