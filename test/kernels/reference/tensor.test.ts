import { beforeAll, describe, expect, it } from 'vitest';
import { imageOf, type ReferenceImage, sampleAt } from '../../../core/kernels/reference/referenceImage.ts';
import {
  blockMeansReference,
  derivativesReference,
  gaussianReference,
  gaussianWeightsReference,
  structureTensorReference,
  tensorProductsReference,
} from '../../../core/kernels/reference/tensor.reference.ts';
import { type Cv, loadOpenCv, matOf, takeValues } from '../openCv.ts';
import { quarterTurn, testPicture } from '../testPictures.ts';
import { largestDifference } from '../wasmTiles.ts';

/** Largest error of the direction of a plane wave's gradient, in degrees, over all directions. */
function worstDirectionError(
  frequency: number,
  derivative: (image: ReferenceImage) => { dx: ReferenceImage; dy: ReferenceImage },
): number {
  let worst = 0;
  for (let degrees = 0; degrees <= 90; degrees += 1) {
    const angle = (degrees * Math.PI) / 180;
    const [wx, wy] = [frequency * Math.cos(angle), frequency * Math.sin(angle)];
    // The phase makes the middle pixel lie where the wave is steepest.
    const wave = imageOf(5, 5, 1, (x, y) => Math.sin(wx * (x - 2) + wy * (y - 2)));
    const { dx, dy } = derivative(wave);
    const found = Math.atan2(sampleAt(dy, 2, 2), sampleAt(dx, 2, 2));
    worst = Math.max(worst, Math.abs(found - angle));
  }
  return (worst * 180) / Math.PI;
}

describe('derivatives', () => {
  // Jähne, Scharr, Körkel 1999; numbers computed independently from the kernel's definition.
  it('points along plane waves to 0.12° and 0.09°', () => {
    expect(worstDirectionError(Math.PI / 4, derivativesReference)).toBeCloseTo(0.12, 2);
    expect(worstDirectionError(Math.PI / 2, derivativesReference)).toBeCloseTo(0.09, 2);
  });

  it('is exact on a slope', () => {
    const slope = imageOf(9, 9, 3, (x, y, c) => 0.01 * x * (c + 1) - 0.02 * y);
    const { dx, dy } = derivativesReference(slope);
    for (let c = 0; c < 3; c++) {
      expect(sampleAt(dx, 4, 4, c)).toBeCloseTo(0.01 * (c + 1), 12);
      expect(sampleAt(dy, 4, 4, c)).toBeCloseTo(-0.02, 12);
    }
  });
});

describe('structure tensor', () => {
  it('adds up over the channels: three equal channels count three times one', () => {
    const grey = testPicture(20, 12, 1);
    const threefold = imageOf(20, 12, 3, (x, y) => sampleAt(grey, x, y));
    const one = tensorProductsReference(grey);
    const three = tensorProductsReference(threefold);
    for (const key of ['e', 'f', 'g'] as const)
      expect(
        largestDifference(
          three[key].values,
          one[key].values.map((value) => 3 * value),
        ),
      ).toBeLessThan(1e-15);
  });

  it('exchanges E and G and the sign of F when the picture is turned by a quarter', () => {
    const image = testPicture(18, 13);
    const upright = structureTensorReference(image, 2);
    const turned = structureTensorReference(quarterTurn(image), 2);
    expect(largestDifference(turned.e.values, quarterTurn(upright.g).values)).toBeLessThan(1e-15);
    expect(largestDifference(turned.g.values, quarterTurn(upright.e).values)).toBeLessThan(1e-15);
    expect(
      largestDifference(
        turned.f.values,
        quarterTurn(upright.f).values.map((value) => -value),
      ),
    ).toBeLessThan(1e-15);
  });

  it('has Gaussian weights that sum to 1, mirror, and have the deviation asked for', () => {
    for (const sigmaPx of [1, 2, 3]) {
      const radiusPx = Math.ceil(5 * sigmaPx);
      const weights = gaussianWeightsReference(sigmaPx, radiusPx);
      expect(weights.reduce((sum, weight) => sum + weight, 0)).toBeCloseTo(1, 12);
      expect(weights).toEqual([...weights].reverse());
      const variance = weights.reduce((sum, weight, i) => sum + weight * (i - radiusPx) ** 2, 0);
      expect(Math.sqrt(variance)).toBeCloseTo(sigmaPx, 3);
    }
  });

  it('averages blocks of 2 × 2 pixels, the last one replicated at an odd edge', () => {
    const plane = imageOf(3, 2, 1, (x, y) => 10 * y + x);
    const blocks = blockMeansReference(plane);
    expect([blocks.widthPx, blocks.heightPx]).toEqual([2, 1]);
    expect(Array.from(blocks.values)).toEqual([5.5, 7]);
  });
});

describe('structure tensor against OpenCV', () => {
  let cv: Cv;
  beforeAll(async () => {
    ({ cv } = await loadOpenCv());
  });

  it('agrees with filter2D, products and GaussianBlur', () => {
    const image = testPicture(40, 28);
    const own = structureTensorReference(image, 2, 6);
    const p = 0.183;
    const column = [p / 2, (1 - 2 * p) / 2, p / 2];
    const kernelX = cv.matFromArray(
      3,
      3,
      cv.CV_32F,
      column.flatMap((weight) => [-weight, 0, weight]),
    );
    const kernelY = cv.matFromArray(3, 3, cv.CV_32F, [
      ...column.map((weight) => -weight),
      0,
      0,
      0,
      ...column,
    ]);
    const sums = { e: new Float64Array(40 * 28), f: new Float64Array(40 * 28), g: new Float64Array(40 * 28) };
    for (let c = 0; c < 3; c++) {
      const source = matOf(cv, image, c);
      const filtered = [kernelX, kernelY].map((kernel) => {
        const target = new cv.Mat();
        cv.filter2D(source, target, cv.CV_32F, kernel, new cv.Point(-1, -1), 0, cv.BORDER_REPLICATE);
        return takeValues(target);
      });
      source.delete();
      for (let i = 0; i < 40 * 28; i++) {
        sums.e[i] += filtered[0][i] ** 2;
        sums.f[i] += filtered[0][i] * filtered[1][i];
        sums.g[i] += filtered[1][i] ** 2;
      }
    }
    kernelX.delete();
    kernelY.delete();
    for (const key of ['e', 'f', 'g'] as const) {
      const source = matOf(cv, { widthPx: 40, heightPx: 28, channels: 1, values: sums[key] });
      const target = new cv.Mat();
      cv.GaussianBlur(source, target, new cv.Size(13, 13), 2, 2, cv.BORDER_REPLICATE);
      source.delete();
      expect(largestDifference(own[key].values, takeValues(target)), key).toBeLessThan(2e-7);
    }
  });

  it.each([
    [1, 3],
    [2, 6],
    [3, 9],
  ])('agrees with GaussianBlur: σ %d px, radius %d px', (sigmaPx, radiusPx) => {
    const image = testPicture(33, 21, 1);
    const source = matOf(cv, image);
    const target = new cv.Mat();
    const size = new cv.Size(2 * radiusPx + 1, 2 * radiusPx + 1);
    cv.GaussianBlur(source, target, size, sigmaPx, sigmaPx, cv.BORDER_REPLICATE);
    source.delete();
    const own = gaussianReference(image, sigmaPx, radiusPx);
    expect(largestDifference(own.values, takeValues(target))).toBeLessThan(1e-6);
  });
});
