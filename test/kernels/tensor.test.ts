import { describe, expect, it } from 'vitest';
import { imageOf, type ReferenceImage, sampleAt } from '../../core/kernels/reference/referenceImage.ts';
import {
  blockMeansReference,
  tensorProductsReference,
} from '../../core/kernels/reference/tensor.reference.ts';
import { quarterTurn, testPicture } from './testPictures.ts';
import { largestDifference, sizeMatrix, type Tile, WasmTiles } from './wasmTiles.ts';

const tiles = new WasmTiles();
const names = ['e', 'f', 'g'] as const;

/** The kernel over all blocks of a picture of even sides, from quads or from a luma plane. */
function blockTensor(image: ReferenceImage, lanes: 4 | 1): Record<(typeof names)[number], ReferenceImage> {
  tiles.reset();
  const [blocksX, blocksY] = [image.widthPx / 2, image.heightPx / 2];
  const source = tiles.tileOf(image, 3, undefined, lanes);
  const planes = names.map(() => tiles.blankTile(blocksX, blocksY, 1, 1));
  const run = lanes === 4 ? tiles.kernels.blockTensor : tiles.kernels.lumaBlockTensor;
  const [e, f, g] = planes.map((plane) => plane.pointer);
  run(source.pointer, source.strideElements, blocksX, blocksY, e, f, g, planes[0].strideElements);
  for (const plane of planes) expect(tiles.isHaloUntouched(plane)).toBe(true);
  const [E, F, G] = planes.map((plane) => tiles.imageOf(plane));
  return { e: E, f: F, g: G };
}

describe.each([
  ['of quads', 4],
  ['of a luma plane', 1],
] as const)('block tensor %s', (_name, lanes) => {
  const channels = lanes === 4 ? 3 : 1;

  it('is the mean of the plain tensor over each 2 × 2 block, at every size', () => {
    for (const [blocksX, blocksY] of sizeMatrix) {
      const image = testPicture(2 * blocksX, 2 * blocksY, channels);
      const own = blockTensor(image, lanes);
      const products = tensorProductsReference(image);
      for (const name of names)
        expect(
          largestDifference(own[name].values, blockMeansReference(products[name]).values),
          `${name}, ${blocksX} × ${blocksY}`,
        ).toBeLessThan(2e-7);
    }
  });

  it('is exact on a slope: E = Σ a², F = Σ ab, G = Σ b²', () => {
    const slope = imageOf(16, 12, channels, (x, y) => x / 64 + y / 128);
    const { e, f, g } = blockTensor(slope, lanes);
    // Away from the border, where replication bends the slope.
    expect(sampleAt(e, 4, 3)).toBeCloseTo(channels / 64 ** 2, 8);
    expect(sampleAt(f, 4, 3)).toBeCloseTo(channels / (64 * 128), 8);
    expect(sampleAt(g, 4, 3)).toBeCloseTo(channels / 128 ** 2, 8);
  });

  it('exchanges E and G and the sign of F when the picture is turned', () => {
    const image = testPicture(22, 14, channels);
    const upright = blockTensor(image, lanes);
    const turned = blockTensor(quarterTurn(image), lanes);
    expect(largestDifference(turned.e.values, quarterTurn(upright.g).values)).toBeLessThan(2e-7);
    expect(largestDifference(turned.g.values, quarterTurn(upright.e).values)).toBeLessThan(2e-7);
    const negative = quarterTurn(upright.f).values.map((value) => -value);
    expect(largestDifference(turned.f.values, negative)).toBeLessThan(2e-7);
  });
});

/** A plane's value at block (X, Y) brought up bilinearly from a coarser plane: block centres at (X + ½)/2 − ½. */
function broughtUp(plane: ReferenceImage, X: number, Y: number): number {
  const along = (position: number) => {
    const at = (position + 0.5) / 2 - 0.5;
    return [Math.floor(at), at - Math.floor(at)];
  };
  const [x, u] = along(X);
  const [y, v] = along(Y);
  const row = (dy: number) => (1 - u) * sampleAt(plane, x, y + dy) + u * sampleAt(plane, x + 1, y + dy);
  return (1 - v) * row(0) + v * row(1);
}

describe('the coarser level’s tensor', () => {
  it('is added by a quarter, brought up bilinearly, at every size and place', () => {
    for (const [blocksX, blocksY] of sizeMatrix)
      for (const [x0, y0] of [
        [0, 0],
        [3, 2],
        [-3, -1],
        [2 * blocksX + 1, blocksY],
      ]) {
        tiles.reset();
        const [coarseWidth, coarseHeight] = [Math.ceil(blocksX / 2), Math.ceil(blocksY / 2)];
        const planeOf = (c: number) => testPicture(coarseWidth + c, coarseHeight, 1);
        const coarse = names.map((_, c) =>
          imageOf(coarseWidth, coarseHeight, 1, (x, y) => sampleAt(planeOf(c), x, y) - 0.1 * c),
        );
        const pointer = tiles.allocate(3 * coarseWidth * coarseHeight * 4);
        coarse.forEach((plane, c) => {
          tiles.floats(pointer + c * plane.values.length * 4, plane.values.length).set(plane.values);
        });
        const fine = names.map((_, c) => testPicture(blocksX + c, blocksY, 1));
        const planes: Tile[] = fine.map((plane) =>
          tiles.tileOf(plane, 0, { xPx: 0, yPx: 0, widthPx: blocksX, heightPx: blocksY }, 1),
        );
        const [e, f, g] = planes.map((plane) => plane.pointer);
        tiles.kernels.addCoarseTensor(
          e,
          f,
          g,
          planes[0].strideElements,
          blocksX,
          blocksY,
          pointer,
          coarseWidth,
          coarseHeight,
          x0,
          y0,
        );
        planes.forEach((plane, c) => {
          const expected = imageOf(
            blocksX,
            blocksY,
            1,
            (x, y) => sampleAt(fine[c], x, y) + 0.25 * broughtUp(coarse[c], x0 + x, y0 + y),
          );
          const name = `${names[c]}, ${blocksX} × ${blocksY} at ${x0}, ${y0}`;
          expect(largestDifference(tiles.interior(plane), expected.values), name).toBeLessThan(2e-7);
        });
      }
  });
});
