import { writeFile } from 'node:fs/promises';
import { engineVersion } from '../../core/engineVersion.ts';
import { presetFromBuiltIn } from '../../core/presets/preset.ts';
import type { Recipe } from '../../core/recipes/recipe.ts';
import { changeParameters, createRecipe, keepState } from '../../core/recipes/recipeHistory.ts';
import { loadBuiltInPresets } from '../../main/store/builtInPresets.ts';
import { fingerprintPhoto } from '../../main/store/photoFingerprint.ts';

const firstMs = Date.UTC(2031, 3, 5, 6, 0);

/** A recipe of the Low Water preset for this photo, with as many states as wished, one a minute. */
export async function makeLongRecipe(
  photoPath: string,
  stateCount: number,
  engine = engineVersion,
): Promise<Recipe> {
  const builtIn = (await loadBuiltInPresets()).find(({ name }) => name === 'low-water')!;
  const momentOf = (index: number) => ({
    time: new Date(firstMs + index * 60_000).toISOString(),
    engineVersion: engine,
  });
  const preset = presetFromBuiltIn(builtIn, engine);
  let recipe = createRecipe(await fingerprintPhoto(photoPath), preset, momentOf(0));
  for (let index = 1; index < stateCount; index++) {
    const changed = changeParameters(recipe, { 'body.hold': (10 + (index % 70)) / 100 });
    recipe = keepState(changed, index % 50 === 0 ? `tide mark ${index}` : '', momentOf(index));
  }
  return recipe;
}

export async function writeRecipe(photoPath: string, recipe: Recipe): Promise<void> {
  await writeFile(`${photoPath}.oxgall.json`, `${JSON.stringify(recipe, null, 2)}\n`);
}
