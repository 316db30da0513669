import type { Triple } from '../colour/lab.ts';

/** Three rows of three. */
export type Matrix3 = readonly [Triple, Triple, Triple];

/**
 * An affine map of Oklab colours, `matrix · (L, a, b) + offset`. It goes into job keys and run logs as it stands:
 * plain numbers, rounded (`roundedToneMap`), so that every machine writes the same text.
 */
export interface ToneMap {
  readonly matrix: Matrix3;
  readonly offset: Triple;
}

/** @returns the mapped colour; nothing is clipped */
export function applyToneMap(map: ToneMap, [l, a, b]: Triple): Triple {
  const [x, y, z] = map.matrix.map((row, i) => row[0] * l + row[1] * a + row[2] * b + map.offset[i]);
  return [x, y, z];
}

/** Steps that a map is rounded to: far below a step of 16 bits, coarse enough to swallow a last bit's difference. */
const steps = 2 ** 20;

/** The same map in multiples of 2⁻²⁰, which single precision holds exactly for numbers below 16. */
export function roundedToneMap(map: ToneMap): ToneMap {
  const rounded = (row: Triple): Triple => {
    const [x, y, z] = row.map((value) => Math.round(value * steps) / steps + 0);
    return [x, y, z];
  };
  const [l, a, b] = map.matrix;
  return { matrix: [rounded(l), rounded(a), rounded(b)], offset: rounded(map.offset) };
}
