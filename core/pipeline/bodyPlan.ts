import { type LengthScale, lengthToPx } from '../parameters/lengths.ts';
import { ParameterError } from '../parameters/parameterError.ts';
import type { Parameters } from '../parameters/table.ts';

/** How one body is painted, in numbers of the level that is finest in this painting. */
export interface BodyPlan {
  method: Parameters['body.method'];
  /** Levels painted, 1 for the single-scale methods. Level 0 is the finest of this painting. */
  levelCount: number;
  /** Radius of the window at every level, in pixels of that level. */
  radiusPx: number;
  pull: number;
  crispness: number;
  /** Noise floor of the finest level, encoded units; it halves at each coarser one. */
  noiseFloor: number;
  hold: number;
  coats: number;
}

/** Widest windows of the single-scale methods: their cost grows with the square of the radius. */
const widestRadiusPx: Record<Parameters['body.method'], number> = {
  'multi-scale': Number.POSITIVE_INFINITY,
  'grain-wise': 48,
  sectors: 48,
  bilateral: 48,
  quadrant: 512,
};

/** Brush width, in pixels, above which another level is added: base radii stay within 3–6 px. */
const levelStepPx = 6;

/**
 * Number of levels for a brush: L = max(1, floor(log2(B/6)) + 1).
 * @param brushPx B, window diameter at the finest level
 */
export function levelCountFor(brushPx: number): number {
  let count = 1;
  for (let width = levelStepPx * 2; width <= brushPx; width *= 2) count++;
  return count;
}

/**
 * Turns parameters into a plan.
 * @param level pyramid level painted as the finest: lengths and noise floor follow the halving
 * @param noiseFloor the photo's measured noise floor at full resolution, used where the parameter says `auto`
 * @throws ParameterError where a single-scale method is asked for a window it cannot afford
 */
export function planBody(
  parameters: Parameters,
  scale: LengthScale,
  level: number,
  noiseFloor: number,
): BodyPlan {
  const method = parameters['body.method'];
  const fullBrushPx = lengthToPx(parameters['body.brush'], scale);
  const brushPx = Math.max(2, fullBrushPx / 2 ** level);
  const asked = parameters['body.noiseFloor'];
  const levelCount = method === 'multi-scale' ? levelCountFor(brushPx) : 1;
  const radiusPx = method === 'multi-scale' ? brushPx / 2 ** levelCount : brushPx / 2;
  if (radiusPx > widestRadiusPx[method]) {
    throw new ParameterError(
      'body.brush',
      `at most ${2 * widestRadiusPx[method]} px with the method ${method} (multi-scale paints wider brushes)`,
      `${parameters['body.brush']} = ${Math.round(fullBrushPx)} px on this photo`,
    );
  }
  return {
    method,
    levelCount,
    radiusPx: method === 'quadrant' ? Math.max(1, Math.round(radiusPx)) : radiusPx,
    pull: method === 'sectors' ? 0 : parameters['body.pull'],
    crispness: parameters['body.crispness'],
    noiseFloor: (asked === 'auto' ? noiseFloor : asked) / 2 ** level,
    hold: parameters['body.hold'],
    coats: method === 'multi-scale' ? parameters['body.coats'] : 0,
  };
}

/**
 * Halo of a smoothing pass: the bank's reach, or what the grain needs (Gaussian of three blocks and the
 * derivative's pixel), whichever is wider; even, because tiles are cut in blocks of two.
 */
export function passHaloPx(plan: BodyPlan): number {
  const reachPx = Math.ceil(plan.radiusPx * (1 + plan.pull));
  return 2 * Math.ceil(Math.max(reachPx, grainHaloPx) / 2);
}

/**
 * Least noise floor for which a pass is smoothed in fixed point. Its squares are rounded to steps of 1.1e-5, which
 * a window averages down to about 1e-6: well below the square of this floor. Coarser levels, with lower floors
 * and few pixels, are smoothed in floating point.
 */
export const leastFixedPointFloor = 0.002;

/** Gaussian radius of the block tensor, in blocks of two pixels: 3σ for σ = 1 block = 2 px. */
export const grainRadiusBlocks = 3;
/** Pixels around a tile that its grain reads, rounded up to even. */
export const grainHaloPx = 8;
