import type { OutputSettings } from '../../core/recipes/outputSettings.ts';
import type { OpenedPhoto, OutputFormatName } from '../../main/host/api/hostCommands.ts';
import { inMm, planOf } from './printMeasures.ts';

export const formats: readonly { value: OutputFormatName; name: string; ending: string; help: string }[] = [
  { value: 'png', name: 'PNG', ending: '.png', help: 'Exact, every pixel as painted.' },
  { value: 'tiff', name: 'TIFF', ending: '.tif', help: 'Exact; what most printers ask for.' },
  { value: 'jpeg', name: 'JPEG', ending: '.jpg', help: 'Small, for sending; not exact.' },
  { value: 'webp', name: 'WebP', ending: '.webp', help: 'Small, for the web; not exact.' },
];

export function formatOf({ format }: Pick<OutputSettings, 'format'>) {
  return formats.find(({ value }) => value === format)!;
}

/** Whether a format keeps every pixel as painted, with 16 bits where they are asked for. */
export function isExact({ format }: Pick<OutputSettings, 'format'>): boolean {
  return format === 'png' || format === 'tiff';
}

/** Whether a format holds the four inks of a CMYK profile. */
export function holdsInks(format: OutputSettings['format']): boolean {
  return format === 'tiff' || format === 'jpeg';
}

/** A profile in few words. */
export function profileName(profile: OutputSettings['profile']): string {
  if (profile === 'keep') return 'the photograph’s own colours';
  if (profile === 'srgb') return 'sRGB';
  if (profile === 'p3') return 'Display P3';
  return profile.file.replace(/^.*[\\/]/, '').replace(/\.ic[cm]$/i, '');
}

/** What file will be made, as one sentence. */
export function printSentence(
  photo: Pick<OpenedPhoto, 'widthPx' | 'heightPx'>,
  output: OutputSettings,
): string {
  const plan = planOf(photo, output);
  const { name } = formatOf(output);
  const kind = isExact(output) ? `${name} of ${output.depth} bits` : `${name} of quality ${output.quality}`;
  const size = `${inMm(plan.widthMm)} × ${inMm(plan.heightMm)} mm at ${Math.round(plan.ppi)} pixels an inch`;
  const around = [
    output.bleedMm > 0 && `${inMm(output.bleedMm)} mm of bleed`,
    output.trimMarks && 'trim marks',
  ].filter(Boolean);
  const layers = { none: '', ora: ', its layers as OpenRaster', tiff: ', its layers as TIFFs' }[
    output.layers
  ];
  const parts = [
    `${kind}, ${size}`,
    output.cropFrame && 'cropped',
    around.length > 0 && `with ${around.join(' and ')}`,
    `in ${profileName(output.profile)}`,
  ].filter(Boolean);
  return `${parts.join(', ')}${layers}.`;
}

/** `3,000 × 2,000 px` */
export function pixelsInWords(widthPx: number, heightPx: number): string {
  return `${widthPx.toLocaleString('en')} × ${heightPx.toLocaleString('en')} px`;
}
