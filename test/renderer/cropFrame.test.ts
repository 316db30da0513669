import fc from 'fast-check';
import { describe, expect, it } from 'vitest';
import { placeFrame } from '../../core/print/printPlan.ts';
import { aspectFor, aspectInWords, choiceOf, readAspect } from '../../renderer/print/cropAspects.ts';
import { freeAxis, moveAlong, moveFrame, placeAlong, placeInWords } from '../../renderer/print/cropMoves.ts';

describe('an aspect', () => {
  it.each([
    ['4:5', 0.8],
    ['4 x 5', 0.8],
    ['4×5', 0.8],
    ['21/9', 21 / 9],
    ['1,5', 1.5],
    ['√2:1', Math.SQRT2],
    ['1:√2', 1 / Math.SQRT2],
  ])('is read from %s', (text, aspect) => expect(readAspect(text)).toBeCloseTo(aspect, 12));

  it.each(['', '4:', ':5', '0:5', '5:0', '1:1000', 'wide', '-4:5'])('is not read from "%s"', (text) =>
    expect(readAspect(text)).toBeNull(),
  );

  it('comes back from its own words', () => {
    const side = fc.integer({ min: 1, max: 60 });
    fc.assert(
      fc.property(side, side, (width, height) => {
        expect(readAspect(aspectInWords(width / height))).toBeCloseTo(width / height, 3);
      }),
    );
    expect(aspectInWords(0.8)).toBe('4:5');
    expect(aspectInWords(1.5)).toBe('3:2');
    expect(readAspect(aspectInWords(Math.SQRT2))).toBeCloseTo(Math.SQRT2, 12);
    // A4 and A3 (ISO 216) in whole millimetres are taken for sheets; 7:5, which is nearly one, is not.
    expect([297 / 210, 297 / 420, 7 / 5].map(aspectInWords)).toEqual(['√2:1', '1:√2', '7:5']);
  });

  it('is one of the choices either way up, and lies or stands as the photo does', () => {
    expect([choiceOf(null), choiceOf(0.8), choiceOf(1.25), choiceOf(1), choiceOf(1.4)]).toEqual([
      'none',
      'plate',
      'plate',
      'square',
      null,
    ]);
    expect(aspectFor(1.5, { widthPx: 300, heightPx: 200 })).toBe(1.5);
    expect(aspectFor(1.5, { widthPx: 200, heightPx: 300 })).toBeCloseTo(2 / 3, 12);
  });
});

describe('a crop frame', () => {
  const frames = fc.record({
    photo: fc.record({
      widthPx: fc.integer({ min: 8, max: 9000 }),
      heightPx: fc.integer({ min: 8, max: 9000 }),
    }),
    aspect: fc.double({ min: 0.1, max: 10, noNaN: true }),
    x01: fc.double({ min: 0, max: 1, noNaN: true }),
    y01: fc.double({ min: 0, max: 1, noNaN: true }),
  });
  const far = fc.integer({ min: -20_000, max: 20_000 });

  it('never leaves the picture, however far it is pulled, and comes back at once', () => {
    fc.assert(
      fc.property(frames, far, far, ({ photo, ...frame }, x, y) => {
        const pulled = moveFrame(photo, frame, { x, y });
        const placed = placeFrame(photo, pulled);
        expect(placed.xPx).toBeGreaterThanOrEqual(0);
        expect(placed.yPx).toBeGreaterThanOrEqual(0);
        expect(placed.xPx + placed.widthPx).toBeLessThanOrEqual(photo.widthPx);
        expect(placed.yPx + placed.heightPx).toBeLessThanOrEqual(photo.heightPx);
        // One pixel back the other way is seen at once.
        const axis = freeAxis(photo, frame);
        if (axis === null) return;
        const back = placeFrame(photo, moveFrame(photo, pulled, { x: -Math.sign(x), y: -Math.sign(y) }));
        const [before, after, free] =
          axis === 'x'
            ? [placed.xPx, back.xPx, photo.widthPx - placed.widthPx]
            : [placed.yPx, back.yPx, photo.heightPx - placed.heightPx];
        const sign = Math.sign(axis === 'x' ? x : y);
        const isAtEnd = sign > 0 ? before === free : before === 0;
        if (sign !== 0 && isAtEnd) expect(after).toBe(before - sign);
      }),
    );
  });

  it('moves by as many pixels as the hand does', () => {
    const photo = { widthPx: 3000, heightPx: 2000 };
    const frame = { aspect: 1, x01: 0.5, y01: 0.5 };
    expect(placeFrame(photo, frame).xPx).toBe(500);
    expect(placeFrame(photo, moveFrame(photo, frame, { x: -137, y: 40 }))).toMatchObject({
      xPx: 363,
      yPx: 0,
    });
  });

  it('goes to a place along its free edge and says that it is there', () => {
    fc.assert(
      fc.property(frames, fc.double({ min: 0, max: 1, noNaN: true }), ({ photo, ...frame }, place01) => {
        const axis = freeAxis(photo, frame);
        const moved = moveAlong(photo, frame, place01);
        if (axis === null) expect(moved).toEqual(frame);
        else {
          const { widthPx, heightPx } = placeFrame(photo, moved);
          const freePx = axis === 'x' ? photo.widthPx - widthPx : photo.heightPx - heightPx;
          expect(Math.abs(placeAlong(photo, moved) - place01) * freePx).toBeLessThanOrEqual(0.51);
        }
      }),
    );
  });

  it('is told in words', () => {
    const photo = { widthPx: 3000, heightPx: 2000 };
    const at = (aspect: number, place01: number) =>
      placeInWords(photo, moveAlong(photo, { aspect, x01: 0.5, y01: 0.5 }, place01));
    expect([at(1, 0), at(1, 0.5), at(1, 0.25), at(3, 1), at(3, 0.25), at(1.5, 0)]).toEqual([
      'at the left',
      'in the middle',
      '25 percent to the right',
      'at the foot',
      '25 percent down',
      'the whole picture',
    ]);
  });
});
