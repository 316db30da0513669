import { describe, expect, it } from 'vitest';
import { deliveredPaintings, judgeDelivery } from '../../core/recipes/deliveryCheck.ts';
import {
  changeOutput,
  changeParameters,
  noteDelivery,
  setTightness,
} from '../../core/recipes/recipeHistory.ts';
import { heronPhoto, moment, sampleRecipe } from './sampleRecipes.ts';

const pixels = 'ef'.repeat(32);
const file = { path: 'painted/heron.tif', sha256: 'cd'.repeat(32), pixelsSha256: pixels };
const eye = { points: [[0.5, 0.25] as [number, number]], radiusPermille: 20, value: 1, hardness: 0.5 };

describe('a delivery', () => {
  const painted = setTightness(changeParameters(sampleRecipe(), { 'body.brush': '5mm' }), [eye]);
  const delivered = noteDelivery(changeOutput(painted, { ppi: 240 }), file, moment(1));
  const later = changeOutput(setTightness(changeParameters(delivered, { 'body.brush': '9mm' }), []), {
    ppi: 72,
  });

  it('tells what it was painted with, whatever was done since', () => {
    expect(deliveredPaintings(later)).toMatchObject([
      { preset: 'low-water', parameters: { 'body.brush': '5mm' }, tightness: [eye], output: { ppi: 240 } },
    ]);
  });

  const [{ delivery }] = deliveredPaintings(later);
  const today = { photoSha256: heronPhoto.sha256, engineVersion: '1', pixelsSha256: pixels };
  it.each([
    ['identical', {}],
    ['identical', { engineVersion: '2' }],
    ['engine-differs', { engineVersion: '2', pixelsSha256: 'aa'.repeat(32) }],
    ['differs', { pixelsSha256: 'aa'.repeat(32) }],
    ['photo-changed', { photoSha256: 'aa'.repeat(32) }],
  ])('is %s with %j', (verdict, change) => {
    expect(judgeDelivery(delivery, { ...today, ...change })).toBe(verdict);
  });

  it('without a hash of its pixels can only be said to be so', () => {
    expect(judgeDelivery({ ...delivery, pixelsSha256: undefined }, today)).toBe('not-recorded');
  });
});
