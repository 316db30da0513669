import { describe, expect, it } from 'vitest';
import { defaultParameters } from '../../core/parameters/table.ts';
import { coverageAt, thresholdForCoverage } from '../../core/series/inkHistogram.ts';
import { seededNormal } from '../kernels/testPictures.ts';

const softness = 0.2;

/** Coverage by the definition of the soft threshold (XDoG, Winnemöller, Kyprianidis, Olsen 2012), φ = 1.2/softness. */
const ink = (s: number, epsilon: number, soft: number) =>
  s >= epsilon ? 0 : -Math.tanh((1.2 / soft) * (s - epsilon));

/** Responses as a photo has them: most high, some below the threshold; and what the soft pen makes of them. */
function someResponses(seed: number, darker: number) {
  const normal = seededNormal(seed);
  const responses = Array.from({ length: 40_000 }, () => 0.45 - darker + 0.18 * normal());
  const histogram = new Array<number>(256).fill(0);
  for (const s of responses) histogram[Math.round(255 * ink(s, 0.5, 1))]++;
  return { responses, histogram };
}

describe('coverage from a histogram of responses', () => {
  it.each([0.05, 0.1, 0.24])('is that of the responses themselves, at ε = %d', (epsilon) => {
    const { responses, histogram } = someResponses(1, 0);
    const direct = responses.reduce((sum, s) => sum + ink(s, epsilon, softness), 0) / responses.length;
    expect(coverageAt(histogram, epsilon, softness)).toBeCloseTo(direct, 3);
  });

  it('makes a darker frame take a lower threshold for the same coverage', () => {
    const parameters = { ...defaultParameters(), 'line.softness': softness };
    const wanted = coverageAt(someResponses(2, 0).histogram, 0.1, softness);
    const { responses, histogram } = someResponses(3, 0.08);
    const epsilon = thresholdForCoverage(histogram, wanted, parameters);
    expect(epsilon).toBeLessThan(0.1);
    const direct = responses.reduce((sum, s) => sum + ink(s, epsilon, softness), 0) / responses.length;
    expect(Math.abs(direct - wanted)).toBeLessThan(0.03 * wanted);
  });

  it('stays within reach where the coverage cannot be had', () => {
    const parameters = defaultParameters();
    const { histogram } = someResponses(4, 0);
    expect(thresholdForCoverage(histogram, 1, parameters)).toBeCloseTo(0.2, 3);
  });
});
