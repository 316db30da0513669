import fc from 'fast-check';
import { describe, expect, it } from 'vitest';
import {
  nextScale,
  panBy,
  placeView,
  toSource,
  toView,
  zoomAt,
} from '../../renderer/geometry/viewTransform.ts';

const photo = { widthPx: 6000, heightPx: 4000 };
const stage = { widthPx: 1000, heightPx: 640 };
const margin = { sidePx: 90, topPx: 26, bottomPx: 44 };
const limits = { min: 0.05, max: 16 };

describe('view transform', () => {
  it('fits the whole picture inside the margins, whatever its shape', () => {
    const edge = fc.integer({ min: 20, max: 20_000 });
    fc.assert(
      fc.property(edge, edge, (widthPx, heightPx) => {
        const shape = { widthPx, heightPx };
        const view = placeView({ kind: 'fit' }, shape, stage, margin);
        const last = toView(view, { x: widthPx, y: heightPx });
        expect(view.originXPx).toBeGreaterThanOrEqual(margin.sidePx - 1);
        expect(view.originYPx).toBeGreaterThanOrEqual(margin.topPx - 1);
        expect(last.x).toBeLessThanOrEqual(stage.widthPx - margin.sidePx + 1);
        expect(last.y).toBeLessThanOrEqual(stage.heightPx - margin.bottomPx + 1);
      }),
    );
  });

  it('keeps the point under the pointer to within half a device pixel while zooming', () => {
    const across = fc.integer({ min: 200, max: 800 });
    fc.assert(
      fc.property(across, across, fc.double({ min: 0.2, max: 12, noNaN: true }), (x, y, scale) => {
        const intent = { kind: 'free', scale: 0.5, centre: { x: 3000, y: 2000 } } as const;
        const before = placeView(intent, photo, stage, margin);
        const anchor = { x, y: Math.min(y, 600) };
        const held = toSource(before, anchor);
        const after = placeView(zoomAt(before, anchor, scale, photo, stage, limits), photo, stage, margin);
        expect(Math.abs(toView(after, held).x - anchor.x)).toBeLessThanOrEqual(0.501);
        expect(Math.abs(toView(after, held).y - anchor.y)).toBeLessThanOrEqual(0.501);
      }),
    );
  });

  it('puts photo pixels on whole device pixels at 100 %', () => {
    const intent = { kind: 'free', scale: 1, centre: { x: 1234.567, y: 987.654 } } as const;
    const view = placeView(intent, photo, stage, margin);
    expect(Number.isInteger(view.originXPx)).toBe(true);
    expect(Number.isInteger(toView(view, { x: 17, y: 23 }).y)).toBe(true);
  });

  it('never loses the picture by panning', () => {
    const intent = { kind: 'free', scale: 1, centre: { x: 10, y: 10 } } as const;
    const view = placeView(intent, photo, stage, margin);
    const far = panBy(view, { x: 1e6, y: 1e6 }, photo, stage);
    expect(far).toMatchObject({ centre: { x: 0, y: 0 } });
  });

  it('steps the zoom keys through 100 % and back', () => {
    expect(nextScale(0.9, 1)).toBeCloseTo(1, 12);
    expect(nextScale(1, -1)).toBeCloseTo(Math.SQRT1_2, 12);
    expect(nextScale(nextScale(1, 1), -1)).toBeCloseTo(1, 12);
  });
});
