import { z } from 'zod';
import { seriesSettingsSchema } from '../../../core/series/seriesDocument.ts';
import { path } from './inputParts.ts';
import type { RunCommands } from './runCommands.ts';
import type { SeriesCommands } from './seriesCommands.ts';

const seriesId = z.string().min(1).max(64);
const frameId = z.string().min(1).max(1024);

/** What each command of the series takes; see the other commands. */
export const seriesSchemas = {
  openSeries: z.strictObject({ path }),
  readSeries: z.strictObject({ seriesId }),
  closeSeries: z.strictObject({ seriesId }),
  changeSeries: z.strictObject({ seriesId, change: seriesSettingsSchema.partial() }),
  paintFramePicture: z.strictObject({
    seriesId,
    frameId,
    /** About how long the long edge shall be. */
    longEdgePx: z.int().min(16).max(1600),
    rough: z.boolean(),
  }),
  startRun: z.strictObject({ seriesId, outFolder: path }),
  pauseRun: z.strictObject({ seriesId }),
  resumeRun: z.strictObject({ seriesId }),
  cancelRun: z.strictObject({ seriesId }),
  prioritise: z.strictObject({ seriesId, frameIds: z.array(frameId).max(2000) }),
  readRun: z.strictObject({ seriesId }),
  makeProof: z.strictObject({
    seriesId,
    folder: path,
    name: z.string().min(1).max(200),
    format: z.enum(['pdf', 'png']),
    paper: z.string().min(1).max(40),
    landscape: z.boolean(),
    columns: z.int().min(1).max(24),
    title: z.string().max(200),
  }),
} as const satisfies {
  [Name in keyof (SeriesCommands & RunCommands)]: z.ZodType<(SeriesCommands & RunCommands)[Name]['input']>;
};
