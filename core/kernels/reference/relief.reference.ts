import { imageOf, type ReferenceImage, sampleAt } from './referenceImage.ts';

/** Noise of one pixel, −1…1, from the mixed bits of its position; whole 32-bit arithmetic, exact everywhere. */
export function noiseReference(xPx: number, yPx: number): number {
  let bits = (Math.imul(xPx, 0x9e3779b1) ^ Math.imul(yPx, 0xc2b2ae3d)) >>> 0;
  bits = Math.imul(bits ^ (bits >>> 16), 0x7feb352d) >>> 0;
  bits = Math.imul(bits ^ (bits >>> 15), 0x846ca68b) >>> 0;
  bits = (bits ^ (bits >>> 16)) >>> 0;
  return ((bits >>> 8) * 2) / 2 ** 24 - 1;
}

/** Noise of a rectangle, smoothed by [side, 1 − 2·side, side] both ways. */
export function bristleNoiseReference(
  x0: number,
  y0: number,
  widthPx: number,
  heightPx: number,
  side: number,
): ReferenceImage {
  const weights = [side, 1 - 2 * side, side];
  return imageOf(widthPx, heightPx, 1, (x, y) => {
    let sum = 0;
    for (let dy = 0; dy < 3; dy++)
      for (let dx = 0; dx < 3; dx++)
        sum += weights[dx] * weights[dy] * noiseReference(x0 + x + dx - 1, y0 + y + dy - 1);
    return sum;
  });
}

const degrees = Math.PI / 180;
const lightHeightDegrees = 40;

/**
 * Light on a height field: cosine law and half-vector highlight to the 32nd power (Blinn 1977), both less what a
 * flat surface gives; heights beyond the picture are repeated.
 */
export function lightReference(
  heights: ReferenceImage,
  { slope, bearingDegrees, shine }: { slope: number; bearingDegrees: number; shine: number },
): ReferenceImage {
  const [high, flat] = [Math.sin(lightHeightDegrees * degrees), Math.cos(lightHeightDegrees * degrees)];
  const light = [flat * Math.sin(bearingDegrees * degrees), -flat * Math.cos(bearingDegrees * degrees), high];
  const half = unit([light[0], light[1], light[2] + 1]);
  return imageOf(heights.widthPx, heights.heightPx, 1, (x, y) => {
    const a = (slope * (sampleAt(heights, x + 1, y) - sampleAt(heights, x - 1, y))) / 2;
    const b = (slope * (sampleAt(heights, x, y + 1) - sampleAt(heights, x, y - 1))) / 2;
    const normal = unit([-a, -b, 1]);
    const diffuse = dot(normal, light) - high;
    const highlight = Math.max(0, dot(normal, half)) ** 32 - half[2] ** 32;
    return Math.max(-1, Math.min(1, diffuse + shine * highlight));
  });
}

function unit(v: number[]): number[] {
  const length = Math.hypot(...v);
  return v.map((part) => part / length);
}

function dot(a: number[], b: number[]): number {
  return a.reduce((sum, part, i) => sum + part * b[i], 0);
}
