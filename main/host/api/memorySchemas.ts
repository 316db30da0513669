import { z } from 'zod';
import { presetNameSchema } from '../../../core/presets/preset.ts';
import { stateIdSchema } from '../../../core/presets/state.ts';
import { outputChangeSchema } from '../../../core/recipes/outputSettings.ts';
import { parameters, path, photoId } from './inputParts.ts';
import type { MemoryCommands } from './memoryCommands.ts';

const note = z.string().max(2000);
const title = z.string().trim().min(1).max(120);
const state = { preset: presetNameSchema, stateId: stateIdSchema };
const work = z.strictObject({ ...state, parameters, output: outputChangeSchema.optional() });
/** A recipe or a file of presets; larger ones are none of ours. */
const documentText = z.string().max(8 * 2 ** 20);

/** What each command of the memory takes; see the other commands. */
export const memorySchemas = {
  readMemory: z.strictObject({ photoId }),
  layWork: z.strictObject({ photoId, work }),
  keepState: z.strictObject({ photoId, work, note }),
  returnToState: z.strictObject({ photoId, ...state }),
  layPreset: z.strictObject({ photoId, preset: presetNameSchema, stateId: stateIdSchema.optional() }),
  writeBeside: z.strictObject({
    photoId,
    ...state,
    note: note.optional(),
    branch: z.string().max(120).optional(),
  }),
  repaintWithEngine: z.strictObject({ photoId }),
  takeLook: z.strictObject({ photoId, recipeText: documentText }),
  keepBoth: z.strictObject({ photoId }),
  listPresets: z.strictObject({}),
  createPreset: z.strictObject({ title, parameters, note }),
  addToPreset: z.strictObject({ name: presetNameSchema, parameters, note }),
  duplicatePreset: z.strictObject({ name: presetNameSchema, title: title.optional() }),
  renamePreset: z.strictObject({ name: presetNameSchema, title }),
  describePreset: z.strictObject({ name: presetNameSchema, description: note }),
  removePreset: z.strictObject({ name: presetNameSchema }),
  restorePreset: z.strictObject({ binId: z.string().min(1).max(200) }),
  exportPresets: z.strictObject({
    names: z.array(presetNameSchema).min(1).max(500),
    folder: path,
    fileName: z.string().min(1).max(200),
  }),
  importPresets: z.strictObject({ text: documentText, fileName: z.string().min(1).max(400) }),
} as const satisfies { [Name in keyof MemoryCommands]: z.ZodType<MemoryCommands[Name]['input']> };

/** Bodies that may be larger than the common limit. */
export const documentBodyLimitBytes = 9 * 2 ** 20;
export const carriesDocument: ReadonlySet<string> = new Set(['takeLook', 'importPresets', 'changeSeries']);
