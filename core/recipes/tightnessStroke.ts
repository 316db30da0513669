import { z } from 'zod';

const point = z
  .tuple([z.number().min(0).max(1), z.number().min(0).max(1)])
  .meta({ description: 'x of the width, y of the height, from the upper left.' });

export const tightnessStrokeSchema = z
  .looseObject({
    points: z.array(point).min(1),
    radiusPermille: z.number().gt(0).max(1000).meta({ description: 'Per mille of the long edge.' }),
    value: z.number().min(-1).max(1).meta({ description: '−1 loose, +1 tight.' }),
    hardness: z.number().min(0).max(1).meta({ description: '0 fades from the middle, 1 has a sharp rim.' }),
  })
  .meta({
    id: 'tightnessStroke',
    description: 'One stroke of the tightness map, the same at any size of the picture.',
  });

/** One stroke of the tightness map. Later strokes lie over earlier ones. */
export type TightnessStroke = z.infer<typeof tightnessStrokeSchema>;
