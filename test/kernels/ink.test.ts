import { describe, expect, it } from 'vitest';
import { imageOf, type ReferenceImage, sampleBetween } from '../../core/kernels/reference/referenceImage.ts';
import { xdogThresholdReference } from '../../core/kernels/reference/xdog.reference.ts';
import type { Rect } from '../../core/pixels/photo.ts';
import { testPicture } from './testPictures.ts';
import { sizeMatrix, WasmTiles } from './wasmTiles.ts';

const tiles = new WasmTiles();

interface Ink {
  epsilon: number;
  phi: number;
  shift?: number;
  /** Where S begins in the smaller picture. */
  origin?: [x: number, y: number];
}

/** Coverage of a rectangle of the full picture; rows are padded by three bytes that must stay as they were. */
function coverage(
  s: ReferenceImage,
  rect: Rect,
  { epsilon, phi, shift = 0, origin = [0, 0] }: Ink,
): Uint8Array {
  tiles.reset();
  const source = tiles.tileOf(s, 0, undefined, 1);
  const { widthPx, heightPx } = rect;
  const stride = widthPx + 3;
  const out = tiles.allocate(stride * heightPx);
  tiles.bytes(out, stride * heightPx).fill(0xaa);
  tiles.kernels.inkCoverage(
    source.pointer,
    source.strideElements,
    s.widthPx,
    s.heightPx,
    origin[0],
    origin[1],
    shift,
    rect.xPx,
    rect.yPx,
    widthPx,
    heightPx,
    epsilon,
    phi,
    out,
    stride,
  );
  const bytes = tiles.bytes(out, stride * heightPx);
  const ink = new Uint8Array(widthPx * heightPx);
  for (let y = 0; y < heightPx; y++) {
    expect([...bytes.subarray(y * stride + widthPx, (y + 1) * stride)]).toEqual([0xaa, 0xaa, 0xaa]);
    ink.set(bytes.subarray(y * stride, y * stride + widthPx), y * widthPx);
  }
  return ink;
}

/** 255·(1 − T) in float64. */
const inkOf = (s: number, { epsilon, phi }: Ink) => 255 * (1 - xdogThresholdReference(s, epsilon, phi));

function expectInk(own: Uint8Array, expected: Float64Array, name: string): void {
  let worst = 0;
  own.forEach((value, i) => {
    worst = Math.max(worst, Math.abs(value - expected[i]));
  });
  // Half a step of rounding; the exponential is good to 1e-6 of 255.
  expect(worst, name).toBeLessThanOrEqual(0.5 + 0.002);
}

const settings: Ink[] = [
  { epsilon: 0.1, phi: 6 },
  { epsilon: 0.5, phi: 1.2 },
  { epsilon: 0, phi: 100 },
  { epsilon: 1, phi: 40 },
];

// XDoG: Winnemöller, Kyprianidis, Olsen 2012.
describe('ink coverage', () => {
  it('follows the soft threshold at every size', () => {
    for (const [widthPx, heightPx] of sizeMatrix)
      for (const setting of settings) {
        const picture = testPicture(widthPx, heightPx, 1);
        const s = { ...picture, values: picture.values.map((value) => Math.fround(3 * value - 1.5)) };
        const own = coverage(s, { xPx: 0, yPx: 0, widthPx, heightPx }, setting);
        const expected = s.values.map((value) => inkOf(value, setting));
        expectInk(own, expected, `${widthPx} × ${heightPx}, ε ${setting.epsilon}, φ ${setting.phi}`);
      }
  });

  it('holds the published points: none from ε on, tanh(1) at 1/φ below it, all far below', () => {
    const s = imageOf(4, 1, 1, (x) => [0.1, 2, 0.1 - 1 / 6, -20][x]);
    const own = coverage(s, { xPx: 0, yPx: 0, widthPx: 4, heightPx: 1 }, { epsilon: 0.1, phi: 6 });
    // tanh(1) = 0.7615941560 (published tables).
    expect([...own]).toEqual([0, 0, Math.round(255 * 0.761594156), 255]);
  });

  it('brings S up bilinearly before the threshold, its edge repeated, at every size and scale', () => {
    for (const [smallWidth, smallHeight] of sizeMatrix.filter(([width]) => width < 18))
      for (const shift of [1, 2, 3]) {
        const side = 2 ** shift;
        const s = testPicture(smallWidth, smallHeight, 1);
        const setting = { epsilon: 0.6, phi: 3, shift };
        const whole: Rect = { xPx: 0, yPx: 0, widthPx: smallWidth * side - 1, heightPx: smallHeight * side };
        const own = coverage(s, whole, setting);
        const expected = imageOf(whole.widthPx, whole.heightPx, 1, (x, y) =>
          inkOf(sampleBetween(s, (x + 0.5) / side - 0.5, (y + 0.5) / side - 0.5), setting),
        );
        expectInk(own, expected.values, `${smallWidth} × ${smallHeight}, shift ${shift}`);
      }
  });

  it('gives the same from a part of S, for a part of the picture', () => {
    for (const shift of [0, 1, 2]) {
      const side = 2 ** shift;
      const s = testPicture(40, 30, 1);
      const [width, height] = [40 * side, 30 * side];
      const setting = { epsilon: 0.6, phi: 3, shift };
      const all = coverage(s, { xPx: 0, yPx: 0, widthPx: width, heightPx: height }, setting);
      const rect: Rect = { xPx: 11 * side + 1, yPx: 9 * side + 1, widthPx: 7 * side + 1, heightPx: 5 * side };
      const origin: [number, number] = [10, 8];
      const part = imageOf(12, 10, 1, (x, y) => sampleBetween(s, x + origin[0], y + origin[1]));
      const own = coverage(part, rect, { ...setting, origin });
      for (let y = 0; y < rect.heightPx; y++)
        for (let x = 0; x < rect.widthPx; x++)
          expect(own[y * rect.widthPx + x]).toBe(all[(rect.yPx + y) * width + rect.xPx + x]);
    }
  });
});
