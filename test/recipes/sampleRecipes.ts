import { defaultParameters } from '../../core/parameters/table.ts';
import { type Moment, makePreset, type Preset } from '../../core/presets/preset.ts';
import { makeState } from '../../core/presets/state.ts';
import type { PhotoFingerprint, Recipe } from '../../core/recipes/recipe.ts';
import { createRecipe } from '../../core/recipes/recipeHistory.ts';

/** The moment that lies so many seconds after the first one, under the engine named. */
export function moment(seconds: number, engineVersion = '1'): Moment {
  return { time: new Date(Date.UTC(2031, 3, 5, 6, 7, seconds)).toISOString(), engineVersion };
}

/** A preset with one state. */
export function samplePreset(title = 'Low Water', brush: `${number}mm` = '3.2mm'): Preset {
  const parameters = { ...defaultParameters(), 'body.brush': brush };
  const state = makeState({ parameters, engineVersion: '1', note: '', time: '', parent: null }, 1);
  return makePreset({ title, states: [state] });
}

export const heronPhoto: PhotoFingerprint = {
  fileName: 'heron.jpg',
  sha256: 'ab'.repeat(32),
  sizeBytes: 1234,
};

/** A recipe with one state, for the photo of the heron. */
export function sampleRecipe(preset: Preset = samplePreset()): Recipe {
  return createRecipe(heronPhoto, preset, moment(0));
}
