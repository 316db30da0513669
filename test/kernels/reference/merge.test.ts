import { describe, expect, it } from 'vitest';
import { mergeReference } from '../../../core/kernels/reference/merge.reference.ts';
import { imageOf, sampleAt } from '../../../core/kernels/reference/referenceImage.ts';
import { mirror, quarterTurn, testPicture } from '../testPictures.ts';
import { largestDifference } from '../wasmTiles.ts';

const rule = { sigmaRange: 0.05, hold: 0.25 };
const grey = (widthPx: number, heightPx: number, valueAt: (x: number, y: number) => number) =>
  imageOf(widthPx, heightPx, 3, valueAt);

describe('merge', () => {
  it('leaves two equal flat levels as they are', () => {
    const merged = mergeReference(
      grey(9, 7, () => 0.4),
      grey(5, 4, () => 0.4),
      rule,
    );
    for (const value of merged.values) expect(value).toBeCloseTo(0.4, 14);
  });

  it('mixes flat levels by β = 1/(1 + (|g − F′|²/τ²)²)', () => {
    // |g − F′|² = 3·0.1² = 0.03; β = 1/(1 + (0.03/0.0625)²) = 1/1.2304; 0.5 − 0.1·β.
    const merged = mergeReference(
      grey(6, 6, () => 0.5),
      grey(3, 3, () => 0.4),
      rule,
    );
    for (const value of merged.values) expect(value).toBeCloseTo(0.5 - 0.1 / 1.2304, 12);
  });

  it('weights coarse neighbours by distance alone where σ_r is wide, as worked out by hand', () => {
    // Pixel (2, 2) lies ¼ coarse pixel left of and above the centre of coarse pixel (1, 1).
    const weight = (d: number) => Math.exp(-(d * d) / (2 * 0.75 * 0.75));
    const [left, middle, right] = [weight(0.75), weight(0.25), weight(1.25)];
    const u = (0 * left + 0.1 * middle + 0.2 * right) / (left + middle + right);
    const merged = mergeReference(
      grey(6, 6, () => 0.1),
      grey(3, 3, (x) => 0.1 * x),
      { sigmaRange: 1e6, hold: 0.25 },
    );
    expect(sampleAt(merged, 2, 2)).toBeCloseTo(u, 12);
    expect(sampleAt(merged, 3, 2)).toBeCloseTo(0.2 - u, 12);
  });

  it('keeps an edge where the finer level has it, though the coarser one straddles it', () => {
    // The edge lies between fine columns 6 and 7: coarse column 3 mixes the two sides half and half.
    const fine = grey(16, 8, (x) => (x < 7 ? 0.2 : 0.7));
    const coarse = grey(8, 4, (x) => (x < 3 ? 0.25 : x === 3 ? 0.45 : 0.65));
    const merged = mergeReference(fine, coarse, rule);
    for (let x = 0; x < 16; x++)
      expect(Math.abs(sampleAt(merged, x, 4) - (x < 7 ? 0.25 : 0.65))).toBeLessThan(0.03);
  });

  it('keeps what lies far from all coarse paint', () => {
    const fine = grey(12, 12, (x, y) => (x === 5 && y === 6 ? 1 : 0.1));
    const merged = mergeReference(
      fine,
      grey(6, 6, () => 0.1),
      rule,
    );
    expect(sampleAt(merged, 5, 6)).toBeGreaterThan(0.99);
  });

  it('stays between its two levels, turns and mirrors with them', () => {
    const fine = testPicture(16, 12);
    const coarse = testPicture(8, 6);
    const merged = mergeReference(fine, coarse, rule);
    const turned = mergeReference(quarterTurn(fine), quarterTurn(coarse), rule);
    const mirrored = mergeReference(mirror(fine), mirror(coarse), rule);
    expect(largestDifference(turned.values, quarterTurn(merged).values)).toBeLessThan(1e-12);
    expect(largestDifference(mirrored.values, mirror(merged).values)).toBeLessThan(1e-12);
    const values = [...fine.values, ...coarse.values];
    expect(Math.min(...merged.values)).toBeGreaterThanOrEqual(Math.min(...values));
    expect(Math.max(...merged.values)).toBeLessThanOrEqual(Math.max(...values));
  });
});
