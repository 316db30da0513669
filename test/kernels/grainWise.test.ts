import { describe, expect, it } from 'vitest';
import { grainOfNumbers } from '../../core/kernels/reference/grain.reference.ts';
import {
  chooseSectorsReference,
  type GrainWiseBrush,
  sectorsAtReference,
  type WindowSample,
  windowSamplesReference,
} from '../../core/kernels/reference/grainWise.reference.ts';
import {
  blankImage,
  imageOf,
  type ReferenceImage,
  sampleAt,
} from '../../core/kernels/reference/referenceImage.ts';
import { rangeAround, testPicture } from './testPictures.ts';
import { largestDifference, sizeMatrix, type Tile, WasmTiles } from './wasmTiles.ts';

const tiles = new WasmTiles();

type Form = 'float' | 'fixed';
type NumbersAt = (blockX: number, blockY: number) => number;

const brush: GrainWiseBrush = { radiusPx: 3, pull: 1, noiseFloor: 0.01, crispness: 8 };
/** Every orientation and anisotropy comes up. */
const someNumbers: NumbersAt = (x, y) => (331 * x + 177 * y + 5) % 1024;

/** One of the two smoothings over a picture of even sides. */
function paintTile(form: Form, image: ReferenceImage, numbersAt: NumbersAt, by: GrainWiseBrush): Tile {
  tiles.reset();
  const { kernels } = tiles;
  const { widthPx, heightPx } = image;
  const [blocksX, blocksY] = [widthPx / 2, heightPx / 2];
  const reach = kernels.bankReachPx(by.radiusPx, by.pull);
  const source = tiles.tileOf(image, reach);
  const stride = source.strideElements;
  const bank = tiles.allocate(kernels.bankBytes(by.radiusPx, by.pull));
  const bankScratch = tiles.allocate(kernels.bankScratchBytes(by.radiusPx, by.pull));
  const build = form === 'float' ? kernels.buildBank : kernels.buildFixedBank;
  build(by.radiusPx, by.pull, stride, bank, bankScratch);
  const numbersStride = blocksX + 3;
  const numbers = tiles.allocate(numbersStride * blocksY * 2);
  const all = new Uint16Array(tiles.memory.buffer, numbers, numbersStride * blocksY);
  for (let y = 0; y < blocksY; y++)
    for (let x = 0; x < blocksX; x++) all[y * numbersStride + x] = numbersAt(x, y);
  let from = source.pointer;
  if (form === 'fixed') {
    const outerHeight = heightPx + 2 * reach;
    const corner = source.pointer - (reach * stride + reach) * 16;
    const packed = tiles.allocate(stride * outerHeight * 16);
    kernels.packPairs(corner, stride, widthPx + 2 * reach, outerHeight, packed);
    from = packed + (reach * stride + reach) * 16;
  }
  const scratch = tiles.allocate(512);
  const guard = tiles.allocate(64);
  const target = tiles.blankTile(widthPx, heightPx, 1);
  const run = form === 'float' ? kernels.grainWise : kernels.grainWiseFixed;
  const { pointer, strideElements } = target;
  run(
    from,
    stride,
    blocksX,
    blocksY,
    numbers,
    numbersStride,
    bank,
    by.noiseFloor,
    by.crispness,
    scratch,
    pointer,
    strideElements,
  );
  expect(tiles.isHaloUntouched(target)).toBe(true);
  expect(tiles.bytes(guard, 64).every((byte) => byte === 0xff)).toBe(true);
  return target;
}

const paint = (form: Form, image: ReferenceImage, numbersAt = someNumbers, by = brush) =>
  tiles.imageOf(paintTile(form, image, numbersAt, by));

const windows = new Map<string, WindowSample[]>();

/** The plain version with a block's number for its four pixels; windows are kept, they take most of the time. */
function paintPlainly(image: ReferenceImage, numbersAt: NumbersAt, by: GrainWiseBrush): ReferenceImage {
  const result = blankImage(image.widthPx, image.heightPx, 3);
  for (let y = 0; y < image.heightPx; y++)
    for (let x = 0; x < image.widthPx; x++) {
      const number = numbersAt(x >> 1, y >> 1);
      const key = `${number} ${by.radiusPx} ${by.pull}`;
      if (!windows.has(key)) {
        const { tangentRad, anisotropy } = grainOfNumbers(number >> 4, number & 15);
        windows.set(key, windowSamplesReference(by.radiusPx, by.pull, tangentRad, anisotropy));
      }
      const sectors = sectorsAtReference(image, x, y, windows.get(key)!);
      const colour = chooseSectorsReference(sectors, by.noiseFloor, by.crispness);
      result.values.set(colour, (y * image.widthPx + x) * 3);
    }
  return result;
}

function psnr(a: ArrayLike<number>, b: ArrayLike<number>): number {
  let sum = 0;
  for (let i = 0; i < a.length; i++) sum += (a[i] - b[i]) ** 2;
  return 10 * Math.log10(a.length / Math.max(sum, 1e-30));
}

/** Least agreement with the plain version: rounding of float32, or of 15-bit weights and values. */
const least = { float: { worst: 2e-4, psnrDb: 100 }, fixed: { worst: 5e-3, psnrDb: 72 } } as const;

describe.each(['float', 'fixed'] as const)('grain-wise smoothing, %s', (form) => {
  const { worst, psnrDb } = least[form];

  it('agrees with the plain version at every size', () => {
    let [a, b]: number[][] = [[], []];
    for (const [blocksX, blocksY] of sizeMatrix.filter(([width, height]) => width <= 17 && height <= 8)) {
      const image = testPicture(2 * blocksX, 2 * blocksY);
      const own = paint(form, image).values;
      const expected = paintPlainly(image, someNumbers, brush).values;
      expect(largestDifference(own, expected), `${blocksX} × ${blocksY} blocks`).toBeLessThan(worst);
      a = a.concat(...own);
      b = b.concat(...expected);
    }
    expect(psnr(a, b)).toBeGreaterThan(psnrDb);
  });

  it.each([
    { radiusPx: 5.3, pull: 0.5, noiseFloor: 0.004, crispness: 8 },
    { radiusPx: 2.5, pull: 2, noiseFloor: 0.03, crispness: 1 },
    { radiusPx: 4, pull: 0, noiseFloor: 0.01, crispness: 3 },
    { radiusPx: 3, pull: 1, noiseFloor: 0.02, crispness: 16 },
  ])('agrees with the plain version: $radiusPx px, pull $pull, q $crispness', (by) => {
    const image = testPicture(40, 24);
    const own = paint(form, image, someNumbers, by).values;
    const expected = paintPlainly(image, someNumbers, by).values;
    expect(largestDifference(own, expected)).toBeLessThan(worst * 2);
    expect(psnr(own, expected)).toBeGreaterThan(psnrDb - 4);
  });

  it('writes |c|² of the colour it gives in the fourth lane', () => {
    const quads = tiles.interior(paintTile(form, testPicture(18, 10), someNumbers, brush));
    for (let i = 0; i < quads.length; i += 4) {
      const [r, g, b, square] = quads.subarray(i, i + 4);
      expect(Math.abs(square - (r * r + g * g + b * b))).toBeLessThan(1e-6);
    }
  });

  it('leaves flat pictures flat, black and white among them', () => {
    for (const rgb of [
      [0, 0, 0],
      [1, 1, 1],
      [0.1, 0.5, 0.9],
      [1, 0, 0.3],
    ]) {
      const flat = imageOf(12, 8, 3, (_x, _y, c) => Math.fround(rgb[c]));
      const painted = paint(form, flat).values;
      // Fixed point rounds a value to half of 1/32766 and gives every pixel the same.
      expect(largestDifference(painted, flat.values)).toBeLessThan(form === 'float' ? 1e-6 : 1.6e-5);
      for (let i = 3; i < painted.length; i++)
        expect(Math.abs(painted[i] - painted[i % 3])).toBeLessThan(2.5e-7);
    }
  });

  it('stays within the colours of the window', () => {
    const image = testPicture(24, 16);
    const painted = paint(form, image);
    const slack = form === 'float' ? 1e-6 : 1.6e-5;
    for (let y = 0; y < 16; y++)
      for (let x = 0; x < 24; x++)
        for (let c = 0; c < 3; c++) {
          const { least: low, greatest } = rangeAround(image, x, y, c, 6);
          expect(sampleAt(painted, x, y, c)).toBeGreaterThanOrEqual(low - slack);
          expect(sampleAt(painted, x, y, c)).toBeLessThanOrEqual(greatest + slack);
        }
  });

  it('keeps an ideal step where it is: each pixel takes its own side', () => {
    const step = imageOf(32, 16, 3, (x) => (x < 13 ? Math.fround(0.25) : Math.fround(0.75)));
    // Number 32·16 + 15: strokes run down, along the step.
    const painted = paint(form, step, () => 32 * 16 + 15);
    for (let y = 0; y < 16; y++)
      for (let x = 0; x < 32; x++)
        expect(Math.abs(sampleAt(painted, x, y) - (x < 13 ? 0.25 : 0.75))).toBeLessThan(0.01);
  });
});

describe('grain-wise smoothing, both forms', () => {
  it('differ by rounding only, down to the floor from which the fixed form is used', () => {
    const image = testPicture(64, 48);
    for (const noiseFloor of [0.002, 0.005, 0.02]) {
      const by = { ...brush, noiseFloor };
      const [a, b] = (['float', 'fixed'] as const).map((form) => paint(form, image, someNumbers, by).values);
      expect(psnr(a, b)).toBeGreaterThan(68);
      let sum = 0;
      for (let i = 0; i < a.length; i++) sum += Math.abs(a[i] - b[i]);
      expect(sum / a.length).toBeLessThan(5e-4);
    }
  });

  it('clears numbers to those of the round window', () => {
    tiles.reset();
    const pointer = tiles.allocate(64);
    tiles.kernels.clearNumbers(pointer, 9);
    const numbers = new Uint16Array(tiles.memory.buffer, pointer, 32);
    expect([...numbers.subarray(0, 10)]).toEqual([0, 0, 0, 0, 0, 0, 0, 0, 0, 0xffff]);
  });
});
