import { describe, expect, it } from 'vitest';
import { imageOf, type ReferenceImage, sampleBetween } from '../../core/kernels/reference/referenceImage.ts';
import { bristleNoiseReference, lightReference } from '../../core/kernels/reference/relief.reference.ts';
import { testPicture } from './testPictures.ts';
import { largestDifference, sizeMatrix, WasmTiles } from './wasmTiles.ts';

const tiles = new WasmTiles();

function noise(x0: number, y0: number, width: number, height: number, side: number): Float32Array {
  const plane = tiles.allocate(width * (height + 2) * 4);
  tiles.kernels.bristleNoise(x0, y0, width, height, side, plane, width);
  return tiles.floats(plane, width * height).slice();
}

describe('bristle noise', () => {
  it('follows the plain version at every size and place', () => {
    for (const [width, height] of sizeMatrix)
      for (const side of [0, 0.17, 0.3]) {
        tiles.reset();
        const [x0, y0] = [7 * width - 40, 3 * height - 20];
        const expected = bristleNoiseReference(x0, y0, width, height, side);
        expect(largestDifference(noise(x0, y0, width, height, side), expected.values)).toBeLessThan(1e-6);
      }
  });

  it('is the same wherever a tile begins', () => {
    tiles.reset();
    const whole = noise(-5, 100, 64, 40, 0.2);
    const part = noise(12, 111, 20, 10, 0.2);
    for (let y = 0; y < 10; y++)
      expect(part.slice(y * 20, (y + 1) * 20)).toEqual(whole.slice((y + 11) * 64 + 17, (y + 11) * 64 + 37));
  });

  // Uniform noise in −1…1 has mean 0 and variance 1/3 (common knowledge of statistics), and its neighbours are unrelated.
  it('is uniform and without memory', () => {
    tiles.reset();
    const [width, height] = [512, 512];
    const values = noise(0, 0, width, height, 0);
    const count = values.length;
    const mean = values.reduce((sum, v) => sum + v, 0) / count;
    const variance = values.reduce((sum, v) => sum + v * v, 0) / count;
    // Five standard errors.
    expect(Math.abs(mean)).toBeLessThan(5 / Math.sqrt(3 * count));
    expect(Math.abs(variance - 1 / 3)).toBeLessThan((5 * 0.3) / Math.sqrt(count));
    for (const lag of [1, 2, width, width + 1]) {
      let sum = 0;
      for (let i = lag; i < count; i++) sum += values[i] * values[i - lag];
      expect(Math.abs((3 * sum) / count), `lag ${lag}`).toBeLessThan(5 / Math.sqrt(count));
    }
  });
});

interface Light {
  slope: number;
  bearingDegrees: number;
  shine: number;
}

function lit(
  heights: ReferenceImage,
  { slope, bearingDegrees, shine }: Light,
  bandRows = 1000,
): Float32Array {
  tiles.reset();
  const { widthPx, heightPx } = heights;
  const plane = tiles.allocate(widthPx * heightPx * 4);
  tiles.floats(plane, widthPx * heightPx).set(heights.values);
  const out = tiles.allocate(widthPx * heightPx * 4);
  for (let y = 0; y < heightPx; y += bandRows) {
    const rows = Math.min(bandRows, heightPx - y);
    tiles.kernels.lightHeights(plane, widthPx, heightPx, y, rows, slope, bearingDegrees, shine, out);
  }
  return tiles.floats(out, widthPx * heightPx).slice();
}

describe('light on the surface', () => {
  it('follows the plain version at every size, in bands too', () => {
    for (const [widthPx, heightPx] of sizeMatrix)
      for (const light of [
        { slope: 1, bearingDegrees: 315, shine: 0.3 },
        { slope: 6, bearingDegrees: 40, shine: 1 },
        { slope: 0.2, bearingDegrees: 180, shine: 0 },
      ]) {
        const heights = testPicture(widthPx, heightPx, 1);
        const expected = lightReference(heights, light).values;
        expect(largestDifference(lit(heights, light), expected)).toBeLessThan(2e-5);
        expect(largestDifference(lit(heights, light, 2), expected)).toBeLessThan(2e-5);
      }
  });

  it('leaves a flat surface alone, and lights the side that faces it', () => {
    const flat = imageOf(5, 5, 1, () => 0.7);
    expect(
      lit(flat, { slope: 3, bearingDegrees: 70, shine: 1 }).every((value) => Math.abs(value) < 1e-6),
    ).toBe(true);
    // Rises to the right: it faces the left, bearing 270.
    const rising = imageOf(9, 3, 1, (x) => x * 0.1);
    expect(lit(rising, { slope: 3, bearingDegrees: 270, shine: 0 })[13]).toBeGreaterThan(0.05);
    expect(lit(rising, { slope: 3, bearingDegrees: 90, shine: 0 })[13]).toBeLessThan(-0.05);
    // Rises downwards: it faces the top, bearing 0.
    const falling = imageOf(3, 9, 1, (_, y) => y * 0.1);
    expect(lit(falling, { slope: 3, bearingDegrees: 0, shine: 0 })[13]).toBeGreaterThan(0.05);
  });
});

describe('relief brought up', () => {
  it('is bilinear, its edge repeated, at every size and scale', () => {
    for (const [width, height] of sizeMatrix.filter(([side]) => side < 18))
      for (const shift of [0, 1, 2]) {
        tiles.reset();
        const side = 2 ** shift;
        const picture = testPicture(width, height, 1);
        const light = { ...picture, values: picture.values.map((value) => Math.fround(2 * value - 1)) };
        const source = tiles.tileOf(light, 0, undefined, 1);
        const [fullWidth, fullHeight] = [width * side - (shift ? 1 : 0), height * side];
        const out = tiles.allocate(fullWidth * fullHeight);
        tiles.kernels.raiseRelief(
          source.pointer,
          source.strideElements,
          width,
          height,
          0,
          0,
          shift,
          0,
          0,
          fullWidth,
          fullHeight,
          out,
          fullWidth,
        );
        const own = tiles.bytes(out, fullWidth * fullHeight);
        const expected = imageOf(
          fullWidth,
          fullHeight,
          1,
          (x, y) => 127 + 127 * sampleBetween(light, (x + 0.5) / side - 0.5, (y + 0.5) / side - 0.5),
        );
        expect(largestDifference(own, expected.values)).toBeLessThanOrEqual(0.5 + 1e-4);
      }
  });
});
