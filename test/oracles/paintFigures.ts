// The three figures that tell paint from blur, of 8-bit luma (ITU-R BT.601) and central differences.
import type { DecodedPhoto } from '../../core/pixels/photo.ts';

export interface PaintFigures {
  /** Gini coefficient of the gradient magnitude: 1 where all change sits in few edges. */
  gini: number;
  /** Share of pixels whose gradient is below one step of 255. */
  flatShare: number;
}

function luma({ widthPx, heightPx, channels, pixels }: DecodedPhoto): Float64Array {
  return Float64Array.from({ length: widthPx * heightPx }, (_, i) => {
    const at = i * channels;
    return Math.round(0.299 * pixels[at] + 0.587 * pixels[at + 1] + 0.114 * pixels[at + 2]);
  });
}

/** |∇| by central differences, border replicated. */
function gradients(plane: Float64Array, widthPx: number, heightPx: number): Float64Array {
  const at = (x: number, y: number) =>
    plane[Math.max(0, Math.min(heightPx - 1, y)) * widthPx + Math.max(0, Math.min(widthPx - 1, x))];
  return plane.map((_, i) => {
    const x = i % widthPx;
    const y = (i - x) / widthPx;
    return Math.hypot(at(x + 1, y) - at(x - 1, y), at(x, y + 1) - at(x, y - 1)) / 2;
  });
}

export function paintFigures(picture: DecodedPhoto): PaintFigures {
  const magnitudes = gradients(luma(picture), picture.widthPx, picture.heightPx).sort();
  let [sum, ranked] = [0, 0];
  magnitudes.forEach((value, i) => {
    sum += value;
    ranked += (i + 1) * value;
  });
  const count = magnitudes.length;
  return {
    gini: (2 * ranked) / (count * sum) - (count + 1) / count,
    flatShare: magnitudes.filter((value) => value < 1).length / count,
  };
}

function boxMean5(plane: Float64Array, widthPx: number, heightPx: number): Float64Array {
  const clamp = (v: number, last: number) => Math.max(0, Math.min(last, v));
  return plane.map((_, i) => {
    const x = i % widthPx;
    const y = (i - x) / widthPx;
    let sum = 0;
    for (let dy = -2; dy <= 2; dy++)
      for (let dx = -2; dx <= 2; dx++)
        sum += plane[clamp(y + dy, heightPx - 1) * widthPx + clamp(x + dx, widthPx - 1)];
    return sum / 25;
  });
}

function peakAround(plane: Float64Array, widthPx: number, heightPx: number, i: number): number {
  const x = i % widthPx;
  const y = (i - x) / widthPx;
  let peak = 0;
  for (let v = Math.max(0, y - 3); v <= Math.min(heightPx - 1, y + 3); v++)
    for (let u = Math.max(0, x - 3); u <= Math.min(widthPx - 1, x + 3); u++)
      peak = Math.max(peak, plane[v * widthPx + u]);
  return peak;
}

/**
 * Median, over the photo's strong edges, of the painting's local peak gradient by the photo's. Strong edges: the
 * strongest 2 % of the photo's gradients after a 5 × 5 mean; local: within 3 pixels.
 */
export function edgeRatio(photo: DecodedPhoto, painting: DecodedPhoto): number {
  const { widthPx, heightPx } = photo;
  const smoothed = gradients(boxMean5(luma(photo), widthPx, heightPx), widthPx, heightPx);
  const limit = [...smoothed].sort((a, b) => b - a)[Math.floor(smoothed.length * 0.02)];
  const before = gradients(luma(photo), widthPx, heightPx);
  const after = gradients(luma(painting), widthPx, heightPx);
  const ratios: number[] = [];
  smoothed.forEach((value, i) => {
    if (value >= limit)
      ratios.push(
        peakAround(after, widthPx, heightPx, i) / Math.max(1e-9, peakAround(before, widthPx, heightPx, i)),
      );
  });
  return ratios.sort((a, b) => a - b)[ratios.length >> 1];
}
