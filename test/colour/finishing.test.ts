import { describe, expect, it } from 'vitest';
import { ditherTo8 } from '../../main/colour/dither.ts';
import { mirrorOut } from '../../main/colour/mirrorOut.ts';
import { withTrimMarks } from '../../main/colour/trimMarks.ts';

describe('reduction to 8 bits', () => {
  it('keeps what 8 bits hold exactly, and alpha to the nearest', () => {
    const exact = Uint16Array.from({ length: 256 * 4 }, (_, i) => Math.floor(i / 4) * 257);
    expect(ditherTo8(exact, 16, 4, 3)).toEqual(
      Uint8Array.from({ length: 256 * 4 }, (_, i) => Math.floor(i / 4)),
    );
    const alpha = Uint16Array.from({ length: 4 }, () => 128 * 257 + 128);
    expect(ditherTo8(alpha, 1, 4, 3)[3]).toBe(128);
  });

  it('keeps the mean of every tone and never leaves its two neighbours', () => {
    const side = 256;
    for (const value of [1, 100, 128, 200, 40_000, 65_400]) {
      const out = ditherTo8(new Uint16Array(side * side).fill(value), side, 1);
      const low = Math.floor(value / 257);
      expect(out.every((step) => step === low || step === low + 1)).toBe(true);
      const mean = out.reduce((sum, step) => sum + step, 0) / out.length;
      // Five standard errors of a mean of 65,536 draws with a deviation of at most 1/2.
      expect(Math.abs(mean - value / 257)).toBeLessThan((5 * 0.5) / side);
    }
  });

  it('is the same for a band of rows as for the whole', () => {
    const whole = Uint16Array.from({ length: 40 * 30 * 3 }, (_, i) => (i * 977) % 65536);
    const all = ditherTo8(whole, 40, 3);
    const band = ditherTo8(whole.subarray(10 * 120, 20 * 120), 40, 3, -1, 10);
    expect(band).toEqual(all.subarray(10 * 120, 20 * 120));
  });
});

describe('bleed', () => {
  it('mirrors the picture at its edges', () => {
    const picture = Uint8Array.from([1, 2, 3, 4, 5, 6]);
    expect([...mirrorOut(picture, 3, 2, 1, 2)]).toEqual(
      [
        [5, 4, 4, 5, 6, 6, 5],
        [2, 1, 1, 2, 3, 3, 2],
        [2, 1, 1, 2, 3, 3, 2],
        [5, 4, 4, 5, 6, 6, 5],
        [5, 4, 4, 5, 6, 6, 5],
        [2, 1, 1, 2, 3, 3, 2],
      ].flat(),
    );
  });

  it('goes on mirroring where it is wider than the picture', () => {
    const row = [...mirrorOut(Uint16Array.from([7, 9]), 2, 1, 1, 5)].slice(0, 12);
    expect(row).toEqual(row.map((_, x) => mirroredPlain(x - 5)));
  });
});

/** The same by walking: back and forth over 7, 9, the edge repeated. */
function mirroredPlain(place: number): number {
  const line = [7, 9, 9, 7];
  return line[((place % 4) + 4) % 4];
}

describe('trim marks', () => {
  it('stand on white where the paper is cut, outside of the bleed', () => {
    const marks = { slugPx: 10, lengthPx: 6, linePx: 1, bleedPx: 3 };
    const out = withTrimMarks(new Uint8Array(20 * 16).fill(50), 20, 16, marks, [255], [0]);
    const at = (x: number, y: number) => out[y * 40 + x];
    expect(out).toHaveLength(40 * 36);
    expect([at(0, 0), at(39, 35), at(9, 20)]).toEqual([255, 255, 255]);
    // The cut is at 10 + 3 from the outer edge; the marks end before picture and bleed begin.
    expect([at(13, 0), at(13, 5), at(13, 6), at(0, 13), at(5, 13)]).toEqual([0, 0, 255, 0, 0]);
    expect([at(10, 10), at(29, 25)]).toEqual([50, 50]);
  });
});
