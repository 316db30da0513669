import { readFileSync } from 'node:fs';
import { describe, expect, it } from 'vitest';
import { ciede2000 } from '../../core/colour/ciede2000.ts';
import { labOfXyz, linearOfSrgb, srgbOfLinear, type Triple, whiteD65 } from '../../core/colour/lab.ts';

describe('sRGB', () => {
  // Computed from the published definition, IEC 61966-2-1.
  it('decodes and encodes as the standard says', () => {
    const decoded = [
      [1, 0.000303527],
      [10, 0.0030352698],
      [11, 0.0033465358],
      [55, 0.0382043716],
      [128, 0.2158605001],
      [188, 0.502886458],
      [254, 0.9911020971],
    ];
    for (const [code, linear] of decoded) expect(linearOfSrgb(code / 255)).toBeCloseTo(linear, 9);
    expect(srgbOfLinear(0.18)).toBeCloseTo(0.4613561295, 9);
    expect(srgbOfLinear(0.5)).toBeCloseTo(0.7353569831, 9);
  });

  it('brings all 256 codes back', () => {
    for (let code = 0; code < 256; code++)
      expect(Math.round(srgbOfLinear(linearOfSrgb(code / 255)) * 255)).toBe(code);
  });
});

describe('L*a*b*', () => {
  it('agrees with a published worked value under D65', () => {
    const lab = labOfXyz([0.20654008, 0.12197225, 0.05136952], whiteD65);
    for (const [i, value] of [41.5278752, 52.638583, 26.923179].entries())
      expect(lab[i]).toBeCloseTo(value, 4);
  });
});

describe('CIEDE2000', () => {
  // Table 1 of G. Sharma, W. Wu, E. N. Dalal 2005; tolerance is the table's own rounding.
  const table = readFileSync(new URL('../fixtures/ciede2000-sharma-2005.csv', import.meta.url), 'utf8');
  const rows = table
    .trim()
    .split('\n')
    .slice(2)
    .map((line) => line.split(',').map(Number));

  it('gives all 34 published differences, both ways round', () => {
    expect(rows).toHaveLength(34);
    for (const [row, l1, a1, b1, l2, a2, b2, expected] of rows) {
      const [one, other]: Triple[] = [
        [l1, a1, b1],
        [l2, a2, b2],
      ];
      expect(Math.abs(ciede2000(one, other) - expected), `row ${row}`).toBeLessThan(1e-4);
      expect(Math.abs(ciede2000(other, one) - expected), `row ${row} reversed`).toBeLessThan(1e-4);
    }
  });
});
