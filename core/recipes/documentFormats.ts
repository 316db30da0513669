import { type Preset, presetSchema, presetSchemaVersion } from '../presets/preset.ts';
import { type PresetBundle, presetBundleSchema } from '../presets/presetBundle.ts';
import type { DocumentFormat } from './openDocument.ts';
import { type Recipe, recipeSchema, recipeSchemaVersion } from './recipe.ts';

export const recipeFormat: DocumentFormat<Recipe> = {
  format: 'oxgall-recipe',
  word: 'recipe',
  latest: recipeSchemaVersion,
  schema: recipeSchema,
  migrations: [],
};

export const presetFormat: DocumentFormat<Preset> = {
  format: 'oxgall-preset',
  word: 'preset',
  latest: presetSchemaVersion,
  schema: presetSchema,
  migrations: [],
};

export const presetBundleFormat: DocumentFormat<PresetBundle> = {
  format: 'oxgall-presets',
  word: 'file of presets',
  latest: presetSchemaVersion,
  schema: presetBundleSchema,
  migrations: [],
};
