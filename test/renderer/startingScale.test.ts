import { describe, expect, it } from 'vitest';
import { hangFrames } from '../../renderer/wall/wallLayout.ts';
import { startingScalePx } from '../../renderer/wall/wallStore.ts';

const wall = { widthPx: 1100, heightPx: 840 };
const shapes = [
  { widthPx: 3, heightPx: 2 },
  { widthPx: 2, heightPx: 3 },
  { widthPx: 0, heightPx: 0 },
];
const sizes = (count: number) => Array.from({ length: count }, (_, index) => shapes[index % 3]);

describe('the print scale at which a series starts', () => {
  it.each([1, 2, 5, 9])('shows all of %i frames, as large as they fit', (count) => {
    const longEdgePx = startingScalePx(sizes(count), wall);
    const height = (px: number) =>
      hangFrames(sizes(count), { widthPx: wall.widthPx, longEdgePx: px }).heightPx;
    expect(height(longEdgePx)).toBeLessThanOrEqual(wall.heightPx);
    if (longEdgePx < 440) expect(height(longEdgePx + 10)).toBeGreaterThan(wall.heightPx);
  });

  it.each([30, 500])('is easy to look at where %i frames are too many to show at once', (count) => {
    expect(startingScalePx(sizes(count), wall)).toBe(220);
  });
});
