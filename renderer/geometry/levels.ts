import type { Rect } from '../../core/pixels/photo.ts';
import { type PlacedView, type Size, toSource } from './viewTransform.ts';

/** A level may be enlarged by this much before a finer one is asked for. */
const allowedEnlargement = 1.34;

/** The most pixels that one piece of strata may bring into the window. */
export const maxPiecePixels = 2_600_000;

/**
 * The level whose pixels come closest to the device's at `scale` without showing its grid.
 * @param levelCount how many levels the photo has; level k is 2^k times smaller
 */
export function levelForScale(scale: number, levelCount: number): number {
  if (scale >= 1) return 0;
  const level = Math.floor(Math.log2(allowedEnlargement / scale));
  return Math.min(Math.max(level, 0), levelCount - 1);
}

/** The level that holds the whole picture for the fitted view, small enough for the window. */
export function baseLevel(levels: readonly Size[], fittedScale: number): number {
  let level = levelForScale(fittedScale, levels.length);
  while (level < levels.length - 1 && levels[level].widthPx * levels[level].heightPx > maxPiecePixels)
    level += 1;
  return level;
}

/** A level at least 2^steps coarser, for the rough picture that comes first. */
export function roughLevel(levels: readonly Size[], base: number, maxPixels: number): number {
  let level = base;
  while (level < levels.length - 1 && levels[level].widthPx * levels[level].heightPx > maxPixels) level += 1;
  return level;
}

/**
 * The part of a level that the stage shows, on even coordinates, grown by a margin for small pans.
 * @returns null where nothing of the picture is in view
 */
export function visibleRegion(
  view: PlacedView,
  stage: Size,
  levels: readonly Size[],
  level: number,
  marginPx: number,
): Rect | null {
  const size = levels[level];
  const step = 2 ** level;
  const first = toSource(view, { x: 0, y: 0 });
  const last = toSource(view, { x: stage.widthPx, y: stage.heightPx });
  const left = Math.max(0, Math.floor((first.x / step - marginPx) / 2) * 2);
  const top = Math.max(0, Math.floor((first.y / step - marginPx) / 2) * 2);
  const right = Math.min(size.widthPx, Math.ceil((last.x / step + marginPx) / 2) * 2);
  const bottom = Math.min(size.heightPx, Math.ceil((last.y / step + marginPx) / 2) * 2);
  if (right <= left || bottom <= top) return null;
  return { xPx: left, yPx: top, widthPx: right - left, heightPx: bottom - top };
}

export function contains(outer: Rect, inner: Rect): boolean {
  return (
    inner.xPx >= outer.xPx &&
    inner.yPx >= outer.yPx &&
    inner.xPx + inner.widthPx <= outer.xPx + outer.widthPx &&
    inner.yPx + inner.heightPx <= outer.yPx + outer.heightPx
  );
}
