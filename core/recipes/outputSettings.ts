import { z } from 'zod';
import { defaultPrintLongEdgeMm } from '../parameters/lengths.ts';
import { canonicalJson } from './canonicalJson.ts';

const fraction = z.number().min(0).max(1);

export const outputSettingsSchema = z
  .looseObject({
    printLongEdgeMm: z.number().min(10).max(20_000).meta({ description: 'Brush and ink widths follow it.' }),
    format: z.enum(['jpeg', 'png', 'tiff', 'webp']),
    depth: z.union([z.literal(8), z.literal(16)]).meta({ description: 'Bits per channel.' }),
    quality: z.int().min(1).max(100).meta({ description: 'For JPEG and WebP.' }),
    ppi: z.number().min(1).max(9600).meta({ description: 'Pixels per inch.' }),
    bleedMm: z.number().min(0).max(100).meta({ description: 'Mirrored extension on every side.' }),
    profile: z
      .union([z.enum(['keep', 'srgb', 'p3']), z.looseObject({ file: z.string().min(1) })])
      .meta({ description: "The photo's own, sRGB, Display P3, or an ICC file." }),
    intent: z.enum(['perceptual', 'relative', 'saturation', 'absolute']),
    blackPointCompensation: z.boolean(),
    isResampled: z
      .boolean()
      .optional()
      .meta({ description: 'Brought to `ppi` before painting; its own pixels otherwise.' }),
    cropFrame: z
      .looseObject({ aspect: z.number().min(0.01).max(100), x01: fraction, y01: fraction })
      .optional()
      .meta({ description: 'A frame of that width over height, its middle there.' }),
    trimMarks: z.boolean().optional().meta({ description: 'Lines where the paper is to be cut.' }),
    metadata: z.enum(['all', 'essential', 'none']),
    layers: z.enum(['none', 'ora', 'tiff']).meta({ description: 'Strata as layers beside the picture.' }),
  })
  .meta({ id: 'outputSettings', description: 'What file to make of the painting.' });

/** What file to make of a painting. */
export type OutputSettings = z.infer<typeof outputSettingsSchema>;

/** What a photo nobody has worked on is saved as by itself: an exact file, as deep as the photo. */
export function outputForPhoto(depth: 8 | 16): OutputSettings {
  return { ...defaultOutputSettings(), format: 'png', depth };
}

/** Some of the settings; those that are missing stay, and a crop frame of null is taken away. */
export const outputChangeSchema = outputSettingsSchema
  .partial()
  .extend({ cropFrame: outputSettingsSchema.shape.cropFrame.nullable() });

/** Some of the settings, as they shall be. */
export type OutputChange = z.infer<typeof outputChangeSchema>;

/**
 * Changes some settings.
 * @param output not modified
 * @param change keys that are missing or undefined stay as they are
 * @returns the settings themselves where nothing is different
 */
export function changedOutput(output: OutputSettings, change: OutputChange): OutputSettings {
  const { cropFrame = output.cropFrame, ...plain } = change;
  const { cropFrame: _, ...before } = output;
  const told = Object.entries(plain).filter(([, value]) => value !== undefined);
  const changed: OutputSettings = { ...before, ...Object.fromEntries(told), ...(cropFrame && { cropFrame }) };
  return canonicalJson(changed) === canonicalJson(output) ? output : changed;
}

/** The settings of a photo nobody has set anything for. */
export function defaultOutputSettings(): OutputSettings {
  return {
    printLongEdgeMm: defaultPrintLongEdgeMm,
    format: 'jpeg',
    depth: 8,
    quality: 92,
    ppi: 300,
    bleedMm: 0,
    profile: 'keep',
    intent: 'relative',
    blackPointCompensation: true,
    metadata: 'essential',
    layers: 'none',
  };
}
