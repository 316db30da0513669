import { describe, expect, it } from 'vitest';
import {
  type BlendMode,
  blendModes,
  blendReference,
  compositeReference,
} from '../../../core/kernels/reference/blend.reference.ts';
import { parameterTable } from '../../../core/parameters/table.ts';

// W3C Compositing and Blending Level 1, section 10; results worked out by hand from its formulas.
const worked: [BlendMode, backdrop: number, source: number, result: number][] = [
  ['normal', 0.3, 0.8, 0.8],
  ['multiply', 0.5, 0.4, 0.2],
  ['screen', 0.5, 0.4, 0.7],
  ['overlay', 0.25, 0.6, 0.3],
  ['overlay', 0.75, 0.6, 0.8],
  ['darken', 0.3, 0.8, 0.3],
  ['lighten', 0.3, 0.8, 0.8],
  ['colour-burn', 1, 0, 1],
  ['colour-burn', 0.5, 0, 0],
  ['colour-burn', 0.8, 0.5, 0.6],
  ['colour-burn', 0.2, 0.5, 0],
  ['hard-light', 0.6, 0.25, 0.3],
  ['hard-light', 0.6, 0.75, 0.8],
  ['soft-light', 0.5, 0.25, 0.375],
  ['soft-light', 0.64, 0.75, 0.72],
  ['soft-light', 0.25, 0.75, 0.375],
  ['soft-light', 0.125, 1, 0.34375],
];

describe('blend modes', () => {
  it.each(worked)('%s of backdrop %d and source %d is %d', (mode, backdrop, source, result) => {
    expect(blendReference(mode, backdrop, source)).toBeCloseTo(result, 12);
  });

  it('covers every choice of the parameter table', () => {
    const choices = parameterTable['line.blend'].choices.map((choice) => choice.value);
    expect([...blendModes].sort()).toEqual([...choices].sort());
  });

  it('stays within 0…1, and is neutral with the source each mode calls neutral', () => {
    const neutral: Partial<Record<BlendMode, number>> = {
      multiply: 1,
      screen: 0,
      darken: 1,
      lighten: 0,
      'colour-burn': 1,
      'hard-light': 0.5,
      'soft-light': 0.5,
    };
    for (const mode of blendModes)
      for (let b = 0; b <= 20; b++) {
        for (let s = 0; s <= 20; s++) {
          const result = blendReference(mode, b / 20, s / 20);
          expect(result).toBeGreaterThanOrEqual(-1e-15);
          expect(result).toBeLessThanOrEqual(1 + 1e-15);
        }
        const still = neutral[mode];
        if (still !== undefined) expect(blendReference(mode, b / 20, still)).toBeCloseTo(b / 20, 12);
      }
  });

  it('mixes with the backdrop by alpha', () => {
    expect(compositeReference('multiply', 0.5, 0.4, 0)).toBe(0.5);
    expect(compositeReference('multiply', 0.5, 0.4, 1)).toBeCloseTo(0.2, 12);
    expect(compositeReference('multiply', 0.5, 0.4, 0.25)).toBeCloseTo(0.425, 12);
  });
});
