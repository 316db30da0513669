import { engineVersion } from '../../core/engineVersion.ts';
import { defaultPrintLongEdgeMm } from '../../core/parameters/lengths.ts';
import { planBody } from '../../core/pipeline/bodyPlan.ts';
import { createEngine } from '../engine/paintEngine.ts';
import { outputFormatFor } from '../files/outputFormat.ts';
import { defaultOutputPath } from '../files/outputPath.ts';
import { paintToFile } from '../painting/paintToFile.ts';
import { chosenParameters } from './chosenParameters.ts';
import { ProgressLine } from './progressLine.ts';
import { readNumber, readWhole, readWords } from './readWords.ts';
import { type Command, exitCode, UsageError } from './usage.ts';

const options = {
  preset: { type: 'string' },
  set: { type: 'string', multiple: true },
  out: { type: 'string' },
  depth: { type: 'string' },
  'print-long-edge': { type: 'string' },
  workers: { type: 'string' },
  json: { type: 'boolean' },
} as const;

export const paintCommand: Command = {
  name: 'paint',
  usage: 'paint PHOTO [--preset NAME] [--set KEY=VALUE]… [--out FILE]',
  summary: 'Paints one photo to a file.',
  options: [
    ['--preset NAME', 'The preset to paint with; oxgall presets lists them.'],
    ['--set KEY=VALUE', 'Changes one parameter, as often as needed; oxgall params lists them.'],
    ['--out FILE', 'The painted file: .png, .jpg, .tif or .webp. Beside the photo unless given.'],
    ['--depth 8|16', "Bits a sample; the photo's own unless given."],
    [
      '--print-long-edge MM',
      `Long edge of the print, for lengths in mm; ${defaultPrintLongEdgeMm} unless given.`,
    ],
    ['--workers N', 'Worker threads; one for each processor unless given.'],
    ['--json', 'Prints one JSON object with everything that was done.'],
  ],
  run: paint,
};

async function paint(words: string[]): Promise<number> {
  const read = readWords(words, options, { least: 1, most: 1, what: 'one photo' });
  const photoPath = read.positionals[0];
  const { preset, parameters } = await chosenParameters(read.values.preset, read.values.set ?? []);
  const workers =
    read.values.workers === undefined ? undefined : readWhole(read.values.workers, '--workers', 1, 64);
  const printLongEdgeMm = readNumber(
    read.values['print-long-edge'] ?? String(defaultPrintLongEdgeMm),
    '--print-long-edge',
    10,
    20_000,
  );
  const askedDepth = readDepth(read.values.depth);
  const named = read.values.out;
  const out = named ?? (await defaultOutputPath(photoPath, 'png'));
  const format = outputFormatFor(out);

  const startMs = performance.now();
  const progress = new ProgressLine();
  // The workers start while the photo is being read.
  const starting = createEngine({ workers });
  starting.catch(() => undefined);
  try {
    const order = { parameters, out, format, depth: askedDepth, printLongEdgeMm };
    const painted = await paintToFile(starting, photoPath, order, {
      onProgress: (fraction01, stage) => progress.update(0.05 + 0.95 * fraction01, stage),
    });
    const totalMs = performance.now() - startMs;
    const { widthPx, heightPx, times } = painted;
    const scale = { longEdgePx: Math.max(widthPx, heightPx), printLongEdgeMm };
    progress.clear();
    report(read.values.json === true, {
      photo: photoPath,
      output: painted.path,
      width: widthPx,
      height: heightPx,
      depth: painted.depth,
      engineVersion,
      preset,
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
      remarks: painted.remarks,
    });
    return exitCode.done;
  } finally {
    progress.clear();
    await (await starting.catch(() => null))?.close();
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
  process.stdout.write(`${painted.output}  ${painted.width} × ${painted.height} px in ${seconds} s\n`);
}
