import { z } from 'zod';
import { outputChangeSchema } from '../../../core/recipes/outputSettings.ts';
import type { HostCommands } from './hostCommands.ts';
import { parameters, path, photoId } from './inputParts.ts';
import { memorySchemas } from './memorySchemas.ts';
import { seriesSchemas } from './seriesSchemas.ts';

/**
 * What each command takes, checked on entry. Paths are only ever used after the host's own list of what
 * the user chose has been asked; sizes are bounded here so that no request can make the host hold more
 * than it means to.
 */

const callId = z.string().min(1).max(64);

const pixelCount = z.int().min(0).max(1_000_000);

const region = z.strictObject({
  xPx: pixelCount,
  yPx: pixelCount,
  widthPx: pixelCount.min(1),
  heightPx: pixelCount.min(1),
});

const printLongEdgeMm = z.number().min(10).max(10_000).optional();

const profile = z.union([z.enum(['keep', 'srgb', 'p3']), z.strictObject({ file: path })]);

const outputFormat = z.enum(['jpeg', 'png', 'tiff', 'webp']);

export const commandSchemas = {
  ...memorySchemas,
  ...seriesSchemas,
  startSession: z.strictObject({}),
  openPhoto: z.strictObject({ path }),
  awaitPhoto: z.strictObject({ photoId }),
  closePhoto: z.strictObject({ photoId }),
  paintStrata: z.strictObject({
    photoId,
    parameters,
    level: z.int().min(0).max(16),
    region: region.optional(),
    /** Names the place on the screen; a newer call for the same photo and view takes an older one's place. */
    view: z.string().min(1).max(40),
    /** Strata the interface already holds. */
    omit: z
      .array(z.enum(['ground', 'body', 'line']))
      .max(3)
      .optional(),
    /** Quick and coarse: the host chooses a coarser level and says which. */
    rough: z.boolean().optional(),
    printLongEdgeMm,
  }),
  paintSmallPicture: z.strictObject({
    photoId,
    parameters,
    /** About how long the long edge shall be; the host takes the nearest level that is no smaller. */
    longEdgePx: z.int().min(16).max(512),
    /** Names the place on the screen, as for paintStrata; small pictures without a view never displace one another. */
    view: z.string().min(1).max(40).optional(),
    printLongEdgeMm,
  }),
  readGamutTable: z.strictObject({ photoId, profile }),
  describeProfile: z.strictObject({ photoId, profile }),
  readScreenTable: z.strictObject({ photoId, screen: z.enum(['srgb', 'p3']).optional() }),
  savePainting: z.strictObject({
    photoId,
    parameters,
    /** A folder the user chose or opened a photo from, and a file name without folders. */
    folder: path,
    name: z.string().min(1).max(200),
    output: outputChangeSchema.optional(),
    /** `number` (the default) writes beside a file of that name; `replace` is for a file the user agreed to replace. */
    whenTaken: z.enum(['number', 'replace']).optional(),
  }),
  listFolder: z.strictObject({ path: path.optional(), wanted: z.literal('profiles').optional() }),
  chooseWithDialog: z.strictObject({
    kind: z.enum(['photo', 'folder', 'save', 'profile']),
    /** Where the dialog starts; only for `save`. */
    folder: path.optional(),
    name: z.string().min(1).max(200).optional(),
    format: outputFormat.optional(),
  }),
  listRecents: z.strictObject({}),
  forgetRecent: z.strictObject({ path }),
  openDemo: z.strictObject({}),
  revealFile: z.strictObject({ path }),
  cancelCall: z.strictObject({ callId }),
} as const satisfies { [Name in keyof HostCommands]: z.ZodType<HostCommands[Name]['input']> };

/** Largest body of each command in bytes; what is not named here takes the common limit. */
export const commonBodyLimitBytes = 64 * 1024;
export type CheckedInput<Name extends keyof HostCommands> = z.output<(typeof commandSchemas)[Name]>;
