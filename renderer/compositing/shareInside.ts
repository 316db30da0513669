import type { Rect } from '../../core/pixels/photo.ts';

/**
 * The share of marked pixels within a part of the photo.
 * @param marks 1 or 0 for each pixel of a region
 * @param region on a level 2^`level` times smaller than the photo
 * @param part in pixels of the photo
 * @returns 0 where the part lies elsewhere
 */
export function shareInside(marks: Uint8Array, region: Rect, level: number, part: Rect): number {
  const step = 2 ** level;
  const onRegion = (sourcePx: number, startPx: number, lengthPx: number) =>
    Math.max(0, Math.min(lengthPx, Math.round(sourcePx / step) - startPx));
  const left = onRegion(part.xPx, region.xPx, region.widthPx);
  const right = onRegion(part.xPx + part.widthPx, region.xPx, region.widthPx);
  const top = onRegion(part.yPx, region.yPx, region.heightPx);
  const bottom = onRegion(part.yPx + part.heightPx, region.yPx, region.heightPx);
  let marked = 0;
  for (let y = top; y < bottom; y++)
    for (let i = y * region.widthPx + left; i < y * region.widthPx + right; i++) marked += marks[i];
  const count = Math.max(0, right - left) * Math.max(0, bottom - top);
  return count > 0 ? marked / count : 0;
}
