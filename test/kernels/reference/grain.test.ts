import { beforeAll, describe, expect, it } from 'vitest';
import {
  grainOfNumbers,
  grainReference,
  quantiseGrain,
} from '../../../core/kernels/reference/grain.reference.ts';
import { ellipseAxes } from '../../../core/kernels/reference/grainWise.reference.ts';
import { imageOf, sampleAt } from '../../../core/kernels/reference/referenceImage.ts';
import { structureTensorReference } from '../../../core/kernels/reference/tensor.reference.ts';
import { type Cv, loadOpenCv } from '../openCv.ts';
import { seededRandom } from '../testPictures.ts';

const degrees = (rad: number) => (rad * 180) / Math.PI;

// Numbers computed independently of the project from the published definition.
describe('grain, computed numbers', () => {
  it('of (.05, .02, .02)', () => {
    const grain = grainReference(0.05, 0.02, 0.02);
    expect(grain.lambda1).toBeCloseTo(0.06, 12);
    expect(grain.lambda2).toBeCloseTo(0.01, 12);
    expect(grain.anisotropy).toBeCloseTo(0.7142857, 7);
    expect(degrees(grain.tangentRad)).toBeCloseTo(180 - 63.4349, 4);
    const { aPx, bPx } = ellipseAxes(6, 1, grain.anisotropy);
    expect(aPx).toBeCloseTo(10.2857, 4);
    expect(bPx).toBeCloseTo(3.5, 10);
  });

  it('of (.09, .03, .01)', () => {
    const grain = grainReference(0.09, 0.03, 0.01);
    expect(grain.anisotropy).toBeCloseTo(1, 12);
    expect(degrees(grain.tangentRad)).toBeCloseTo(180 - 71.5651, 4);
    const { aPx, bPx } = ellipseAxes(6, 1, grain.anisotropy);
    expect(aPx).toBeCloseTo(12, 10);
    expect(bPx).toBeCloseTo(3, 10);
  });
});

describe('grain', () => {
  it('has no direction where nothing changes', () => {
    expect(grainReference(0, 0, 0)).toMatchObject({ lambda1: 0, lambda2: 0, anisotropy: 0 });
  });

  it('runs along stripes, whatever their direction', () => {
    for (let stripeDegrees = 0; stripeDegrees < 180; stripeDegrees += 15) {
      const along = (stripeDegrees * Math.PI) / 180;
      const stripes = imageOf(
        41,
        41,
        3,
        (x, y) => 0.5 + 0.4 * Math.sin(0.7 * (-Math.sin(along) * (x - 20) + Math.cos(along) * (y - 20))),
      );
      const { e, f, g } = structureTensorReference(stripes, 2);
      const grain = grainReference(sampleAt(e, 20, 20), sampleAt(f, 20, 20), sampleAt(g, 20, 20));
      const apart = Math.abs(degrees(grain.tangentRad) - stripeDegrees);
      expect(Math.min(apart, 180 - apart)).toBeLessThan(0.2);
      expect(grain.anisotropy).toBeGreaterThan(0.99);
    }
  });

  it('takes the nearest number of the bank, around the turn as well', () => {
    for (let orientation = 0; orientation < 64; orientation++)
      for (let anisotropy = 0; anisotropy < 16; anisotropy++) {
        const numbers = { orientation, anisotropy };
        expect(quantiseGrain(grainOfNumbers(orientation, anisotropy))).toEqual(numbers);
      }
    const almostTurned = Math.PI - Math.PI / 129;
    expect(quantiseGrain({ tangentRad: almostTurned, anisotropy: 0 }).orientation).toBe(0);
    const random = seededRandom(4);
    for (let i = 0; i < 500; i++) {
      const grain = { tangentRad: random() * Math.PI, anisotropy: random() };
      const { orientation, anisotropy } = quantiseGrain(grain);
      const near = grainOfNumbers(orientation, anisotropy);
      const apart = Math.abs(near.tangentRad - grain.tangentRad);
      expect(Math.min(apart, Math.PI - apart)).toBeLessThanOrEqual(Math.PI / 128 + 1e-12);
      expect(Math.abs(near.anisotropy - grain.anisotropy)).toBeLessThanOrEqual(1 / 30 + 1e-12);
    }
  });
});

describe('grain against OpenCV', () => {
  let cv: Cv;
  beforeAll(async () => {
    ({ cv } = await loadOpenCv());
  });

  it('has the eigenvalues that eigen finds; the tangent is the eigenvector of the lesser', () => {
    const random = seededRandom(12);
    for (let i = 0; i < 200; i++) {
      const [a, b, c, d] = [random(), random(), random(), random()].map((value) => value - 0.5);
      // A sum of two squares is positive semi-definite, as tensors are.
      const [e, f, g] = [a * a + b * b, a * c + b * d, c * c + d * d];
      const matrix = cv.matFromArray(2, 2, cv.CV_64F, [e, f, f, g]);
      const values = new cv.Mat();
      const vectors = new cv.Mat();
      cv.eigen(matrix, values, vectors);
      const grain = grainReference(e, f, g);
      expect(grain.lambda1).toBeCloseTo(values.data64F[0], 10);
      expect(grain.lambda2).toBeCloseTo(values.data64F[1], 10);
      const [vx, vy] = vectors.data64F.slice(2, 4);
      const sine = Math.cos(grain.tangentRad) * vy - Math.sin(grain.tangentRad) * vx;
      expect(Math.abs(sine)).toBeLessThan(1e-6);
      for (const mat of [matrix, values, vectors]) mat.delete();
    }
  });
});
