import { describe, expect, it } from 'vitest';
import { mergeReference } from '../../core/kernels/reference/merge.reference.ts';
import { imageOf, type ReferenceImage } from '../../core/kernels/reference/referenceImage.ts';
import { testPicture } from './testPictures.ts';
import { largestDifference, sizeMatrix, type Tile, WasmTiles } from './wasmTiles.ts';

const tiles = new WasmTiles();
const rule = { sigmaRange: 0.05, hold: 0.25 };

/** The kernel over a picture of even sides and its coarser level, into a tile of its own or over the finer one. */
function mergeTile(fine: ReferenceImage, coarse: ReferenceImage, inPlace = false, by = rule): Tile {
  tiles.reset();
  const table = tiles.allocate(9 * 16);
  tiles.kernels.mergeTable(table);
  const from = tiles.tileOf(fine, 0);
  const near = tiles.tileOf(coarse, 1);
  const to = inPlace ? from : tiles.blankTile(fine.widthPx, fine.heightPx, 1);
  tiles.kernels.merge(
    from.pointer,
    from.strideElements,
    near.pointer,
    near.strideElements,
    fine.widthPx / 2,
    fine.heightPx / 2,
    table,
    by.sigmaRange,
    by.hold,
    to.pointer,
    to.strideElements,
  );
  if (!inPlace) expect(tiles.isHaloUntouched(to)).toBe(true);
  return to;
}

describe('merging with the coarser level', () => {
  it('agrees with the plain version at every size, and in place', () => {
    for (const [blocksX, blocksY] of sizeMatrix) {
      const fine = testPicture(2 * blocksX, 2 * blocksY);
      const coarse = testPicture(blocksX, blocksY);
      const expected = mergeReference(fine, coarse, rule).values;
      const name = `${blocksX} × ${blocksY} blocks`;
      const own = tiles.imageOf(mergeTile(fine, coarse)).values;
      expect(largestDifference(own, expected), name).toBeLessThan(5e-6);
      expect(tiles.imageOf(mergeTile(fine, coarse, true)).values, name).toEqual(own);
    }
  });

  it.each([
    { sigmaRange: 0.02, hold: 0.02 },
    { sigmaRange: 0.3, hold: 1 },
    { sigmaRange: 0.05, hold: 0.6 },
  ])('agrees with the plain version for σ_r $sigmaRange, hold $hold', (by) => {
    const fine = testPicture(30, 22);
    const coarse = testPicture(15, 11);
    const own = tiles.imageOf(mergeTile(fine, coarse, false, by));
    expect(largestDifference(own.values, mergeReference(fine, coarse, by).values)).toBeLessThan(1e-5);
  });

  it('keeps what is black on white and white on black, however far apart the levels are', () => {
    for (const [g, coarser] of [
      [0, 1],
      [1, 0],
    ]) {
      const fine = imageOf(8, 6, 3, () => g);
      const coarse = imageOf(4, 3, 3, () => coarser);
      const own = tiles.imageOf(mergeTile(fine, coarse)).values;
      // β = 1/(1 + (3/0.0625)²) = 1/2305.
      for (const value of own) expect(Math.abs(value - g)).toBeCloseTo(1 / 2305, 6);
    }
  });

  it('leaves equal flat levels as they are and writes |c|²', () => {
    const flat = (widthPx: number, heightPx: number) =>
      imageOf(widthPx, heightPx, 3, (_x, _y, c) => Math.fround([0.2, 0.6, 0.97][c]));
    const quads = tiles.interior(mergeTile(flat(10, 8), flat(5, 4)));
    for (let i = 0; i < quads.length; i += 4) {
      const [r, g, b, square] = quads.subarray(i, i + 4);
      expect(largestDifference([r, g, b], [0.2, 0.6, 0.97])).toBeLessThan(3e-7);
      expect(square).toBeCloseTo(r * r + g * g + b * b, 6);
    }
  });
});
