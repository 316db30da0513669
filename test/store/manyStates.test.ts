import { expect, it } from 'vitest';
import { changeParameters, keepState } from '../../core/recipes/recipeHistory.ts';
import { moment } from '../recipes/sampleRecipes.ts';
import { storeWithPhoto } from './storeFolders.ts';

/** Milliseconds of the quickest of several openings: the others measure what else the machine was doing. */
async function quickestLoadMs(states: number): Promise<number> {
  const { store, photoPath, photo, recipe } = await storeWithPhoto();
  let longer = recipe;
  for (let at = 1; at < states; at++)
    longer = keepState(
      changeParameters(longer, { 'body.brush': `${1 + (at % 50)}mm` }),
      `state ${at}`,
      moment(at),
    );
  expect((await store.save(photoPath, longer, { version: null })).kind).toBe('saved');
  let quickestMs = Number.POSITIVE_INFINITY;
  for (let round = 0; round < 7; round++) {
    const startMs = performance.now();
    const loaded = await store.load(photoPath, photo);
    quickestMs = Math.min(quickestMs, performance.now() - startMs);
    expect(loaded.kind === 'open' && loaded.recipe.histories[0].states).toHaveLength(states);
  }
  return quickestMs;
}

it('a photo with 500 states opens at most 100 ms later than one with a single state', async () => {
  const oneMs = await quickestLoadMs(1);
  const manyMs = await quickestLoadMs(500);
  process.stdout.write(`one state ${oneMs.toFixed(1)} ms, 500 states ${manyMs.toFixed(1)} ms\n`);
  expect(manyMs - oneMs).toBeLessThan(100);
});
