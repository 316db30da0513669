import { type ReferenceImage, sampleAt } from './referenceImage.ts';

/** Steps on each side: 2 σ. */
export function streamlineStepsReference(sigmaPx: number, stepPx: number): number {
  return Math.ceil((2 * sigmaPx) / stepPx);
}

/** Gaussian weights at steps 0 … steps, normalised over both sides together. */
export function streamlineWeightsReference(sigmaPx: number, stepPx: number, steps: number): number[] {
  const raw = Array.from({ length: steps + 1 }, (_, i) =>
    Math.exp(-((i * stepPx) ** 2) / (2 * sigmaPx ** 2)),
  );
  const sum = raw.reduce((total, weight) => total + 2 * weight, 0) - raw[0];
  return raw.map((weight) => weight / sum);
}

/** Along the grain of a block, in whole 16384ths: every place of the walk is then exact in doubles too. */
export type VectorAt = (blockX: number, blockY: number) => readonly [number, number];

/**
 * S smoothed along the grain at one pixel (Kyprianidis and Döllner 2008): streamlines to both sides by
 * second-order Runge–Kutta steps through the block vectors, S read at the pixel that each step meets. A vector
 * that points back is turned round.
 * @param across S across the grain; not modified
 */
export function streamlineReference(
  across: ReferenceImage,
  vectorAt: VectorAt,
  xPx: number,
  yPx: number,
  stepPx: number,
  weights: readonly number[],
): number {
  let sum = weights[0] * sampleAt(across, xPx, yPx);
  for (const side of [1, -1]) {
    let [x, y] = [xPx + 0.5, yPx + 0.5];
    let [dx, dy] = vectorAt(xPx >> 1, yPx >> 1).map((part) => part * side);
    for (let i = 1; i < weights.length; i++) {
      const middleX = Math.floor(x + 0.5 * stepPx * dx);
      const middleY = Math.floor(y + 0.5 * stepPx * dy);
      const [vx, vy] = vectorAt(middleX >> 1, middleY >> 1);
      const forward = vx * dx + vy * dy < 0 ? -1 : 1;
      [dx, dy] = [vx * forward, vy * forward];
      x += stepPx * dx;
      y += stepPx * dy;
      sum += weights[i] * sampleAt(across, Math.floor(x), Math.floor(y));
    }
  }
  return sum;
}
