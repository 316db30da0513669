import { imageOf, type ReferenceImage, sampleAt } from './referenceImage.ts';

/** Half to even, as IEEE rounds. */
function nearestWhole(value: number): number {
  const low = Math.floor(value);
  const rest = value - low;
  if (rest !== 0.5) return Math.round(value);
  return low % 2 === 0 ? low : low + 1;
}

/** A float32 sample 0…1 as a whole number 0…65535. */
export function wholeSample(value: number): number {
  return Math.min(65535, Math.max(0, nearestWhole(Math.fround(Math.fround(value) * 65535))));
}

/**
 * Quadrant smoothing, window by window (Kuwahara et al. 1976): of the four (radius + 1)² windows that have the
 * pixel as a corner, the one with the least variance of V = max(R, G, B) gives the means. Ties: the first of
 * top-left, top-right, bottom-left, bottom-right. Border: replicate.
 * @param image R, G, B in 0…1, taken as whole numbers 0…65535; not modified
 * @param radiusPx up to 303: beyond it the kernel drops low bits of V, which this version does not
 * @returns R, G, B in 0…1
 */
export function quadrantReference(image: ReferenceImage, radiusPx: number): ReferenceImage {
  const whole = imageOf(image.widthPx, image.heightPx, 3, (x, y, c) => wholeSample(sampleAt(image, x, y, c)));
  const corners = [
    [-radiusPx, -radiusPx],
    [0, -radiusPx],
    [-radiusPx, 0],
    [0, 0],
  ];
  const means = new Map<number, number[]>();
  return imageOf(image.widthPx, image.heightPx, 3, (x, y, c) => {
    const key = y * image.widthPx + x;
    if (!means.has(key)) {
      const windows = corners.map(([dx, dy]) => windowOf(whole, x + dx, y + dy, radiusPx + 1));
      const best = windows.reduce((least, window) => (window.spread < least.spread ? window : least));
      means.set(key, best.mean);
    }
    return means.get(key)![c];
  });
}

/** Means in 0…1, and n·Σv² − (Σv)² as an exact whole number. */
function windowOf(whole: ReferenceImage, x0: number, y0: number, sizePx: number) {
  const n = sizePx * sizePx;
  const sum = [0, 0, 0];
  let sumV = 0n;
  let sumVv = 0n;
  for (let y = y0; y < y0 + sizePx; y++)
    for (let x = x0; x < x0 + sizePx; x++) {
      const rgb = [0, 1, 2].map((c) => sampleAt(whole, x, y, c));
      for (let c = 0; c < 3; c++) sum[c] += rgb[c];
      const v = BigInt(Math.max(...rgb));
      sumV += v;
      sumVv += v * v;
    }
  return { mean: sum.map((s) => s / (n * 65535)), spread: BigInt(n) * sumVv - sumV * sumV };
}
