import { type ReferenceImage, sampleAt } from './referenceImage.ts';

const f32 = Math.fround;

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

/** Along the grain of a block; the walk is in float32, as the pixel it meets is part of the definition. */
export type VectorAt = (blockX: number, blockY: number) => readonly [number, number];

/**
 * S smoothed along the grain at one pixel (Kyprianidis and Döllner 2008): streamlines to both sides by
 * second-order Runge–Kutta steps through the block vectors, S read at the pixel that each step meets. A vector
 * that points back is turned round. The walk stops at the area's rim.
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
  // Counted from the pixel's block: how a place is rounded must not depend on where the area begins.
  const corner = [xPx & ~1, yPx & ~1];
  const last = [across.widthPx - corner[0] - 0.5, across.heightPx - corner[1] - 0.5];
  const inside = (value: number, axis: number) => Math.max(-corner[axis], Math.min(f32(value), last[axis]));
  let sum = weights[0] * sampleAt(across, xPx, yPx);
  for (const side of [1, -1]) {
    let [x, y] = [xPx - corner[0] + 0.5, yPx - corner[1] + 0.5];
    let [dx, dy] = vectorAt(xPx >> 1, yPx >> 1).map((part) => part * side);
    for (let i = 1; i < weights.length; i++) {
      const middleX = corner[0] + Math.floor(inside(x + f32(0.5 * stepPx * dx), 0));
      const middleY = corner[1] + Math.floor(inside(y + f32(0.5 * stepPx * dy), 1));
      const [vx, vy] = vectorAt(middleX >> 1, middleY >> 1);
      const forward = f32(f32(vx * dx) + f32(vy * dy)) < 0 ? -1 : 1;
      [dx, dy] = [vx * forward, vy * forward];
      x = inside(x + f32(stepPx * dx), 0);
      y = inside(y + f32(stepPx * dy), 1);
      sum += weights[i] * sampleAt(across, corner[0] + Math.floor(x), corner[1] + Math.floor(y));
    }
  }
  return sum;
}
