import { describe, expect, it } from 'vitest';
import { imageOf, type ReferenceImage, sampleAt } from '../../core/kernels/reference/referenceImage.ts';
import { gaussianWeightsReference } from '../../core/kernels/reference/tensor.reference.ts';
import { testPicture } from './testPictures.ts';
import { largestDifference, sizeMatrix, WasmTiles } from './wasmTiles.ts';

const tiles = new WasmTiles();
const shapes = [
  [1, 3],
  [0.6, 2],
  [2.1, 6],
] as const;

function makeTable(sigmaPx: number, radiusPx: number): number {
  const table = tiles.allocate((2 * radiusPx + 1) * 4);
  tiles.kernels.gaussianTable(sigmaPx, radiusPx, table);
  return table;
}

/** One direction of the kernel. The planes have room for the width rounded up to four. */
function smooth(image: ReferenceImage, direction: 'rows' | 'columns', sigmaPx: number, radiusPx: number) {
  tiles.reset();
  const { widthPx, heightPx } = image;
  const table = makeTable(sigmaPx, radiusPx);
  const source = tiles.tileOf(image, radiusPx + 4, undefined, 1);
  const target = tiles.blankTile(widthPx, heightPx, 4, 1);
  const run = direction === 'rows' ? tiles.kernels.gaussianRows : tiles.kernels.gaussianColumns;
  run(
    source.pointer,
    source.strideElements,
    widthPx,
    heightPx,
    table,
    radiusPx,
    target.pointer,
    target.strideElements,
  );
  // Up to three values beyond a row's end belong to the kernel; everything else must be untouched.
  const [first, stride] = [target.pointer, target.strideElements];
  const beforeRows = tiles.floats(first - (4 * stride + 4) * 4, 4 * stride);
  expect(beforeRows.every(Number.isNaN)).toBe(true);
  for (let y = 0; y < heightPx; y++) {
    expect(tiles.floats(first + (y * stride - 4) * 4, 4).every(Number.isNaN)).toBe(true);
    expect(Number.isNaN(tiles.floats(first + (y * stride + ((widthPx + 3) & ~3)) * 4, 1)[0])).toBe(true);
  }
  return tiles.imageOf(target);
}

describe('Gaussian of a plane', () => {
  it('has the weights of a sampled Gaussian, sum 1', () => {
    for (const [sigmaPx, radiusPx] of shapes) {
      tiles.reset();
      const weights = tiles.floats(makeTable(sigmaPx, radiusPx), 2 * radiusPx + 1);
      const expected = gaussianWeightsReference(sigmaPx, radiusPx);
      expect(largestDifference(weights, expected)).toBeLessThan(1e-7);
      expect(weights.reduce((sum, weight) => sum + weight, 0)).toBeCloseTo(1, 6);
    }
  });

  it('agrees with the plain sums along rows and columns, at every size', () => {
    for (const [widthPx, heightPx] of sizeMatrix)
      for (const [sigmaPx, radiusPx] of shapes) {
        const image = testPicture(widthPx, heightPx, 1);
        const weights = gaussianWeightsReference(sigmaPx, radiusPx);
        const along = (dx: number, dy: number) =>
          imageOf(widthPx, heightPx, 1, (x, y) =>
            weights.reduce((sum, weight, i) => {
              const step = i - radiusPx;
              return sum + weight * sampleAt(image, x + step * dx, y + step * dy);
            }, 0),
          );
        const name = `${widthPx} × ${heightPx}, σ ${sigmaPx}`;
        const rows = smooth(image, 'rows', sigmaPx, radiusPx);
        expect(largestDifference(rows.values, along(1, 0).values), name).toBeLessThan(5e-7);
        const columns = smooth(image, 'columns', sigmaPx, radiusPx);
        expect(largestDifference(columns.values, along(0, 1).values), name).toBeLessThan(5e-7);
      }
  });
});
