import type { Triple } from '../colour/lab.ts';
import { product, withValues } from './symmetricMatrix.ts';
import type { Matrix3, ToneMap } from './toneMap.ts';

/** Mean and covariance of the colours of a picture. */
export interface ColourMoments {
  readonly mean: Triple;
  readonly covariance: Matrix3;
}

/** How far a colour axis may be stretched or pressed together. */
export interface StretchLimits {
  readonly least: number;
  readonly most: number;
}

/** Beyond that, what is stretched is noise and steps of 8 bits, not tone. */
export const stretchLimits: StretchLimits = { least: 0.4, most: 2.5 };

/** Below this variance an axis holds no colour to speak of: it is left as it is rather than blown up. */
const leastVariance = 1e-7;

/**
 * T = Su^−½ (Su^½ Sv Su^½)^½ Su^−½, the linear map of least cost that gives colours of covariance Su the covariance
 * Sv (F. Pitié, A. Kokaram, CVMP 2007). Symmetric and positive.
 * @param su @param sv symmetric, not negative; axes of (nearly) no variance are taken as having a little
 */
export function mongeKantorovichMatrix(su: Matrix3, sv: Matrix3): Matrix3 {
  const root = withValues(su, (value) => Math.sqrt(Math.max(leastVariance, value)));
  const inverse = withValues(su, (value) => 1 / Math.sqrt(Math.max(leastVariance, value)));
  const between = withValues(product(product(root, sv), root), (value) => Math.sqrt(Math.max(0, value)));
  return product(product(inverse, between), inverse);
}

/**
 * The map that takes a frame's colours to the lead's: mean to mean, covariance to covariance as far as the limits
 * allow. The limits hold for each axis of the map (its singular values).
 */
export function mongeKantorovichMap(
  frame: ColourMoments,
  lead: ColourMoments,
  limits: StretchLimits = stretchLimits,
): ToneMap {
  const full = mongeKantorovichMatrix(frame.covariance, lead.covariance);
  const matrix = withValues(full, (value) => Math.min(limits.most, Math.max(limits.least, value)));
  return { matrix, offset: offsetFor(matrix, frame.mean, lead.mean) };
}

/** The offset that takes one mean to another under a matrix. */
export function offsetFor(matrix: Matrix3, from: Triple, to: Triple): Triple {
  const [x, y, z] = matrix.map((row, i) => to[i] - (row[0] * from[0] + row[1] * from[1] + row[2] * from[2]));
  return [x, y, z];
}

/** Part of the way from no change to a map: `amount01` 0 changes nothing, 1 is the whole map. */
export function partOfMap(map: ToneMap, amount01: number): ToneMap {
  const part = (row: Triple, i: number): Triple => {
    const [x, y, z] = row.map((value, j) => {
      const unchanged = i === j ? 1 : 0;
      return unchanged + amount01 * (value - unchanged);
    });
    return [x, y, z];
  };
  const [x, y, z] = map.offset;
  const [l, a, b] = map.matrix;
  return {
    matrix: [part(l, 0), part(a, 1), part(b, 2)],
    offset: [amount01 * x, amount01 * y, amount01 * z],
  };
}
