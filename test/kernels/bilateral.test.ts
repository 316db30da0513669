import { beforeAll, describe, expect, it } from 'vitest';
import { bilateralReference } from '../../core/kernels/reference/bilateral.reference.ts';
import { imageOf, type ReferenceImage, sampleAt } from '../../core/kernels/reference/referenceImage.ts';
import { type Cv, loadOpenCv, matOf, takeValues } from './openCv.ts';
import { mirror, quarterTurn, rangeAround, seededNormal, testPicture } from './testPictures.ts';
import { largestDifference, sizeMatrix, WasmTiles } from './wasmTiles.ts';

const tiles = new WasmTiles();

function paintTile(
  image: ReferenceImage,
  radiusPx: number,
  sigmaRange: number,
  rect?: Parameters<WasmTiles['tileOf']>[2],
) {
  tiles.reset();
  const { kernels } = tiles;
  const source = tiles.tileOf(image, Math.floor(radiusPx), rect);
  const { widthPx, heightPx } = source;
  const table = tiles.allocate(kernels.bilateralTableBytes(radiusPx));
  const entryCount = kernels.bilateralTable(radiusPx, table);
  const scratch = tiles.allocate(kernels.bilateralScratchBytes(widthPx, heightPx, radiusPx));
  const guard = tiles.allocate(64);
  const target = tiles.blankTile(widthPx, heightPx, 1);
  kernels.bilateral(
    source.pointer,
    source.strideElements,
    widthPx,
    heightPx,
    radiusPx,
    sigmaRange,
    table,
    entryCount,
    scratch,
    target.pointer,
    target.strideElements,
  );
  expect(tiles.isHaloUntouched(target)).toBe(true);
  expect(tiles.bytes(guard, 64).every((byte) => byte === 0xff)).toBe(true);
  return target;
}

const paint = (image: ReferenceImage, radiusPx: number, sigmaRange: number) =>
  tiles.imageOf(paintTile(image, radiusPx, sigmaRange));

describe('bilateral', () => {
  it('gives the same as the plain version at every size', () => {
    for (const [widthPx, heightPx] of sizeMatrix)
      for (const [radiusPx, sigmaRange] of [
        [1, 0.1],
        [2.5, 0.03],
        [4, 0.3],
      ]) {
        const image = testPicture(widthPx, heightPx);
        const expected = bilateralReference(image, radiusPx, sigmaRange);
        const difference = largestDifference(paint(image, radiusPx, sigmaRange).values, expected.values);
        expect(difference, `${widthPx} × ${heightPx}, radius ${radiusPx}`).toBeLessThan(1e-6);
      }
  });

  it('writes |c|² of the colour it gives in the fourth lane', () => {
    const quads = tiles.interior(paintTile(testPicture(17, 9), 3, 0.1));
    for (let i = 0; i < quads.length; i += 4) {
      const [r, g, b, square] = quads.subarray(i, i + 4);
      expect(square).toBeCloseTo(r * r + g * g + b * b, 6);
    }
  });

  it('stays within the colours of the window', () => {
    const image = testPicture(33, 15);
    const painted = paint(image, 3, 0.2);
    for (let y = 0; y < 15; y++)
      for (let x = 0; x < 33; x++)
        for (let c = 0; c < 3; c++) {
          const { least, greatest } = rangeAround(image, x, y, c, 3);
          expect(sampleAt(painted, x, y, c)).toBeGreaterThanOrEqual(least - 1e-7);
          expect(sampleAt(painted, x, y, c)).toBeLessThanOrEqual(greatest + 1e-7);
        }
  });

  it('leaves a flat picture as it is, to the bit', () => {
    const flat = imageOf(19, 7, 3, (_x, _y, c) => Math.fround([0.123456, 0.7, 1][c]));
    expect(largestDifference(paint(flat, 5, 0.05).values, flat.values)).toBe(0);
  });

  it('turns and mirrors with the picture, up to the order of summing', () => {
    const image = testPicture(23, 14);
    const painted = paint(image, 3, 0.1);
    expect(
      largestDifference(paint(quarterTurn(image), 3, 0.1).values, quarterTurn(painted).values),
    ).toBeLessThan(5e-7);
    expect(largestDifference(paint(mirror(image), 3, 0.1).values, mirror(painted).values)).toBeLessThan(5e-7);
  });

  it('gives the same bits however the picture is cut into tiles', () => {
    const image = testPicture(45, 31);
    const whole = paint(image, 4, 0.08);
    for (const [tileWidthPx, tileHeightPx] of [
      [45, 10],
      [16, 16],
      [7, 31],
      [1, 1],
    ])
      for (let yPx = 0; yPx < 31; yPx += tileHeightPx)
        for (let xPx = 0; xPx < 45; xPx += tileWidthPx) {
          const widthPx = Math.min(tileWidthPx, 45 - xPx);
          const heightPx = Math.min(tileHeightPx, 31 - yPx);
          const part = tiles.imageOf(paintTile(image, 4, 0.08, { xPx, yPx, widthPx, heightPx }));
          const same = imageOf(widthPx, heightPx, 3, (x, y, c) => sampleAt(whole, xPx + x, yPx + y, c));
          expect(largestDifference(part.values, same.values)).toBe(0);
        }
  });

  it('keeps a step that is large against σ_r while noise on both sides falls (Tomasi and Manduchi 1998)', () => {
    const normal = seededNormal(2);
    const side = (x: number) => (x < 24 ? 0.2 : 0.8);
    const image = imageOf(48, 40, 3, (x) => Math.fround(side(x) + 0.01 * normal()));
    const painted = paint(image, 6, 0.1);
    const deviation = (picture: ReferenceImage) => {
      let sum = 0;
      for (let y = 0; y < 40; y++)
        for (let x = 0; x < 48; x++) sum += (sampleAt(picture, x, y) - side(x)) ** 2;
      return Math.sqrt(sum / (48 * 40));
    };
    expect(deviation(painted)).toBeLessThan(deviation(image) / 4);
  });
});

describe('bilateral against OpenCV', () => {
  let cv: Cv;
  beforeAll(async () => {
    ({ cv } = await loadOpenCv());
  });

  it.each([
    [3, 0.05],
    [6, 0.1],
    [9, 0.4],
  ])('agrees on grey float32: radius %d, σ %d', (radiusPx, sigmaGrey) => {
    const grey = testPicture(64, 48, 1);
    const source = matOf(cv, grey);
    const target = new cv.Mat();
    // OpenCV takes the window's diameter, and measures grey differences; three equal channels are √3 apart.
    cv.bilateralFilter(source, target, 2 * radiusPx + 1, sigmaGrey, radiusPx / 2, cv.BORDER_REPLICATE);
    source.delete();
    const expected = takeValues(target);
    const painted = paint(grey, radiusPx, sigmaGrey * Math.sqrt(3));
    for (let i = 0; i < expected.length; i++)
      // OpenCV reads the range Gaussian from a table by linear interpolation.
      expect(Math.abs(painted.values[i * 3] - expected[i])).toBeLessThan(2e-5);
  });
});
