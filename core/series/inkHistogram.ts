import type { Parameters } from '../parameters/table.ts';

/**
 * How often each response S of the difference of Gaussians came up: 256 counts, by the coverage that a very soft
 * pen gives it. Bin 0 is S at or above `softPen.threshold`, bin 255 the deepest dark.
 */
export type InkHistogram = readonly number[];

/** The pen that responses are read with: so soft that coverage tells S over all the range that ink comes from. */
export const softPen = { 'line.threshold': 0.5, 'line.softness': 1 } as const;

/** φ of the soft threshold, as the line's plan has it: 1.2 over softness, at most 100. */
function steepness(softness: number): number {
  return Math.min(100, 1.2 / Math.max(softness, 1e-6));
}

export const softPhi = steepness(softPen['line.softness']);

/** More pixels tell no more. */
const mostCounted = 4_000_000;

/**
 * Counts how often each coverage comes up; of very large lines every so many pixels.
 * @param coverage drawn with the soft pen, 0…255
 */
export function countCoverage(coverage: Uint8Array): number[] {
  const counts = new Array<number>(256).fill(0);
  // Odd, so that it runs through the columns.
  const step = 2 * Math.floor(coverage.length / mostCounted / 2) + 1;
  for (let i = 0; i < coverage.length; i += step) counts[coverage[i]]++;
  return counts;
}

/** S of each bin; the last stands for all that lies below. */
const responses = Float64Array.from({ length: 256 }, (_, coverage) => {
  const c = Math.min(254.5, coverage) / 255;
  return softPen['line.threshold'] - Math.atanh(c) / steepness(softPen['line.softness']);
});

/**
 * Share of the picture that ink would cover.
 * @param histogram of one frame, read with the soft pen
 * @param threshold ε, at most the soft pen's
 * @param softness of the pen that draws
 */
export function coverageAt(histogram: InkHistogram, threshold: number, softness: number): number {
  const phi = steepness(softness);
  let [inked, count] = [0, 0];
  histogram.forEach((times, bin) => {
    count += times;
    const below = bin === 0 ? 0 : Math.min(0, responses[bin] - threshold);
    inked -= times * Math.tanh(phi * below);
  });
  return count > 0 ? inked / count : 0;
}

/** Rounds of halving the interval: a hundred-thousandth of it is left. */
const halvings = 18;
/** Lowest threshold tried: hardly a response lies below. */
const lowest = -0.4;
/** Highest, as a multiple of the preset's own: beyond, plain dark planes would be inked over. */
const highestFactor = 2;

/** The highest ε that `thresholdForCoverage` gives: responses above it need not be told apart. */
export function highestThreshold(own: number): number {
  return Math.min(softPen['line.threshold'], highestFactor * own);
}

/**
 * The ink threshold that makes a frame's line coverage equal the lead's (coverage rises with the threshold).
 * @param wanted coverage of the lead, 0…1
 * @param parameters of the frame's state, for the softness of its pen
 * @returns ε, rounded to a ten-thousandth; the nearest possible where the frame cannot reach it
 */
export function thresholdForCoverage(
  histogram: InkHistogram,
  wanted: number,
  parameters: Parameters,
): number {
  let [low, high]: [number, number] = [lowest, highestThreshold(parameters['line.threshold'])];
  for (let round = 0; round < halvings; round++) {
    const middle = (low + high) / 2;
    if (coverageAt(histogram, middle, parameters['line.softness']) < wanted) low = middle;
    else high = middle;
  }
  return Math.round(((low + high) / 2) * 1e4) / 1e4;
}
