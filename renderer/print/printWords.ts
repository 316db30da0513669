import type { PrintPlan } from '../../core/print/printPlan.ts';
import type { OutputSettings } from '../../core/recipes/outputSettings.ts';
import type { OutputFormatName } from '../../main/host/api/hostCommands.ts';
import type { Size } from '../geometry/viewTransform.ts';
import { aspectInWords } from './cropAspects.ts';
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
export function printSentence(photo: Size, output: OutputSettings): string {
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
    isCropped(photo, plan) && `cropped to ${aspectInWords(output.cropFrame!.aspect)}`,
    around.length > 0 && `with ${around.join(' and ')}`,
    `in ${profileName(output.profile)}`,
  ].filter(Boolean);
  return `${parts.join(', ')}${layers}.`;
}

function isCropped(photo: Size, { crop }: PrintPlan): boolean {
  return crop.widthPx < photo.widthPx || crop.heightPx < photo.heightPx;
}

/** What the pixels of the file hold besides the print. */
export function aroundInWords({ bleedMm, trimMarks }: OutputSettings): string {
  const around = [bleedMm > 0 && 'bleed', trimMarks && 'margin'].filter(Boolean);
  return around.length > 0 ? ` with ${around.join(' and ')}` : '';
}

/** `3,000 × 2,000 px` */
export function pixelsInWords(widthPx: number, heightPx: number): string {
  return `${widthPx.toLocaleString('en')} × ${heightPx.toLocaleString('en')} px`;
}
