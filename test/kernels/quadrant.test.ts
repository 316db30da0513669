import { beforeAll, describe, expect, it } from 'vitest';
import { quadrantReference, wholeSample } from '../../core/kernels/reference/quadrant.reference.ts';
import { imageOf, type ReferenceImage, sampleAt } from '../../core/kernels/reference/referenceImage.ts';
import { type Cv, loadOpenCv, matOf, takeValues } from './openCv.ts';
import { mirror, quarterTurn, rangeAround, seededNormal, testPicture } from './testPictures.ts';
import { largestDifference, sizeMatrix, WasmTiles } from './wasmTiles.ts';

const tiles = new WasmTiles();

function paintTile(image: ReferenceImage, radiusPx: number, rect?: Parameters<WasmTiles['tileOf']>[2]) {
  tiles.reset();
  const source = tiles.tileOf(image, radiusPx, rect);
  const { widthPx, heightPx } = source;
  const scratch = tiles.allocate(tiles.kernels.quadrantScratchBytes(widthPx, heightPx, radiusPx));
  const guard = tiles.allocate(64);
  const target = tiles.blankTile(widthPx, heightPx, 1);
  tiles.kernels.quadrant(
    source.pointer,
    source.strideElements,
    widthPx,
    heightPx,
    radiusPx,
    scratch,
    target.pointer,
    target.strideElements,
  );
  expect(tiles.isHaloUntouched(target)).toBe(true);
  expect(tiles.bytes(guard, 64).every((byte) => byte === 0xff)).toBe(true);
  return target;
}

const paint = (image: ReferenceImage, radiusPx: number) => tiles.imageOf(paintTile(image, radiusPx));

describe('quadrant', () => {
  it('gives the same as the plain version at every size', () => {
    for (const [widthPx, heightPx] of sizeMatrix)
      for (const radiusPx of [0, 1, 2, 5]) {
        const image = testPicture(widthPx, heightPx);
        const expected = quadrantReference(image, radiusPx);
        const difference = largestDifference(paint(image, radiusPx).values, expected.values);
        expect(difference, `${widthPx} × ${heightPx}, radius ${radiusPx}`).toBeLessThan(6e-8);
      }
  });

  it('writes |c|² of the colour it gives in the fourth lane', () => {
    const quads = tiles.interior(paintTile(testPicture(17, 9), 3));
    for (let i = 0; i < quads.length; i += 4) {
      const [r, g, b, square] = quads.subarray(i, i + 4);
      expect(square).toBeCloseTo(r * r + g * g + b * b, 6);
    }
  });

  it('compares variances exactly where windows are large and contrast is full', () => {
    // Chequered 0 and 65535 in 257² samples: n·Σv² needs 65 bits. Each window also has two samples around
    // 40000; moving them d apart, sum kept, raises n·Σv² − (Σv)² by 2·d²·n, 3e-14 of it. Green tells which
    // window was taken.
    const radiusPx = 256;
    const marks = [3, 2, 0, 1].map((d, k) => ({
      d,
      green: 100 * (k + 1),
      x: 100 + (k % 2) * radiusPx,
      y: 100 + (k >> 1) * radiusPx,
    }));
    const image = imageOf(2 * radiusPx + 1, 2 * radiusPx + 1, 3, (x, y, c) => {
      const mark = marks.find((m) => m.y === y && (m.x === x || m.x + 2 === x));
      if (!mark) return (x + y) % 2;
      if (c > 0) return Math.fround(mark.green / 65535);
      return Math.fround((40000 + (mark.x === x ? mark.d : -mark.d)) / 65535);
    });
    const middle = { xPx: radiusPx, yPx: radiusPx, widthPx: 1, heightPx: 1 };
    const [, green] = tiles.interior(paintTile(image, radiusPx, middle));
    const windows = marks.map((_mark, k) =>
      windowSums(image, (k % 2) * radiusPx, (k >> 1) * radiusPx, radiusPx + 1),
    );
    const calmest = windows.reduce((least, window) => (window.spread < least.spread ? window : least));
    expect(windows.indexOf(calmest)).toBe(2);
    expect(new Set(windows.map(({ greenMean }) => Math.fround(greenMean))).size).toBe(4);
    expect(green).toBe(Math.fround(calmest.greenMean));
  });

  it('stays within the colours of the window', () => {
    const image = testPicture(33, 15);
    const painted = paint(image, 3);
    for (let y = 0; y < 15; y++)
      for (let x = 0; x < 33; x++)
        for (let c = 0; c < 3; c++) {
          const { least, greatest } = rangeAround(image, x, y, c, 3);
          expect(sampleAt(painted, x, y, c)).toBeGreaterThanOrEqual(least);
          expect(sampleAt(painted, x, y, c)).toBeLessThanOrEqual(greatest);
        }
  });

  it.each([0, 1, 77, 200, 255])('leaves a flat picture of 8-bit value %i as it is, to the bit', (code) => {
    const value = Math.fround(code / 255);
    const painted = paint(
      imageOf(19, 7, 3, () => value),
      6,
    );
    expect(painted.values.every((sample) => sample === value)).toBe(true);
  });

  it('turns and mirrors with the picture', () => {
    // Values are such that no two windows of a pixel tie, for a tie is settled by position.
    const normal = seededNormal(8);
    const image = imageOf(23, 14, 3, () => Math.fround(0.5 + 0.1 * normal()));
    const painted = paint(image, 3);
    expect(largestDifference(paint(quarterTurn(image), 3).values, quarterTurn(painted).values)).toBe(0);
    expect(largestDifference(paint(mirror(image), 3).values, mirror(painted).values)).toBe(0);
  });

  it('gives the same bits however the picture is cut into tiles', () => {
    const image = testPicture(61, 47);
    const whole = paint(image, 4);
    for (const [tileWidthPx, tileHeightPx] of [
      [61, 10],
      [16, 16],
      [7, 47],
      [1, 1],
    ])
      for (let yPx = 0; yPx < 47; yPx += tileHeightPx)
        for (let xPx = 0; xPx < 61; xPx += tileWidthPx) {
          const widthPx = Math.min(tileWidthPx, 61 - xPx);
          const heightPx = Math.min(tileHeightPx, 47 - yPx);
          const part = tiles.imageOf(paintTile(image, 4, { xPx, yPx, widthPx, heightPx }));
          const same = imageOf(widthPx, heightPx, 3, (x, y, c) => sampleAt(whole, xPx + x, yPx + y, c));
          expect(largestDifference(part.values, same.values)).toBe(0);
        }
  });
});

describe('quadrant, facts of the trade (common practice)', () => {
  it('keeps an ideal step a step, where it was', () => {
    const step = imageOf(40, 20, 3, (x, _y, c) => Math.fround((x < 17 ? 40 + c : 180 - c) / 255));
    for (const radiusPx of [1, 3, 8])
      expect(largestDifference(paint(step, radiusPx).values, step.values)).toBe(0);
  });

  it('gives a pixel at an edge the colour of a homogeneous side', () => {
    const normal = seededNormal(3);
    const image = imageOf(40, 24, 3, (x) =>
      Math.fround(x < 20 ? 0.2 : 0.8 + Math.max(-0.15, Math.min(0.15, 0.05 * normal()))),
    );
    const painted = paint(image, 4);
    for (let y = 4; y < 20; y++) {
      // The last pixel of the calm side has calm windows to its left.
      expect(sampleAt(painted, 19, y)).toBeCloseTo(wholeSample(0.2) / 65535, 6);
      // The first of the noisy side must not mix with the dark one.
      expect(sampleAt(painted, 20, y)).toBeGreaterThan(0.7);
    }
  });

  it('chooses the window once for all channels, so that an edge between two colours invents no third', () => {
    // A soft edge where red rises as green falls: in any mixture of the two sides both tell the same share.
    const normal = seededNormal(5);
    const image = imageOf(48, 40, 3, (x, _y, c) => {
      const share = Math.min(1, Math.max(0, (x - 22) / 4));
      const value = [0.2 + 0.6 * share, 0.7 - 0.6 * share, 0.1][c];
      return Math.fround(Math.min(1, Math.max(0, value + 0.03 * normal())));
    });
    const inventedHues = (picture: ReferenceImage) => {
      let count = 0;
      for (let i = 0; i < 48 * 40; i++) {
        const shareByRed = (picture.values[i * 3] - 0.2) / 0.6;
        const shareByGreen = (0.7 - picture.values[i * 3 + 1]) / 0.6;
        if (Math.abs(shareByRed - shareByGreen) > 0.2) count++;
      }
      return count;
    };
    const perChannel = imageOf(48, 40, 3, () => 0);
    for (let c = 0; c < 3; c++) {
      const alone = paint(
        imageOf(48, 40, 1, (x, y) => sampleAt(image, x, y, c)),
        3,
      );
      for (let i = 0; i < 48 * 40; i++) perChannel.values[i * 3 + c] = alone.values[i * 3];
    }
    expect(inventedHues(perChannel)).toBeGreaterThan(10);
    expect(inventedHues(paint(image, 3))).toBe(0);
  });

  it('lets noise fall at least as far as the mean of one window would, up to the bias of choosing', () => {
    const normal = seededNormal(11);
    const [widthPx, heightPx, sigma] = [240, 200, 0.05];
    const grey = imageOf(widthPx, heightPx, 1, () => Math.fround(0.5 + sigma * normal()));
    for (const radiusPx of [2, 4, 8]) {
      // Without the border, where replication leaves fewer pixels to average.
      const inner = {
        xPx: radiusPx,
        yPx: radiusPx,
        widthPx: widthPx - 2 * radiusPx,
        heightPx: heightPx - 2 * radiusPx,
      };
      const painted = tiles.imageOf(paintTile(grey, radiusPx, inner));
      // 10 % for the bias of choosing: all four windows hold the pixel itself, and the one whose mean lies
      // nearest to it tends to have the least variance. The bias shrinks as windows grow.
      expect(deviation(painted.values)).toBeLessThan((sigma / (radiusPx + 1)) * 1.1);
    }
  });
});

describe('quadrant against OpenCV', () => {
  let cv: Cv;
  beforeAll(async () => {
    ({ cv } = await loadOpenCv());
  });

  it.each([
    ['grey', 1, 3],
    ['colour', 3, 3],
    ['colour', 3, 7],
  ] as const)(
    'agrees with box means and box mean squares of shifted anchors: %s, %i channels, radius %i',
    (_name, channels, radiusPx) => {
      const image = testPicture(64, 48, channels);
      const painted = paint(image, radiusPx);
      const oracle = openCvQuadrants(cv, image, radiusPx);
      let undecided = 0;
      for (let i = 0; i < 64 * 48; i++) {
        const [best, second] = oracle.variances.map((plane) => plane[i]).sort((a, b) => a - b);
        // Where float64 cannot tell two windows apart either may be right.
        if (second - best < 1e-12) {
          undecided++;
          continue;
        }
        const chosen = oracle.variances.findIndex((plane) => plane[i] === best);
        for (let c = 0; c < 3; c++) {
          const mean = oracle.means[channels === 1 ? 0 : c][chosen][i];
          expect(painted.values[i * 3 + c]).toBeCloseTo(mean, 6);
        }
      }
      expect(undecided).toBeLessThan(64 * 48 * 0.05);
    },
  );
});

/** Per channel and window the box means, and per window the variance of V, by OpenCV's box filters in float64. */
function openCvQuadrants(cv: Cv, image: ReferenceImage, radiusPx: number) {
  const size = new cv.Size(radiusPx + 1, radiusPx + 1);
  // Anchor: which pixel of the window the result belongs to. Top-left window: its bottom-right pixel.
  const anchors = [
    [radiusPx, radiusPx],
    [0, radiusPx],
    [radiusPx, 0],
    [0, 0],
  ].map(([x, y]) => new cv.Point(x, y));
  const box = (values: ReferenceImage, squared: boolean) =>
    anchors.map((anchor) => {
      const single = matOf(cv, values);
      const source = new cv.Mat();
      single.convertTo(source, cv.CV_64F);
      const target = new cv.Mat();
      const filter = squared ? cv.sqrBoxFilter : cv.boxFilter;
      filter(source, target, cv.CV_64F, size, anchor, true, cv.BORDER_REPLICATE);
      source.delete();
      single.delete();
      return takeValues(target);
    });
  const plane = (valueAt: (x: number, y: number) => number) =>
    imageOf(image.widthPx, image.heightPx, 1, valueAt);
  const channels = Array.from({ length: image.channels }, (_, c) =>
    plane((x, y) => sampleAt(image, x, y, c)),
  );
  const v = plane((x, y) => Math.max(...channels.map((channel) => sampleAt(channel, x, y))));
  const meanV = box(v, false);
  const variances = box(v, true).map((squares, k) => squares.map((square, i) => square - meanV[k][i] ** 2));
  return { means: channels.map((channel) => box(channel, false)), variances };
}

function windowSums(image: ReferenceImage, x0: number, y0: number, sizePx: number) {
  let sum = 0n;
  let squares = 0n;
  let green = 0;
  for (let y = y0; y < y0 + sizePx; y++)
    for (let x = x0; x < x0 + sizePx; x++) {
      const v = BigInt(wholeSample(Math.max(...[0, 1, 2].map((c) => sampleAt(image, x, y, c)))));
      sum += v;
      squares += v * v;
      green += wholeSample(sampleAt(image, x, y, 1));
    }
  const n = BigInt(sizePx * sizePx);
  return { spread: n * squares - sum * sum, greenMean: green / (sizePx * sizePx * 65535) };
}

function deviation(values: Float64Array): number {
  const mean = values.reduce((sum, value) => sum + value, 0) / values.length;
  return Math.sqrt(values.reduce((sum, value) => sum + (value - mean) ** 2, 0) / values.length);
}
