import fc from 'fast-check';
import { describe, expect, it } from 'vitest';
import {
  bandSpan,
  bandView,
  cutSourceY,
  cutViewY,
  fullThicknessPx,
  layOutSection,
  strengthFromPull,
} from '../../renderer/geometry/sectionLayout.ts';
import { toView } from '../../renderer/geometry/viewTransform.ts';

const measures = { heightPx: 168, gapPx: 3, thinnestPx: 3, smallestSlotPx: 24 };
const strata = (body: number) => [
  { stratum: 'ground' as const, strength01: 1 },
  { stratum: 'body' as const, strength01: body },
  { stratum: 'line' as const, strength01: 0.7 },
];

describe('section', () => {
  it('stacks the bands from the ground up without overlap, inside its height', () => {
    fc.assert(
      fc.property(fc.double({ min: 0, max: 1, noNaN: true }), (strength) => {
        const [ground, body, line] = layOutSection(strata(strength), measures);
        expect(ground.topPx + ground.thicknessPx).toBe(measures.heightPx);
        expect(body.topPx + body.thicknessPx).toBeLessThanOrEqual(ground.topPx - measures.gapPx);
        expect(line.topPx + line.thicknessPx).toBeLessThanOrEqual(body.topPx - measures.gapPx);
        expect(line.slotTopPx).toBeGreaterThanOrEqual(0);
      }),
    );
  });

  it('shows strength as thickness', () => {
    const full = fullThicknessPx(3, measures);
    expect(layOutSection(strata(1), measures)[1].thicknessPx).toBe(full);
    expect(layOutSection(strata(0.5), measures)[1].thicknessPx).toBe(full / 2);
    expect(layOutSection(strata(0), measures)[1].thicknessPx).toBe(measures.thinnestPx);
  });

  it('turns a pull into strength and stops at both ends', () => {
    expect(strengthFromPull(0.5, 27, 54)).toBe(1);
    expect(strengthFromPull(0.5, -13.5, 54)).toBe(0.25);
    expect(strengthFromPull(0.5, 500, 54)).toBe(1);
  });

  it('keeps every column of a band under the same column of the picture, and the cut in its middle', () => {
    const photo = { widthPx: 5000, heightPx: 3333 };
    const free = fc.record({
      scale: fc.double({ min: 0.02, max: 16, noNaN: true }),
      originXPx: fc.integer({ min: -9000, max: 900 }),
      originYPx: fc.integer({ min: -9000, max: 900 }),
    });
    fc.assert(
      fc.property(free, fc.double({ min: 0, max: 1, noNaN: true }), (view, cut01) => {
        const band = layOutSection(strata(0.8), measures)[1];
        const inBand = bandView(cut01, band, view, photo);
        for (const x of [0, 1, 2499.5, 5000])
          expect(toView(inBand, { x, y: 0 }).x).toBe(toView(view, { x, y: 0 }).x);
        const row = cutSourceY(cut01, photo);
        const middle = band.topPx + Math.floor(band.thicknessPx / 2);
        expect(Math.abs(toView(inBand, { x: 0, y: row }).y - middle)).toBeLessThanOrEqual(0.5);
        expect(Math.abs(toView(view, { x: 0, y: row }).y - cutViewY(cut01, view, photo))).toBeLessThanOrEqual(
          0.5,
        );
      }),
    );
  });

  it('ends the bands at the picture’s sides, or at the gutters when zoomed in', () => {
    const photo = { widthPx: 1000, heightPx: 800 };
    const gutters = { leftPx: 92, rightPx: 76 };
    const fitted = { scale: 0.5, originXPx: 200, originYPx: 0 };
    expect(bandSpan(fitted, photo, 960, gutters)).toEqual({ leftPx: 200, rightPx: 700 });
    const near = { scale: 4, originXPx: -300, originYPx: 0 };
    expect(bandSpan(near, photo, 960, gutters)).toEqual({ leftPx: 92, rightPx: 884 });
  });
});
