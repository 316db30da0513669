import type { OutputSettings } from '../../core/recipes/outputSettings.ts';
import { intentNumber } from '../colour/colourEngine.ts';
import { type PrintOrder, printOrderOf } from '../painting/printOrder.ts';
import { readNumber, readWhole } from './readWords.ts';
import { UsageError } from './usage.ts';

/** Options of every command that writes files for print. */
export const printOptions = {
  profile: { type: 'string' },
  intent: { type: 'string' },
  'no-black-point': { type: 'boolean' },
  ppi: { type: 'string' },
  crop: { type: 'string' },
  bleed: { type: 'string' },
  'trim-marks': { type: 'boolean' },
  metadata: { type: 'string' },
  layers: { type: 'string' },
  quality: { type: 'string' },
} as const;

/** Their lines in the help. */
export const printOptionHelp = [
  [
    '--profile NAME',
    "Colours of the file: keep (the photo's own, the default), srgb, p3, or an ICC file for RGB or CMYK.",
  ],
  [
    '--intent NAME',
    `How colours outside of the profile are brought in: ${Object.keys(intentNumber).join(', ')}.`,
  ],
  ['--no-black-point', "Leaves the photo's black as dark as it is, instead of fitting it to the profile's."],
  [
    '--ppi N',
    'Brings the picture to so many pixels per inch of the print before painting; else its own pixels stay.',
  ],
  ['--crop W:H[@X,Y]', 'Cuts to an aspect such as 4:5, about the middle or about a place such as @0.3,0.5.'],
  ['--bleed MM', 'Mirrors the picture beyond the edge of the print, on every side.'],
  [
    '--metadata NAME',
    "How much of the photo's camera data goes along: all, essential (without the place; the default) or none.",
  ],
  [
    '--layers ora|tiff',
    'Writes the strata too, beside the painting: one OpenRaster file, or a folder of 16-bit TIFFs; none if not.',
  ],
  ['--quality N', 'Of JPEG and WebP, 1 to 100; 92 unless given.'],
  ['--trim-marks', 'Puts the picture on a white margin with marks where it is to be cut.'],
] as const;

export interface PrintValues {
  profile?: string;
  intent?: string;
  'no-black-point'?: boolean;
  ppi?: string;
  crop?: string;
  bleed?: string;
  'trim-marks'?: boolean;
  metadata?: string;
  layers?: string;
  quality?: string;
  'print-long-edge'?: string;
}

/**
 * What the options ask for, over what the recipe has.
 * @param recipe output settings of the photo's recipe; null where it is not used
 * @returns the order, and what of it a recipe keeps
 * @throws UsageError
 */
export function readPrintOrder(
  values: PrintValues,
  recipe: OutputSettings | null,
): { print: PrintOrder; output: Partial<OutputSettings> } {
  const output: Partial<OutputSettings> = {};
  if (values.profile !== undefined) output.profile = readProfile(values.profile);
  if (values.intent !== undefined) output.intent = readIntent(values.intent);
  if (values['no-black-point']) output.blackPointCompensation = false;
  if (values.ppi !== undefined) {
    output.ppi = readNumber(values.ppi, '--ppi', 1, 9600);
    output.isResampled = true;
  }
  if (values.crop !== undefined) output.cropFrame = readCrop(values.crop);
  if (values.bleed !== undefined) output.bleedMm = readNumber(values.bleed, '--bleed', 0, 100);
  if (values['trim-marks']) output.trimMarks = true;
  if (values.metadata !== undefined) output.metadata = readMetadata(values.metadata);
  if (values.layers !== undefined) output.layers = readLayers(values.layers);
  if (values.quality !== undefined) output.quality = readWhole(values.quality, '--quality', 1, 100);
  const asked = { ...recipe, ...output } as OutputSettings;
  const writesSize = values['print-long-edge'] !== undefined || recipe !== null;
  return { print: { ...printOrderOf(asked), writesSize }, output };
}

function readProfile(text: string): OutputSettings['profile'] {
  if (text === 'keep' || text === 'srgb' || text === 'p3') return text;
  if (/\.ic[cm]$/i.test(text)) return { file: text };
  throw new UsageError(`Expected keep, srgb, p3 or an .icc file for --profile, received ${text}`);
}

function readMetadata(text: string): OutputSettings['metadata'] {
  if (text === 'all' || text === 'essential' || text === 'none') return text;
  throw new UsageError(`Expected all, essential or none for --metadata, received ${text}`);
}

function readLayers(text: string): OutputSettings['layers'] {
  if (text === 'none' || text === 'ora' || text === 'tiff') return text;
  throw new UsageError(`Expected ora, tiff or none for --layers, received ${text}`);
}

function readIntent(text: string): OutputSettings['intent'] {
  if (Object.hasOwn(intentNumber, text)) return text as OutputSettings['intent'];
  throw new UsageError(
    `Expected one of ${Object.keys(intentNumber).join(', ')} for --intent, received ${text}`,
  );
}

function readCrop(text: string): NonNullable<OutputSettings['cropFrame']> {
  const parts = /^([\d.]+):([\d.]+)(?:@([\d.]+),([\d.]+))?$/.exec(text);
  const [width, height, x01, y01] = (parts ?? [])
    .slice(1)
    .map((part) => (part === undefined ? 0.5 : Number(part)));
  const aspect = width / height;
  if (aspect >= 0.01 && aspect <= 100 && x01 <= 1 && y01 <= 1) return { aspect, x01, y01 };
  throw new UsageError(`Expected an aspect such as 4:5 or 4:5@0.3,0.5 for --crop, received ${text}`);
}
