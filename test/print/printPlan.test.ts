import { describe, expect, it } from 'vitest';
import { keepsPixels, mmToPx, planMargins, planPrint } from '../../core/print/printPlan.ts';

const photo = { widthPx: 6000, heightPx: 4000 };

// 25.4 mm an inch is exact; 300 pixels per inch and 3 mm of bleed are common practice of the printing trade.
describe('a print', () => {
  it('keeps the photo’s own pixels where none are asked for, and says how fine they lie', () => {
    expect(planPrint(photo, { printLongEdgeMm: 508, ppi: null, crop: null })).toEqual({
      crop: { xPx: 0, yPx: 0, widthPx: 6000, heightPx: 4000 },
      widthPx: 6000,
      heightPx: 4000,
      ppi: 300,
      widthMm: 508,
      heightMm: expect.closeTo(338.667, 3),
    });
  });

  it('is brought to the pixels that size and pixels per inch make', () => {
    const plan = planPrint(photo, { printLongEdgeMm: 297, ppi: 300, crop: null });
    // 297 / 25.4 · 300 = 3507.87; two thirds of 3508 = 2338.67.
    expect([plan.widthPx, plan.heightPx, plan.ppi]).toEqual([3508, 2339, 300]);
    const upright = planPrint(
      { widthPx: 4000, heightPx: 6000 },
      { printLongEdgeMm: 297, ppi: 300, crop: null },
    );
    expect([upright.widthPx, upright.heightPx]).toEqual([2339, 3508]);
  });

  it.each([
    ['a square in the middle', 1, 0.5, 0.5, { xPx: 1000, yPx: 0, widthPx: 4000, heightPx: 4000 }],
    ['a square at the left', 1, 0, 0.5, { xPx: 0, yPx: 0, widthPx: 4000, heightPx: 4000 }],
    ['a square moved in from the right', 1, 0.95, 0.5, { xPx: 2000, yPx: 0, widthPx: 4000, heightPx: 4000 }],
    ['a panorama below', 3, 0.5, 1, { xPx: 0, yPx: 2000, widthPx: 6000, heightPx: 2000 }],
    ['an upright frame', 4 / 5, 0.5, 0.5, { xPx: 1400, yPx: 0, widthPx: 3200, heightPx: 4000 }],
    ['the photo’s own aspect', 1.5, 0.2, 0.9, { xPx: 0, yPx: 0, widthPx: 6000, heightPx: 4000 }],
  ])('is cropped to %s', (_name, aspect, x01, y01, frame) => {
    const plan = planPrint(photo, { printLongEdgeMm: 300, ppi: null, crop: { aspect, x01, y01 } });
    expect(plan.crop).toEqual(frame);
  });

  it('has pixels however small it is', () => {
    const plan = planPrint({ widthPx: 1, heightPx: 5000 }, { printLongEdgeMm: 10, ppi: 1, crop: null });
    expect([plan.widthPx, plan.heightPx]).toEqual([1, 1]);
  });

  it('measures bleed in pixels', () => {
    expect(mmToPx(3, 300)).toBe(35);
    expect(mmToPx(25.4, 300)).toBe(300);
    expect(mmToPx(0, 300)).toBe(0);
  });
});

describe('a print with the photo’s own pixels', () => {
  it.each([
    ['nothing asked for', null, null, true],
    ['a crop', null, { aspect: 1, x01: 0.5, y01: 0.5 }, false],
    ['a flat crop, as wide as the photo', null, { aspect: 3, x01: 0.5, y01: 0.5 }, false],
    ['a crop that leaves all of it', null, { aspect: 1.5, x01: 0.1, y01: 0.9 }, true],
    // 508 mm are 20 inches: 6000 pixels are 300 an inch.
    ['as many an inch as it has', 300, null, true],
    ['fewer an inch', 299, null, false],
  ])('%s', (_name, ppi, crop, isOwn) => {
    expect(keepsPixels(photo, planPrint(photo, { printLongEdgeMm: 508, ppi, crop }))).toBe(isOwn);
  });
});

describe('what lies around a print', () => {
  it('is bleed and a margin with marks, in whole pixels', () => {
    // At 254 an inch a millimetre is ten pixels.
    expect(planMargins(254, 3, true)).toEqual({
      bleedPx: 30,
      marks: { slugPx: 80, lengthPx: 50, linePx: 3 },
      outsidePx: 110,
    });
    expect(planMargins(254, 3, false)).toEqual({ bleedPx: 30, marks: null, outsidePx: 30 });
    // A line is never thinner than a pixel.
    expect(planMargins(25.4, 0, true)).toMatchObject({ bleedPx: 0, marks: { linePx: 1 } });
  });
});
