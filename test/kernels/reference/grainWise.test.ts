import { describe, expect, it } from 'vitest';
import { grainOfNumbers } from '../../../core/kernels/reference/grain.reference.ts';
import {
  chooseSectorsReference,
  grainWiseBankReference,
  grainWiseReference,
  sectorsAtReference,
  windowSamplesReference,
} from '../../../core/kernels/reference/grainWise.reference.ts';
import { imageOf, sampleAt } from '../../../core/kernels/reference/referenceImage.ts';
import {
  eta,
  falloff,
  rawSectorWeight,
  sectorCount,
  sectorWeightsReference,
  zeta,
} from '../../../core/kernels/reference/sectorWeights.reference.ts';
import { mirror, quarterTurn, rangeAround, testPicture } from '../testPictures.ts';
import { largestDifference } from '../wasmTiles.ts';

const brush = { radiusPx: 3, pull: 1, noiseFloor: 0.01, crispness: 8 };

// Kyprianidis, Semmo, Kang, Döllner 2010, on the unit disc; numbers computed independently of the project.
describe('sector weights, computed numbers', () => {
  it('has ζ = 1/3 and η = 3.7737621', () => {
    expect(zeta).toBeCloseTo(1 / 3, 12);
    expect(eta).toBeCloseTo(3.7737621, 7);
  });

  it('is even in the middle', () => {
    for (let k = 0; k < sectorCount; k++) expect(rawSectorWeight(k, 0, 0)).toBeCloseTo(0.111111, 6);
    for (const weight of sectorWeightsReference(0, 0)) expect(weight).toBeCloseTo(0.125, 12);
    expect(falloff(0, 0)).toBe(1);
  });

  it('at (.5, 0)', () => {
    expect(rawSectorWeight(0, 0.5, 0)).toBeCloseTo(0.694444, 6);
    expect(rawSectorWeight(1, 0.5, 0)).toBeCloseTo(0.046297, 6);
    expect(rawSectorWeight(7, 0.5, 0)).toBeCloseTo(0.046297, 6);
    expect(falloff(0.5, 0)).toBeCloseTo(0.457833, 6);
    const shares = sectorWeightsReference(0.5, 0).map((weight) => weight / falloff(0.5, 0));
    for (const [k, share] of [0.882352, 0.058824, 0, 0, 0, 0, 0, 0.058824].entries())
      expect(shares[k]).toBeCloseTo(share, 5);
  });

  it('is shared by two sectors on the rim between them', () => {
    const angle = Math.PI / 8;
    const shares = sectorWeightsReference(Math.cos(angle), Math.sin(angle)).map(
      (weight) => weight / falloff(1, 0),
    );
    for (const [k, share] of [0.5, 0.5, 0, 0, 0, 0, 0, 0].entries()) expect(shares[k]).toBeCloseTo(share, 10);
  });

  it('never runs out: Σ raw weights ≥ .67376 on the whole disc', () => {
    let least = Number.POSITIVE_INFINITY;
    for (let ring = 0; ring <= 200; ring++)
      for (let turn = 0; turn < 360; turn++) {
        const [x, y] = [Math.cos, Math.sin].map((along) => (ring / 200) * along((turn * Math.PI) / 180));
        let sum = 0;
        for (let k = 0; k < sectorCount; k++) sum += rawSectorWeight(k, x, y);
        least = Math.min(least, sum);
      }
    expect(least).toBeGreaterThanOrEqual(0.67376);
    expect(least).toBeLessThan(0.675);
  });
});

describe('grain-wise smoothing', () => {
  const numbersAt = (x: number, y: number) => ({
    orientation: (5 * x + 3 * y) % 64,
    anisotropy: (x + y) % 16,
  });

  it('has windows as long and as wide as the ellipse, and as large as its area', () => {
    const samples = windowSamplesReference(6, 1, 0, 1);
    expect(Math.max(...samples.map(({ dx }) => dx))).toBe(12);
    expect(Math.max(...samples.map(({ dy }) => dy))).toBe(3);
    // Area πr² whatever the anisotropy, up to the pixels that the rim cuts.
    for (const [tangentRad, anisotropy] of [
      [0.3, 0.4],
      [1.2, 0.9],
      [2.7, 0],
    ])
      expect(windowSamplesReference(9, 1, tangentRad, anisotropy).length / (Math.PI * 81)).toBeCloseTo(1, 1);
  });

  it('holds to Σ of the channels’ variances = E|c|² − |E c|²', () => {
    const image = testPicture(15, 15);
    const samples = windowSamplesReference(4, 1, 0.7, 0.5);
    sectorsAtReference(image, 7, 7, samples).forEach(({ spread, mean }, k) => {
      let variances = 0;
      const total = samples.reduce((sum, { weights }) => sum + weights[k], 0);
      for (let c = 0; c < 3; c++)
        for (const { dx, dy, weights } of samples)
          variances += (weights[k] / total) * (sampleAt(image, 7 + dx, 7 + dy, c) - mean[c]) ** 2;
      expect(spread ** 2).toBeCloseTo(variances, 12);
    });
  });

  it('takes the mean of all sectors where none stands out from the noise, else the calmest', () => {
    const sectors = [0.2, 0.001, 0.3].map((spread, i) => ({ mean: [i, i, i], spread }));
    expect(chooseSectorsReference(sectors, 0.5, 8)[0]).toBeCloseTo(1, 12);
    expect(
      chooseSectorsReference([{ mean: [0, 0, 0], spread: 0.2 }, ...sectors.slice(1)], 0.01, 8)[0],
    ).toBeCloseTo(1, 6);
  });

  it('leaves a flat picture as it is and stays within the colours of the window', () => {
    const flat = imageOf(9, 7, 3, (_x, _y, c) => [0.1, 0.5, 0.9][c]);
    expect(
      largestDifference(grainWiseBankReference(flat, numbersAt, brush).values, flat.values),
    ).toBeLessThan(1e-14);
    const image = testPicture(13, 9);
    const painted = grainWiseBankReference(image, numbersAt, brush);
    for (let y = 0; y < 9; y++)
      for (let x = 0; x < 13; x++)
        for (let c = 0; c < 3; c++) {
          const { least, greatest } = rangeAround(image, x, y, c, 6);
          expect(sampleAt(painted, x, y, c)).toBeGreaterThanOrEqual(least - 1e-12);
          expect(sampleAt(painted, x, y, c)).toBeLessThanOrEqual(greatest + 1e-12);
        }
  });

  it('turns and mirrors with the picture and its grain', () => {
    const image = testPicture(13, 9);
    const painted = grainWiseBankReference(image, numbersAt, brush);
    const turned = grainWiseBankReference(
      quarterTurn(image),
      (x, y) => {
        const { orientation, anisotropy } = numbersAt(y, 9 - 1 - x);
        return { orientation: (orientation + 32) % 64, anisotropy };
      },
      brush,
    );
    expect(largestDifference(turned.values, quarterTurn(painted).values)).toBeLessThan(1e-10);
    const mirrored = grainWiseBankReference(
      mirror(image),
      (x, y) => {
        const { orientation, anisotropy } = numbersAt(13 - 1 - x, y);
        return { orientation: (64 - orientation) % 64, anisotropy };
      },
      brush,
    );
    expect(largestDifference(mirrored.values, mirror(painted).values)).toBeLessThan(1e-10);
  });

  it('follows the number of the bank to the angle it stands for', () => {
    const image = testPicture(9, 9);
    const byAngle = grainWiseReference(image, () => grainOfNumbers(11, 9), brush);
    const byNumber = grainWiseBankReference(image, () => ({ orientation: 11, anisotropy: 9 }), brush);
    expect(byNumber.values).toEqual(byAngle.values);
  });
});
