import { dirname, isAbsolute, relative, resolve, sep } from 'node:path';
import type { Parameters } from '../../core/parameters/table.ts';
import type { Moment } from '../../core/presets/preset.ts';
import type { OutputSettings } from '../../core/recipes/outputSettings.ts';
import type { Recipe } from '../../core/recipes/recipe.ts';
import { changeParameters, noteDelivery } from '../../core/recipes/recipeHistory.ts';

/** A file that was written, with what it was painted from. */
export interface WrittenFile {
  path: string;
  sha256: string;
  pixelsSha256: string;
  /** Of the photo as it was painted. */
  photoSha256: string;
  parameters: Parameters;
  /** All settings it was made with; the recipe's own stay as they are. */
  output: OutputSettings;
}

/**
 * Notes a delivered file in its photo's recipe. What it was painted from is laid on the easel, and kept as a state
 * where none holds it.
 * @param file its path is stored from the photo's folder where it lies in it or below, with `/` on every system
 */
export function noteWrittenFile(
  recipe: Recipe,
  photoPath: string,
  file: WrittenFile,
  moment: Moment,
): Recipe {
  const { parameters, path, ...facts } = file;
  const place = relative(dirname(resolve(photoPath)), resolve(path));
  const isBelow = !isAbsolute(place) && place.split(sep)[0] !== '..';
  return noteDelivery(
    changeParameters(recipe, parameters),
    { ...facts, path: isBelow ? place.split(sep).join('/') : resolve(path) },
    moment,
  );
}
