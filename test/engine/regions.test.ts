import { afterAll, beforeAll, describe, expect, it } from 'vitest';
import type { Parameters } from '../../core/parameters/table.ts';
import type { Rect } from '../../core/pixels/photo.ts';
import type { Engine } from '../../main/engine/engineApi.ts';
import { createEngine } from '../../main/engine/paintEngine.ts';
import { cropped, differingStrata, parametersWith, testPhoto } from './pictures.ts';

let engine: Engine;
beforeAll(async () => {
  engine = await createEngine({ workers: 2, tileSize: { widthPx: 130, heightPx: 62 } });
});
afterAll(() => engine.close());

const rect = (xPx: number, yPx: number, widthPx: number, heightPx: number): Rect => ({
  xPx,
  yPx,
  widthPx,
  heightPx,
});

/** Corners, edges, odd places and sizes, single pixels, the whole. */
const regions = [
  rect(0, 0, 417, 289),
  rect(0, 0, 100, 80),
  rect(317, 209, 100, 80),
  rect(101, 77, 131, 99),
  rect(200, 0, 57, 289),
  rect(0, 133, 417, 3),
  rect(416, 288, 1, 1),
  rect(0, 0, 1, 1),
  rect(255, 127, 1, 1),
  rect(60, 60, 2, 140),
];

const looks: [string, Partial<Parameters>][] = [
  ['multi-scale, thin ink from the body', { 'body.brush': '48px', 'line.width': '2px' }],
  [
    'multi-scale, wide ink from the body',
    { 'body.brush': '25px', 'line.width': '13px', 'line.threshold': 0.5 },
  ],
  [
    'multi-scale, wide ink from the photo',
    { 'body.brush': '13px', 'line.width': '19px', 'line.source': 'photo', 'line.softness': 1 },
  ],
  ['relief of fine bristle', { 'body.brush': '24px', 'relief.strength': 0.7, 'relief.bristle': '2px' }],
  [
    'relief of wide bristle',
    { 'body.method': 'grain-wise', 'body.brush': '9px', 'relief.strength': 0.7, 'relief.bristle': '9px' },
  ],
  ['grain-wise', { 'body.method': 'grain-wise', 'body.brush': '10px', 'body.pull': 2 }],
  ['sectors', { 'body.method': 'sectors', 'body.brush': '9px' }],
  ['quadrant', { 'body.method': 'quadrant', 'body.brush': '22px' }],
  ['bilateral', { 'body.method': 'bilateral', 'body.brush': '12px' }],
];

describe.each(looks)('a region painted with %s', (_name, look) => {
  it.each([0, 1, 2])('equals the same region of the whole at level %d', async (level) => {
    const parameters = parametersWith(look);
    const held = await engine.open(testPhoto(417, 289, 4));
    const { strata: whole } = await engine.paintStrata(held, parameters, { level });
    for (const full of regions) {
      const side = 2 ** level;
      const xPx = Math.floor(full.xPx / side);
      const yPx = Math.floor(full.yPx / side);
      const widthPx = Math.max(1, Math.min(whole.widthPx - xPx, Math.ceil(full.widthPx / side)));
      const heightPx = Math.max(1, Math.min(whole.heightPx - yPx, Math.ceil(full.heightPx / side)));
      const region = rect(xPx, yPx, widthPx, heightPx);
      const { strata } = await engine.paintStrata(held, parameters, { level, region });
      expect(differingStrata(strata, cropped(whole, region)), JSON.stringify(region)).toEqual([]);
    }
    held.close();
  });
});

describe('regions', () => {
  it('may come first, in any order: nothing depends on what was painted before', async () => {
    const parameters = parametersWith({ 'body.brush': '40px' });
    const region = rect(91, 33, 120, 71);
    const first = await engine.open(testPhoto(417, 289));
    const { strata: early } = await engine.paintStrata(first, parameters, { level: 0, region });
    first.close();
    const second = await engine.open(testPhoto(417, 289));
    const { strata: whole } = await engine.paintStrata(second, parameters, { level: 0 });
    second.close();
    expect(differingStrata(early, cropped(whole, region))).toEqual([]);
  });

  it('hold the ground’s own samples at level 0', async () => {
    const photo = testPhoto(60, 40, 4, 16);
    const held = await engine.open(photo);
    const region = rect(7, 5, 11, 9);
    const { strata } = await engine.paintStrata(held, parametersWith(), { level: 0, region });
    held.close();
    for (let y = 0; y < 9; y++)
      for (let i = 0; i < 11 * 4; i++)
        expect(strata.ground[y * 44 + i]).toBe(photo.pixels[((5 + y) * 60 + 7) * 4 + i]);
  });

  it('outside the level are refused by name of what was expected', async () => {
    const held = await engine.open(testPhoto(60, 40));
    for (const region of [rect(-1, 0, 5, 5), rect(58, 0, 3, 3), rect(0, 39, 1, 2), rect(3, 3, 0, 4)])
      expect(() => engine.paintStrata(held, parametersWith(), { level: 0, region })).toThrow(
        /Expected a region inside 60 × 40 px, received/,
      );
    held.close();
  });
});
