import { z } from 'zod';
import { builtInPresetFileSchema } from '../presets/builtInPreset.ts';
import { presetSchema } from '../presets/preset.ts';
import { presetBundleSchema } from '../presets/presetBundle.ts';
import { seriesSchema } from '../series/seriesDocument.ts';
import { recipeSchema } from './recipe.ts';

/** Base name of the shipped file → the definition it is made from. */
const definitions = {
  recipe: recipeSchema,
  preset: presetSchema,
  presets: presetBundleSchema,
  'built-in-preset': builtInPresetFileSchema,
  series: seriesSchema,
};

/**
 * The JSON Schemas (draft 2020-12) of everything we store, made from the one definition.
 * @returns file name → schema
 */
export function jsonSchemas(): Record<string, Record<string, unknown>> {
  const entries = Object.entries(definitions).map(([name, definition]) => {
    const { $schema, ...schema } = z.toJSONSchema(definition, { target: 'draft-2020-12', io: 'input' });
    return [`${name}.schema.json`, { $schema, $id: `urn:oxgall:${name}:1`, ...schema }] as const;
  });
  return Object.fromEntries(entries);
}
