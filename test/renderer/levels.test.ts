import { describe, expect, it } from 'vitest';
import {
  baseLevel,
  contains,
  levelForScale,
  maxPiecePixels,
  visibleRegion,
} from '../../renderer/geometry/levels.ts';

/** Halved on each edge and rounded up, as the host says of its levels. */
function levelsOf(widthPx: number, heightPx: number) {
  const levels = [{ widthPx, heightPx }];
  while (levels.at(-1)!.widthPx > 64)
    levels.push({
      widthPx: Math.ceil(levels.at(-1)!.widthPx / 2),
      heightPx: Math.ceil(levels.at(-1)!.heightPx / 2),
    });
  return levels;
}

describe('levels', () => {
  it('takes the full photo from 100 % on, and half of it at a half', () => {
    expect([16, 1, 0.7, 0.5, 0.25, 0.125].map((scale) => levelForScale(scale, 8))).toEqual([
      0, 0, 0, 1, 2, 3,
    ]);
  });

  it('never lets a hundred megapixels into the window', () => {
    const levels = levelsOf(11_608, 8708);
    for (const scale of [0.08, 0.2, 0.5, 1]) {
      const { widthPx, heightPx } = levels[baseLevel(levels, scale)];
      expect(widthPx * heightPx).toBeLessThanOrEqual(maxPiecePixels);
    }
  });

  it('asks for what is in view, on even coordinates, inside the level', () => {
    const levels = levelsOf(6001, 4001);
    const view = { scale: 1, originXPx: -1001, originYPx: -333 };
    const stage = { widthPx: 900, heightPx: 600 };
    const visible = visibleRegion(view, stage, levels, 0, 0)!;
    const asked = visibleRegion(view, stage, levels, 0, 48)!;
    expect(visible).toEqual({ xPx: 1000, yPx: 332, widthPx: 902, heightPx: 602 });
    expect(contains(asked, visible)).toBe(true);
    expect(asked.xPx % 2).toBe(0);
    const atCorner = visibleRegion({ ...view, originXPx: -5800, originYPx: -3900 }, stage, levels, 0, 48)!;
    expect(atCorner.xPx + atCorner.widthPx).toBe(6001);
    expect(atCorner.yPx + atCorner.heightPx).toBe(4001);
  });

  it('asks for nothing where the picture is out of view', () => {
    const view = { scale: 1, originXPx: 2000, originYPx: 0 };
    expect(visibleRegion(view, { widthPx: 900, heightPx: 600 }, levelsOf(800, 600), 0, 0)).toBeNull();
  });
});
