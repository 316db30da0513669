import { imageOf, type ReferenceImage, sampleBetween } from './referenceImage.ts';

/** Wider over narrower standard deviation (Winnemöller, Kyprianidis, Olsen 2012). */
const k = 1.6;
/** Standard deviations of the wider Gaussian at which the line ends. */
const cut = 2.5;
/** Slopes that have weights of their own, 0 … 1 in steps of 1/32. */
const slopeSteps = 32;

const gaussian = (d: number, sigma: number) => Math.exp(-(d * d) / (2 * sigma * sigma));

/** Steps of the line on each side of a pixel. */
export function dogLineReach(sigmaPx: number): number {
  return Math.ceil(cut * k * sigmaPx);
}

/**
 * Weights of S = (1+p)·G_σ − p·G_kσ at steps 0 … reach of a line whose samples are √(1 + slope²) pixels apart,
 * each Gaussian normalised over the samples of both sides.
 * @param slope 0…1
 */
export function dogLineWeightsReference(sigmaPx: number, p: number, slope: number): number[] {
  const spacing = Math.hypot(1, slope);
  const steps = Array.from({ length: dogLineReach(sigmaPx) + 1 }, (_, j) => j * spacing);
  const sampled = (sigma: number) => {
    const raw = steps.map((d) => gaussian(d, sigma));
    const sum = raw.reduce((total, weight) => total + 2 * weight, 0) - raw[0];
    return raw.map((weight) => weight / sum);
  };
  const wide = sampled(k * sigmaPx);
  return sampled(sigmaPx).map((weight, j) => (1 + p) * weight - p * wide[j]);
}

/**
 * Difference of Gaussians across the grain, as the ink line is defined: the line at right angles to the grain is
 * sampled once a pixel of its major axis, linearly between the two pixels of the minor axis that it passes; its
 * weights are those of the nearest of 33 slopes. The four pixels of a block share a direction. Border: replicate.
 * @param luma one channel; not modified
 * @param vectorAt x, y along the grain of a block of 2 × 2 pixels
 */
export function dogLineReference(
  luma: ReferenceImage,
  vectorAt: (blockX: number, blockY: number) => readonly [number, number],
  sigmaPx: number,
  p: number,
): ReferenceImage {
  return imageOf(luma.widthPx, luma.heightPx, 1, (x, y) => {
    const [tangentX, tangentY] = vectorAt(x >> 1, y >> 1);
    const isFlat = Math.abs(tangentY) >= Math.abs(tangentX);
    // float32, so that the slope's weights are chosen as the kernel chooses them.
    const slope = Math.fround(isFlat ? -tangentX / tangentY : -tangentY / tangentX);
    const nearest = Math.floor(Math.abs(slope) * slopeSteps + 0.5) / slopeSteps;
    const at = (step: number) =>
      isFlat
        ? sampleBetween(luma, x + step, y + step * slope)
        : sampleBetween(luma, x + step * slope, y + step);
    return dogLineWeightsReference(sigmaPx, p, nearest).reduce(
      (sum, weight, j) => sum + weight * (j === 0 ? at(0) : at(j) + at(-j)),
      0,
    );
  });
}
