import { afterAll, beforeAll, describe, expect, it } from 'vitest';
import { ciede2000 } from '../../core/colour/ciede2000.ts';
import { labOfSrgb } from '../../core/colour/lab.ts';
import type { Parameters } from '../../core/parameters/table.ts';
import type { DecodedPhoto } from '../../core/pixels/photo.ts';
import type { Engine } from '../../main/engine/engineApi.ts';
import { createEngine } from '../../main/engine/paintEngine.ts';
import { photographs } from '../fixtures/photographs.ts';
import { edgeRatio, paintFigures } from '../oracles/paintFigures.ts';
import { parametersWith, photographAt } from './pictures.ts';

let engine: Engine;
beforeAll(async () => {
  engine = await createEngine({ workers: 2 });
});
afterAll(() => engine.close());

async function painted(photo: DecodedPhoto, changes: Partial<Parameters>): Promise<DecodedPhoto> {
  const held = await engine.open(photo);
  const picture = await engine.paintPicture(held, parametersWith({ 'line.strength': 0, ...changes }));
  const pixels = picture.pixels.slice();
  picture.release();
  held.close();
  return { ...photo, pixels };
}

function halved(photo: DecodedPhoto): DecodedPhoto {
  const { widthPx, channels, pixels } = photo;
  const [width, height] = [photo.widthPx >> 1, photo.heightPx >> 1];
  const half = new Uint8Array(width * height * channels);
  for (let y = 0; y < height; y++)
    for (let x = 0; x < width; x++)
      for (let c = 0; c < channels; c++) {
        const at = (dx: number, dy: number) => pixels[((2 * y + dy) * widthPx + 2 * x + dx) * channels + c];
        half[(y * width + x) * channels + c] = Math.round((at(0, 0) + at(1, 0) + at(0, 1) + at(1, 1)) / 4);
      }
  return { widthPx: width, heightPx: height, channels, pixels: half };
}

function differences(a: DecodedPhoto, b: DecodedPhoto): number[] {
  const labAt = ({ pixels }: DecodedPhoto, i: number) =>
    labOfSrgb([pixels[i] / 255, pixels[i + 1] / 255, pixels[i + 2] / 255]);
  return Array.from({ length: a.widthPx * a.heightPx }, (_, i) =>
    ciede2000(labAt(a, 3 * i), labAt(b, 3 * i)),
  ).sort((x, y) => x - y);
}

describe('multi-scale paint', () => {
  it.each([
    ['boats', photographs.nagasakiBoats],
    ['flower', photographs.alliumOreophilum],
  ])('gathers change into edges and leaves flat planes: %s', async (_, path) => {
    const photo = await photographAt(path);
    const painting = await painted(photo, { 'body.brush': '64px' });
    const before = paintFigures(photo);
    const after = paintFigures(painting);
    // A blur of the same width flattens too, but its edges sink: the median of the peaks tells the two apart.
    expect(1 - after.gini).toBeLessThan(0.6 * (1 - before.gini));
    expect(1 - after.flatShare).toBeLessThan(0.6 * (1 - before.flatShare));
    expect(edgeRatio(photo, painting)).toBeGreaterThan(0.75);
  });

  it('of the half-size photo predicts that of the whole', async () => {
    const photo = await photographAt(photographs.nagasakiBoats, 1800);
    const even = { ...photo, heightPx: photo.heightPx & ~1 };
    even.pixels = photo.pixels.slice(0, even.widthPx * even.heightPx * 3);
    const brush = { 'body.brush': '16permille' } as const;
    const whole = await painted(even, { ...brush, 'body.noiseFloor': 0.01 });
    const half = await painted(halved(even), { ...brush, 'body.noiseFloor': 0.005 });
    const sorted = differences(halved(whole), half);
    expect(sorted.reduce((sum, value) => sum + value, 0) / sorted.length).toBeLessThanOrEqual(1);
    expect(sorted[Math.floor(sorted.length * 0.95)]).toBeLessThanOrEqual(3);
  });

  it('leaves an ideal step a step, where it was', async () => {
    const [widthPx, heightPx, edge] = [160, 120, 83];
    const pixels = new Uint8Array(widthPx * heightPx * 3).map((_, i) =>
      (i / 3) % widthPx >= edge ? 200 : 40,
    );
    const painting = await painted({ widthPx, heightPx, channels: 3, pixels }, { 'body.brush': '48px' });
    const row = [...painting.pixels.slice(60 * widthPx * 3, 61 * widthPx * 3)].filter((_, i) => i % 3 === 0);
    expect(row[edge - 1] - 40).toBeLessThanOrEqual(3);
    expect(200 - row[edge]).toBeLessThanOrEqual(3);
  });

  it('keeps a flat picture flat and stays within the picture’s range', async () => {
    const flat = {
      widthPx: 61,
      heightPx: 47,
      channels: 3 as const,
      pixels: new Uint8Array(61 * 47 * 3).fill(137),
    };
    expect(new Set((await painted(flat, { 'body.brush': '24px' })).pixels)).toEqual(new Set([137]));
    const photo = await photographAt(photographs.locomotionHouseCat, 400);
    const painting = await painted(photo, { 'body.brush': '24px' });
    for (let c = 0; c < 3; c++) {
      const own = (picture: DecodedPhoto) => [...picture.pixels].filter((_, i) => i % 3 === c);
      const [least, most] = own(photo).reduce(([lo, hi], v) => [Math.min(lo, v), Math.max(hi, v)], [255, 0]);
      for (const value of own(painting)) {
        expect(value).toBeGreaterThanOrEqual(least);
        expect(value).toBeLessThanOrEqual(most);
      }
    }
  });
});
