import type { Triple } from '../colour/lab.ts';
import type { Matrix3 } from './toneMap.ts';

const identity: Matrix3 = [
  [1, 0, 0],
  [0, 1, 0],
  [0, 0, 1],
];
/** Sweeps of Jacobi's method: three by three is diagonal to the last bit after five or six. */
const sweeps = 12;

/** left · right */
export function product(left: Matrix3, right: Matrix3): Matrix3 {
  const row = (of: Triple): Triple => [
    of[0] * right[0][0] + of[1] * right[1][0] + of[2] * right[2][0],
    of[0] * right[0][1] + of[1] * right[1][1] + of[2] * right[2][1],
    of[0] * right[0][2] + of[1] * right[1][2] + of[2] * right[2][2],
  ];
  return [row(left[0]), row(left[1]), row(left[2])];
}

export function transposed([a, b, c]: Matrix3): Matrix3 {
  return [
    [a[0], b[0], c[0]],
    [a[1], b[1], c[1]],
    [a[2], b[2], c[2]],
  ];
}

/** V · diag(values) · Vᵀ */
export function composed(vectors: Matrix3, values: Triple): Matrix3 {
  const diagonal: Matrix3 = [
    [values[0], 0, 0],
    [0, values[1], 0],
    [0, 0, values[2]],
  ];
  return product(product(vectors, diagonal), transposed(vectors));
}

/**
 * Eigenvalues and eigenvectors of a symmetric matrix by Jacobi's rotations.
 * @param matrix symmetric; not modified
 * @returns values in no particular order; vectors are the columns, of length 1
 */
export function eigenOf(matrix: Matrix3): { values: Triple; vectors: Matrix3 } {
  let diagonal = matrix;
  let vectors = identity;
  for (let sweep = 0; sweep < sweeps; sweep++) {
    for (const [p, q] of [
      [0, 1],
      [0, 2],
      [1, 2],
    ]) {
      const rotation = rotationOf(diagonal, p, q);
      if (!rotation) continue;
      diagonal = product(product(transposed(rotation), diagonal), rotation);
      vectors = product(vectors, rotation);
    }
  }
  return { values: [diagonal[0][0], diagonal[1][1], diagonal[2][2]], vectors };
}

/** The rotation that makes element (p, q) vanish; null where it is 0 already. */
function rotationOf(matrix: Matrix3, p: number, q: number): Matrix3 | null {
  const element = matrix[p][q];
  if (element === 0) return null;
  const theta = (matrix[q][q] - matrix[p][p]) / (2 * element);
  const t = (theta < 0 ? -1 : 1) / (Math.abs(theta) + Math.sqrt(theta * theta + 1));
  const c = 1 / Math.sqrt(t * t + 1);
  const s = t * c;
  const rows = identity.map((row) => [...row]);
  rows[p][p] = c;
  rows[q][q] = c;
  rows[p][q] = s;
  rows[q][p] = -s;
  return rows as unknown as Matrix3;
}

/** Applies a function to the eigenvalues of a symmetric matrix. */
export function withValues(matrix: Matrix3, of: (value: number) => number): Matrix3 {
  const { values, vectors } = eigenOf(matrix);
  return composed(vectors, [of(values[0]), of(values[1]), of(values[2])]);
}
