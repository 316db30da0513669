import { afterAll, beforeAll, describe, expect, it } from 'vitest';
import { ciede2000 } from '../../core/colour/ciede2000.ts';
import { labOfSrgb, type Triple } from '../../core/colour/lab.ts';
import { imageOf, type ReferenceImage, sampleAt } from '../../core/kernels/reference/referenceImage.ts';
import type { Parameters } from '../../core/parameters/table.ts';
import type { Engine } from '../../main/engine/engineApi.ts';
import { createEngine } from '../../main/engine/paintEngine.ts';
import { photographs } from '../fixtures/photographs.ts';
import { mirror, quarterTurn, seededNormal, testPicture } from '../kernels/testPictures.ts';
import { parametersWith, photographAt, photoOf } from './pictures.ts';

let engine: Engine;
beforeAll(async () => {
  engine = await createEngine({ workers: 2 });
});
afterAll(() => engine.close());

/** The body of a picture, painted from 16 bits. */
async function paint(image: ReferenceImage, changes: Partial<Parameters>): Promise<ReferenceImage> {
  const held = await engine.open(photoOf(image, 3, 16));
  const { strata } = await engine.paintStrata(held, parametersWith(changes), { level: 0 });
  held.close();
  return { ...image, values: Float64Array.from(strata.body, (value) => value / 65535) };
}

const methods: [string, Partial<Parameters>][] = [
  ['multi-scale', { 'body.method': 'multi-scale', 'body.brush': '32px' }],
  ['grain-wise', { 'body.method': 'grain-wise', 'body.brush': '10px' }],
  ['sectors', { 'body.method': 'sectors', 'body.brush': '10px' }],
  ['quadrant', { 'body.method': 'quadrant', 'body.brush': '10px' }],
  ['bilateral', { 'body.method': 'bilateral', 'body.brush': '10px', 'body.hold': 0.2 }],
];

/** 0…1 in steps that both depths and fixed point hold to 2e-5. */
const step = 1 / 32766;

describe.each(methods)('%s', (name, look) => {
  it('keeps constant pictures constant', async () => {
    for (const rgb of [
      [0, 0, 0],
      [1, 1, 1],
      [0.2, 0.7, 0.45],
    ]) {
      const flat = imageOf(75, 58, 3, (_x, _y, c) => rgb[c]);
      const { values } = await paint(flat, look);
      for (let c = 0; c < 3; c++) {
        const channel = values.filter((_, i) => i % 3 === c);
        expect(Math.abs(channel[0] - rgb[c])).toBeLessThan(step);
        expect(channel.every((value) => value === channel[0])).toBe(true);
      }
    }
  });

  it('stays within the range of each channel', async () => {
    const picture = testPicture(160, 120);
    const image = imageOf(160, 120, 3, (x, y, c) => 0.2 + 0.2 * c + 0.3 * sampleAt(picture, x, y, c));
    const { values } = await paint(image, look);
    for (let c = 0; c < 3; c++) {
      const [least, greatest] = [Math.min, Math.max].map((pick) =>
        [...image.values].filter((_, i) => i % 3 === c).reduce((a, b) => pick(a, b)),
      );
      const own = values.filter((_, i) => i % 3 === c);
      expect(Math.min(...own)).toBeGreaterThanOrEqual(least - step);
      expect(Math.max(...own)).toBeLessThanOrEqual(greatest + step);
    }
  });

  it('leaves an ideal step a step, at the same place, upright and level', async () => {
    for (const isUpright of [true, false]) {
      const edge = imageOf(120, 120, 3, (x, y) => ((isUpright ? x : y) < 51 ? 0.25 : 0.75));
      const painted = await paint(edge, look);
      for (let along = 0; along < 120; along++)
        for (const across of [47, 50, 51, 54]) {
          const value = isUpright ? sampleAt(painted, across, along) : sampleAt(painted, along, across);
          expect(Math.abs(value - (across < 51 ? 0.25 : 0.75))).toBeLessThan(0.02);
        }
    }
  });

  it('flattens texture: noise around a tone falls to a good part of what it was', async () => {
    const normal = seededNormal(9);
    const noisy = imageOf(128, 96, 3, () => 0.5 + 0.04 * normal());
    const deviation = (image: ReferenceImage) =>
      Math.sqrt(image.values.reduce((sum, value) => sum + (value - 0.5) ** 2, 0) / image.values.length);
    expect(deviation(await paint(noisy, look)) / deviation(noisy)).toBeLessThan(0.5);
  });

  it('turns and mirrors with the picture', async () => {
    // Both edges a multiple of every level's blocks: halving and blocks then turn with the picture.
    const image = testPicture(192, 128);
    const painted = await paint(image, look);
    const pairs = [
      [await paint(quarterTurn(image), look), quarterTurn(painted)],
      [await paint(mirror(image), look), mirror(painted)],
    ];
    for (const [own, expected] of pairs) {
      const square = own.values.reduce((sum, value, i) => sum + (value - expected.values[i]) ** 2, 0);
      // What differs is rounding: of sums, and of grain that lies on the border between two kernels. Ties of
      // the quadrants go to the first in a fixed order, which does not turn.
      expect(-10 * Math.log10(square / own.values.length), name).toBeGreaterThan(50);
    }
  });
});

describe('half-size paint with the measured noise floors', () => {
  /** Reduced as printers' proofs are: means of 2 × 2 in encoded values. */
  const halved = (image: ReferenceImage) =>
    imageOf(image.widthPx >> 1, image.heightPx >> 1, 3, (x, y, c) => {
      const at = (dx: number, dy: number) => sampleAt(image, 2 * x + dx, 2 * y + dy, c);
      return (at(0, 0) + at(1, 0) + at(0, 1) + at(1, 1)) / 4;
    });
  const labAt = (image: ReferenceImage, i: number) =>
    labOfSrgb([...image.values.subarray(3 * i, 3 * i + 3)] as unknown as Triple);

  it.each([
    ['landscape', photographs.frenchAlpineLandscape],
    ['aerial view', photographs.airplaneFromAbove],
  ])('predicts the whole: %s', async (_name, path) => {
    const photo = await photographAt(path, 1800);
    const whole = imageOf(
      1800,
      photo.heightPx & ~1,
      3,
      (x, y, c) => photo.pixels[(y * 1800 + x) * 3 + c] / 255,
    );
    const look = { 'body.brush': '16permille' } as const;
    const reduced = halved(await paint(whole, look));
    const half = await paint(halved(whole), look);
    const apart = Float64Array.from({ length: half.widthPx * half.heightPx }, (_, i) =>
      ciede2000(labAt(reduced, i), labAt(half, i)),
    ).sort();
    expect(apart.reduce((sum, value) => sum + value, 0) / apart.length).toBeLessThanOrEqual(1);
    expect(apart[Math.floor(apart.length * 0.95)]).toBeLessThanOrEqual(3);
  });
});
