import { describe, expect, it } from 'vitest';
import type { FrameFigures } from '../../core/series/frameFigures.ts';
import { median, oddFrom, oddOnesOut, robustZ } from '../../core/series/oddOnesOut.ts';
import { seededNormal } from '../kernels/testPictures.ts';

const usual: FrameFigures = {
  lightness: 55,
  contrast: 20,
  chroma: 18,
  redGreen: 2,
  yellowBlue: 6,
  planeMm: 1.2,
  coherence01: 0.6,
  lineCoverage01: 0.03,
  focus: 0.8,
  flatShare01: 0.8,
};

/** Frames that scatter a little. */
function someFrames(count: number, seed: number): FrameFigures[] {
  const normal = seededNormal(seed);
  return Array.from({ length: count }, () => ({
    ...usual,
    lightness: usual.lightness + 2 * normal(),
    yellowBlue: usual.yellowBlue + normal(),
    lineCoverage01: usual.lineCoverage01 + 0.003 * normal(),
    flatShare01: usual.flatShare01 + 0.02 * normal(),
  }));
}

describe('robust scores', () => {
  it('take the median of odd and even numbers of values', () => {
    expect(median([3, 1, 2])).toBe(2);
    expect(median([4, 1, 3, 2])).toBe(2.5);
  });

  it('are those of the definition, 0.6745·(x − median)/MAD', () => {
    // Median 3, absolute deviations 2 1 0 1 97: MAD 1.
    const z = robustZ([1, 2, 3, 4, 100], 0);
    expect(z[4]).toBeCloseTo(97 * 0.6745, 10);
    expect(z[0]).toBeCloseTo(-2 * 0.6745, 10);
  });

  it('make no odd one of frames that hardly differ', () => {
    expect(robustZ([5, 5, 5, 5, 5.01], 1).every((z) => Math.abs(z) < oddFrom(5))).toBe(true);
  });
});

describe('odd ones out', () => {
  it('are found, with reason and remedy, and nothing else is', () => {
    const frames = someFrames(20, 3);
    frames[4] = { ...frames[4], yellowBlue: -20, lightness: 30 };
    frames[11] = { ...frames[11], flatShare01: 0.99, lineCoverage01: 0.001 };
    const odd = oddOnesOut(frames, 0);
    expect(odd[4]).toMatchObject({ figure: 'yellowBlue', remedies: ['matchTone', 'leaveOut'] });
    expect(odd[4]?.reason).toContain('bluer');
    expect(odd[11]?.reason).toContain('focus');
    expect(odd.filter((one) => one !== null)).toHaveLength(2);
  });

  it('ask for another lead where the lead is odd itself', () => {
    const frames = someFrames(10, 4);
    frames[0] = { ...frames[0], lightness: 5 };
    expect(oddOnesOut(frames, 0)[0]?.remedies[0]).toBe('chooseAnotherLead');
  });

  it.each([6, 9, 20, 60])('are few among %i frames that scatter normally', (count) => {
    const normal = seededNormal(count);
    const scattered = () =>
      Object.fromEntries(Object.entries(usual).map(([key, value]) => [key, value * (1 + 0.3 * normal())]));
    let flagged = 0;
    for (let series = 0; series < 400; series++) {
      const frames = Array.from({ length: count }, () => scattered() as unknown as FrameFigures);
      if (oddOnesOut(frames).some((one) => one !== null)) flagged++;
    }
    expect(flagged).toBeLessThan(80);
    expect(flagged).toBeGreaterThan(10);
  });

  it('are not named among three', () => {
    expect(oddOnesOut([usual, usual, { ...usual, lightness: 0 }])).toEqual([null, null, null]);
  });
});
