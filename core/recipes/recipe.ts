import { z } from 'zod';
import { storedParametersSchema } from '../presets/parametersSchema.ts';
import { marginsSchema, presetNameSchema } from '../presets/preset.ts';
import { stateIdSchema, stateSchema, timeSchema } from '../presets/state.ts';
import { contentIdPattern } from './contentId.ts';
import { outputSettingsSchema } from './outputSettings.ts';
import { tightnessStrokeSchema } from './tightnessStroke.ts';

/** The newest schema of recipes this version writes. */
export const recipeSchemaVersion = 1;

const hashSchema = z.string().regex(contentIdPattern);

const tightnessIdSchema = z
  .union([hashSchema, z.null()])
  .meta({ description: 'Key of tightnessMaps; null for no strokes.' });

export const fingerprintSchema = z
  .looseObject({
    fileName: z.string().min(1).meta({ description: 'Name of the photo when the recipe was last saved.' }),
    sha256: hashSchema.meta({ description: "SHA-256 of the photo's bytes." }),
    sizeBytes: z.int().min(0),
  })
  .meta({ description: 'Tells the photo again after it was moved or renamed.' });

export const useSchema = z
  .looseObject({
    stateId: stateIdSchema,
    time: timeSchema,
    engineVersion: z.string(),
    tightnessId: tightnessIdSchema,
  })
  .meta({ description: 'A state was laid on this photo.' });

export const deliverySchema = z
  .looseObject({
    path: z.string().min(1).meta({ description: "From the photo's folder where it lies below it." }),
    sha256: hashSchema.meta({ description: "SHA-256 of the delivered file's bytes." }),
    pixelsSha256: hashSchema.optional().meta({ description: 'SHA-256 of its decoded, interleaved pixels.' }),
    photoSha256: hashSchema.meta({ description: 'SHA-256 of the photo it was painted from.' }),
    stateId: stateIdSchema,
    tightnessId: tightnessIdSchema,
    output: outputSettingsSchema,
    engineVersion: z.string(),
    time: timeSchema,
  })
  .meta({ description: 'A file that left the house, with all that is needed to paint it again.' });

export const historySchema = z
  .looseObject({
    preset: presetNameSchema,
    title: z.string().min(1),
    states: z.array(stateSchema).min(1).meta({ description: 'Every state ever kept here, oldest first.' }),
    margins: marginsSchema,
    uses: z.array(useSchema),
    deliveries: z.array(deliverySchema),
  })
  .meta({ description: 'What one preset has been on this photo.' });

export const workSchema = z
  .looseObject({
    preset: presetNameSchema,
    stateId: stateIdSchema,
    changes: storedParametersSchema,
    tightness: z.array(tightnessStrokeSchema),
    output: outputSettingsSchema,
  })
  .meta({ description: 'What lies on the easel: a state, the changes not kept yet, strokes, output.' });

const recipeFields = z
  .looseObject({
    format: z.literal('oxgall-recipe'),
    schema: z.literal(recipeSchemaVersion),
    photo: fingerprintSchema,
    work: workSchema,
    histories: z.array(historySchema).min(1),
    tightnessMaps: z
      .record(z.string(), z.array(tightnessStrokeSchema))
      .meta({ description: 'Strokes that a use or a delivery refers to, by the hash of their content.' }),
  })
  .meta({
    title: 'Oxgall recipe',
    description: 'All that is known of one photo: look, history, deliveries.',
  });

/** The sidecar of one photo. */
export type Recipe = z.infer<typeof recipeFields>;
/** The part of a recipe that undo and redo move; all the rest only grows. */
export type Work = z.infer<typeof workSchema>;
export type PresetHistory = z.infer<typeof historySchema>;
export type StateUse = z.infer<typeof useSchema>;
export type Delivery = z.infer<typeof deliverySchema>;
export type PhotoFingerprint = z.infer<typeof fingerprintSchema>;

/** Fields as above, and every reference inside the recipe leads somewhere. */
export const recipeSchema = recipeFields.superRefine((recipe, context) => {
  const refuse = (path: (string | number)[], message: string) =>
    context.addIssue({ code: 'custom', path, message });
  const names = recipe.histories.map((history) => history.preset);
  if (new Set(names).size < names.length) refuse(['histories'], 'each preset once');
  const current = recipe.histories.find((history) => history.preset === recipe.work.preset);
  if (!current) refuse(['work', 'preset'], 'a preset among the histories');
  else if (!current.states.some((state) => state.id === recipe.work.stateId))
    refuse(['work', 'stateId'], `a state of ${current.title}`);
  recipe.histories.forEach((history, at) => {
    const ids = new Set(history.states.map((state) => state.id));
    for (const list of ['uses', 'deliveries'] as const)
      history[list].forEach((entry, place) => {
        const path = ['histories', at, list, place];
        if (!ids.has(entry.stateId)) refuse([...path, 'stateId'], `a state of ${history.title}`);
        const { tightnessId } = entry;
        if (tightnessId !== null && !Object.hasOwn(recipe.tightnessMaps, tightnessId))
          refuse([...path, 'tightnessId'], 'a key of tightnessMaps');
      });
  });
});
