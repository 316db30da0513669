import { beforeAll, describe, expect, it } from 'vitest';
import {
  mongeKantorovichMap,
  mongeKantorovichMatrix,
  partOfMap,
} from '../../core/series/mongeKantorovich.ts';
import { composed, eigenOf, product, transposed, withValues } from '../../core/series/symmetricMatrix.ts';
import { applyToneMap, type Matrix3 } from '../../core/series/toneMap.ts';
import { type Cv, loadOpenCv } from '../kernels/openCv.ts';
import { seededNormal } from '../kernels/testPictures.ts';

const su: Matrix3 = [
  [4, 1, 0],
  [1, 3, 0.5],
  [0, 0.5, 2],
];
const sv: Matrix3 = [
  [2, -0.3, 0.2],
  [-0.3, 5, 1],
  [0.2, 1, 1.5],
];

function someCovariance(seed: number): Matrix3 {
  const normal = seededNormal(seed);
  const root = [0, 1, 2].map(() => [normal(), normal(), normal()]) as unknown as Matrix3;
  return product(root, transposed(root));
}

function expectClose(actual: Matrix3, expected: Matrix3, digits: number): void {
  actual.flat().forEach((value, i) => {
    expect(value).toBeCloseTo(expected.flat()[i], digits);
  });
}

describe('the linear Monge–Kantorovich map', () => {
  // Computed independently of the project from the published formula (Pitié and Kokaram, CVMP 2007).
  it('gives the worked value', () => {
    expectClose(
      mongeKantorovichMatrix(su, sv),
      [
        [0.738003, -0.196027, 0.060598],
        [-0.196027, 1.323331, 0.075614],
        [0.060598, 0.075614, 0.835412],
      ],
      6,
    );
  });

  it('takes the one covariance to the other: T·Su·T = Sv', () => {
    for (let seed = 1; seed < 20; seed++) {
      const [from, to] = [someCovariance(seed), someCovariance(seed + 100)];
      const map = mongeKantorovichMatrix(from, to);
      expectClose(product(product(map, from), transposed(map)), to, 6);
    }
  });

  it('takes mean to mean, and stretches no axis beyond the limits', () => {
    const frame = { mean: [0.5, 0.01, -0.02] as const, covariance: withValues(su, (v) => v / 1000) };
    const lead = { mean: [0.6, 0, 0.03] as const, covariance: withValues(sv, (v) => v) };
    const map = mongeKantorovichMap(frame, lead, { least: 0.5, most: 2 });
    applyToneMap(map, frame.mean).forEach((value, i) => {
      expect(value).toBeCloseTo(lead.mean[i], 12);
    });
    for (const value of eigenOf(map.matrix).values) {
      expect(value).toBeLessThanOrEqual(2 + 1e-12);
      expect(value).toBeGreaterThanOrEqual(0.5 - 1e-12);
    }
  });

  it('changes nothing at amount 0, everything at 1', () => {
    const map = { matrix: su, offset: [1, 2, 3] as const };
    expect(partOfMap(map, 1)).toEqual(map);
    expect(applyToneMap(partOfMap(map, 0), [0.3, 0.1, -0.2])).toEqual([0.3, 0.1, -0.2]);
  });
});

describe('square roots of symmetric matrices', () => {
  let cv: Cv;
  beforeAll(async () => {
    ({ cv } = await loadOpenCv());
  });

  it('agree with the eigenvalues and eigenvectors that OpenCV finds', () => {
    for (let seed = 1; seed < 20; seed++) {
      const matrix = someCovariance(seed);
      const source = cv.matFromArray(3, 3, cv.CV_64FC1, matrix.flat());
      const [values, vectors] = [new cv.Mat(), new cv.Mat()];
      cv.eigen(source, values, vectors);
      // OpenCV gives eigenvectors as rows.
      const rows = [0, 1, 2].map((i) => [...vectors.data64F.slice(3 * i, 3 * i + 3)]) as unknown as Matrix3;
      const [a, b, c] = [...values.data64F].map(Math.sqrt);
      expectClose(withValues(matrix, Math.sqrt), composed(transposed(rows), [a, b, c]), 9);
      for (const mat of [source, values, vectors]) mat.delete();
    }
  });
});
