import { beforeAll, describe, expect, it } from 'vitest';
import { imageOf, sampleAt } from '../../../core/kernels/reference/referenceImage.ts';
import {
  dogAcrossReference,
  dogWeightsReference,
  xdogThresholdReference,
} from '../../../core/kernels/reference/xdog.reference.ts';
import { type Cv, loadOpenCv, matOf, takeValues } from '../openCv.ts';
import { testPicture } from '../testPictures.ts';
import { largestDifference } from '../wasmTiles.ts';

// Winnemöller, Kyprianidis, Olsen 2012.
describe('difference of Gaussians across the grain', () => {
  it('gives a flat region its own value, whatever p', () => {
    for (const p of [19, 49, 99]) {
      const flat = imageOf(21, 21, 1, () => 0.37);
      const s = dogAcrossReference(flat, (x, y) => x + 0.3 * y, { sigmaPx: 1.5, p });
      for (const value of s.values) expect(value).toBeCloseTo(0.37, 11);
    }
  });

  it('has p = τ/(1 − τ): S / (1 + p) is G_σ − τ·G_kσ', () => {
    for (const [tau, p] of [
      [0.95, 19],
      [0.98, 49],
      [0.99, 99],
    ]) {
      const radiusPx = 8;
      const combined = dogWeightsReference({ sigmaPx: 2, p, radiusPx });
      const narrow = dogWeightsReference({ sigmaPx: 2, p: 0, radiusPx });
      const wide = dogWeightsReference({ sigmaPx: 3.2, p: 0, radiusPx });
      combined.forEach((weight, i) => {
        expect(weight / (1 + p)).toBeCloseTo(narrow[i] - tau * wide[i], 12);
      });
    }
  });

  it('goes below the tone on the dark side of an edge and above it on the light side', () => {
    const edge = imageOf(31, 5, 1, (x) => (x < 15 ? 0.3 : 0.7));
    const s = dogAcrossReference(edge, () => Math.PI / 2, { sigmaPx: 1, p: 20 });
    expect(sampleAt(s, 14, 2)).toBeLessThan(0);
    expect(sampleAt(s, 15, 2)).toBeGreaterThan(1);
    expect(sampleAt(s, 3, 2)).toBeCloseTo(0.3, 10);
  });

  it('sees no edge that the grain runs across', () => {
    const edge = imageOf(31, 31, 1, (x) => (x < 15 ? 0.3 : 0.7));
    const s = dogAcrossReference(edge, () => 0, { sigmaPx: 1, p: 20 });
    expect(largestDifference(s.values, edge.values)).toBeLessThan(1e-10);
  });

  it('thresholds: 1 from ε on, else 1 + tanh(φ(S − ε))', () => {
    expect(xdogThresholdReference(0.1, 0.1, 6)).toBe(1);
    expect(xdogThresholdReference(5, 0.1, 6)).toBe(1);
    // tanh(−1) = −0.7615941560 (published tables).
    expect(xdogThresholdReference(-0.4, 0.1, 2)).toBeCloseTo(1 - 0.761594156, 9);
    expect(xdogThresholdReference(-50, 0.1, 6)).toBeCloseTo(0, 12);
  });
});

describe('difference of Gaussians against OpenCV', () => {
  let cv: Cv;
  beforeAll(async () => {
    ({ cv } = await loadOpenCv());
  });

  it('agrees with two one-dimensional GaussianBlurs where the grain is upright or level', () => {
    const image = testPicture(40, 30, 1);
    const [sigmaPx, p, radiusPx] = [2, 20, 7];
    for (const isUpright of [true, false]) {
      const blurred = [sigmaPx, 1.6 * sigmaPx].map((sigma) => {
        const source = matOf(cv, image);
        const target = new cv.Mat();
        const [width, height] = isUpright ? [2 * radiusPx + 1, 1] : [1, 2 * radiusPx + 1];
        cv.GaussianBlur(source, target, new cv.Size(width, height), sigma, sigma, cv.BORDER_REPLICATE);
        source.delete();
        return takeValues(target);
      });
      const expected = blurred[0].map((value, i) => (1 + p) * value - p * blurred[1][i]);
      const own = dogAcrossReference(image, () => (isUpright ? Math.PI / 2 : 0), { sigmaPx, p, radiusPx });
      // Float32 blurs, made p times larger.
      expect(largestDifference(own.values, expected)).toBeLessThan(1e-5);
    }
  });
});
