import { z } from 'zod';
import { defaultPrintLongEdgeMm } from '../parameters/lengths.ts';

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
