import fc from 'fast-check';
import { describe, expect, it } from 'vitest';
import { lengthToPx } from '../../core/parameters/lengths.ts';
import { defaultOutputSettings, type OutputSettings } from '../../core/recipes/outputSettings.ts';
import { fitSheet } from '../../renderer/print/drawSheet.ts';
import {
  inInches,
  inMm,
  longEdgeFor,
  ownPpi,
  planOf,
  readLengthMm,
  wholeLongEdgeMm,
} from '../../renderer/print/printMeasures.ts';
import { printSentence } from '../../renderer/print/printWords.ts';

const photo = { widthPx: 6000, heightPx: 4000 };
const outputOf = (change: Partial<OutputSettings>): OutputSettings => ({
  ...defaultOutputSettings(),
  ...change,
});
const square = { aspect: 1, x01: 0.5, y01: 0.5 };

describe('lengths as people write them', () => {
  it.each([
    ['300', 300],
    ['300 mm', 300],
    ['30cm', 300],
    ['12 in', 304.8],
    ['12"', 304.8],
    ['8,5″', 215.9],
    ['.5 in', 12.7],
    ['8.5 inches', 215.9],
  ])('%s', (text, mm) => expect(readLengthMm(text)).toBe(mm));

  it.each(['', 'wide', '3 ft', '-5', '1.2.3', '10 mm wide', 'Infinity'])('refuses %s', (text) =>
    expect(readLengthMm(text)).toBeNull(),
  );

  it('takes a bare number in the unit of its field', () => expect(readLengthMm('10', 'in')).toBe(254));

  // ISO 216 in millimetres, and the inches that paper merchants give for them.
  it.each([
    ['A3', 297, 420, '11.69', '16.54'],
    ['A4', 210, 297, '8.27', '11.69'],
    ['A5', 148, 210, '5.83', '8.27'],
  ])('shows %s in inches', (_, widthMm, heightMm, widthIn, heightIn) => {
    expect([inInches(widthMm), inInches(heightMm)]).toEqual([widthIn, heightIn]);
    expect([inMm(widthMm), inMm(heightMm)]).toEqual([String(widthMm), String(heightMm)]);
  });
});

describe('the plan of a print', () => {
  it('tells pixels and pixels an inch both ways', () => {
    // 12 inches: 6000 pixels lie at 500 an inch; at 300 there are 3600.
    const own = outputOf({ printLongEdgeMm: 304.8 });
    expect(planOf(photo, own)).toMatchObject({ widthPx: 6000, heightPx: 4000 });
    expect(planOf(photo, own).ppi).toBeCloseTo(500, 9);
    const asked = { ...own, isResampled: true, ppi: 300 };
    expect(planOf(photo, asked)).toMatchObject({ widthPx: 3600, heightPx: 2400, ppi: 300 });
    expect(ownPpi(photo, asked)).toBeCloseTo(500, 9);
  });

  it('counts bleed and margin in with the pixels of the file', () => {
    // 25.4 mm are 300 pixels, the margin of 8 mm is 94.5, so 94 or 95 by the rule of the file itself.
    const output = outputOf({ isResampled: true, ppi: 300, bleedMm: 25.4, trimMarks: true });
    const { widthPx, fileWidthPx, margins } = planOf(photo, output);
    expect(margins.bleedPx).toBe(300);
    expect(Math.abs(margins.marks!.slugPx - 94.488)).toBeLessThanOrEqual(0.5);
    expect(fileWidthPx).toBe(widthPx + 2 * (300 + margins.marks!.slugPx));
  });

  it('finds the long edge for a short one of paper: A4 is 210 by 297 (ISO 216)', () => {
    const plan = planOf(photo, outputOf({ cropFrame: { aspect: Math.SQRT2, x01: 0.5, y01: 0.5 } }));
    expect(longEdgeFor(plan, 'short', 210)).toBeCloseTo(297, 0);
    expect(longEdgeFor(plan, 'long', 420)).toBe(420);
  });

  it('makes the whole photo longer on paper by as much as a crop leaves of it', () => {
    expect(wholeLongEdgeMm(photo, outputOf({ printLongEdgeMm: 200 }))).toBe(200);
    // Of 6000 pixels 4000 are left: what is 200 mm of them is 300 mm of all.
    const cropped = outputOf({ printLongEdgeMm: 200, cropFrame: square });
    expect(wholeLongEdgeMm(photo, cropped)).toBe(300);
    // So a brush is as many pixels wide on the easel as in the file.
    const onEasel = lengthToPx('5mm', { longEdgePx: 6000, printLongEdgeMm: wholeLongEdgeMm(photo, cropped) });
    expect(onEasel).toBe(lengthToPx('5mm', { longEdgePx: 4000, printLongEdgeMm: 200 }));
  });
});

describe('the drawing of the sheet', () => {
  it('fits into its room, and keeps the shape of the file', () => {
    const edge = fc.integer({ min: 40, max: 4000 });
    fc.assert(
      fc.property(edge, edge, edge, edge, fc.integer({ min: 0, max: 50 }), (w, h, roomW, roomH, bleedMm) => {
        const output = outputOf({ isResampled: true, ppi: 600, bleedMm, trimMarks: bleedMm % 2 === 1 });
        const plan = planOf({ widthPx: w, heightPx: h }, output);
        const sheet = fitSheet(plan, { widthPx: roomW, heightPx: roomH });
        expect(sheet.leftPx).toBeGreaterThanOrEqual(-0.51);
        expect(sheet.topPx).toBeGreaterThanOrEqual(-0.51);
        const fills = Math.max(sheet.widthPx / roomW, sheet.heightPx / roomH);
        expect(fills).toBeCloseTo(1, 6);
        if (Math.min(sheet.widthPx, sheet.heightPx) > 1.01) {
          const shape = sheet.widthPx / sheet.heightPx / (plan.fileWidthPx / plan.fileHeightPx);
          expect(shape).toBeCloseTo(1, 2);
        }
      }),
    );
  });
});

describe('the sentence of the save dialog', () => {
  it('tells everything that is asked for, and nothing that is not', () => {
    expect(printSentence(photo, outputOf({ format: 'png', printLongEdgeMm: 304.8 }))).toBe(
      'PNG of 8 bits, 304.8 × 203.2 mm at 500 pixels an inch, in the photograph’s own colours.',
    );
    const full = outputOf({
      format: 'tiff',
      depth: 16,
      printLongEdgeMm: 200,
      isResampled: true,
      ppi: 300,
      cropFrame: square,
      bleedMm: 3,
      trimMarks: true,
      profile: { file: '/profiles/Press sheet.icc' },
      layers: 'ora',
    });
    expect(printSentence(photo, full)).toBe(
      'TIFF of 16 bits, 200 × 200 mm at 300 pixels an inch, cropped to 1:1, with 3 mm of bleed and trim marks, in Press sheet, its layers as OpenRaster.',
    );
    expect(printSentence(photo, outputOf({ quality: 80, profile: 'srgb' }))).toMatch(
      /^JPEG of quality 80,.* in sRGB\.$/,
    );
  });

  it('calls no frame a crop that leaves the whole picture', () =>
    expect(printSentence(photo, outputOf({ cropFrame: { ...square, aspect: 1.5 } }))).not.toMatch(/cropped/));
});
