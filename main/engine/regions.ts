import { evenUp, type TileGrid } from '../../core/pipeline/jobs.ts';
import type { Rect } from '../../core/pixels/photo.ts';

export interface Size {
  widthPx: number;
  heightPx: number;
}

/** A region and `haloPx` around it, inside the picture, with even corners but for the picture's own far edges. */
export function grownInside(region: Rect, haloPx: number, size: Size): Rect {
  return between(
    region.xPx - haloPx,
    region.yPx - haloPx,
    region.xPx + region.widthPx + haloPx,
    region.yPx + region.heightPx + haloPx,
    size,
  );
}

/** Pixels of the coarser level beyond the half of a region: merge and orientation look at neighbours. */
const coarserMarginPx = 4;

/** What a region and `haloPx` around it read of the next coarser level, inside that, with even corners likewise. */
export function coarserInside(region: Rect, haloPx: number, size: Size): Rect {
  return between(
    Math.floor((region.xPx - haloPx) / 2) - coarserMarginPx,
    Math.floor((region.yPx - haloPx) / 2) - coarserMarginPx,
    Math.ceil((region.xPx + region.widthPx + haloPx) / 2) + coarserMarginPx,
    Math.ceil((region.yPx + region.heightPx + haloPx) / 2) + coarserMarginPx,
    size,
  );
}

function between(left: number, top: number, right: number, bottom: number, size: Size): Rect {
  const xPx = Math.max(0, left) & ~1;
  const yPx = Math.max(0, top) & ~1;
  return {
    xPx,
    yPx,
    widthPx: Math.min(size.widthPx, evenUp(right)) - xPx,
    heightPx: Math.min(size.heightPx, evenUp(bottom)) - yPx,
  };
}

/** @throws RangeError where a region is empty or reaches outside */
export function insideOrThrow(rect: Rect, size: Size): Rect {
  const right = rect.xPx + rect.widthPx;
  const bottom = rect.yPx + rect.heightPx;
  const isInside = rect.xPx >= 0 && rect.yPx >= 0 && right <= size.widthPx && bottom <= size.heightPx;
  if (!isInside || rect.widthPx < 1 || rect.heightPx < 1) {
    throw new RangeError(
      `Expected a region inside ${size.widthPx} × ${size.heightPx} px, received ${rect.widthPx} × ${rect.heightPx} px at ${rect.xPx}, ${rect.yPx}`,
    );
  }
  return rect;
}

/** Bands of whole rows. */
export function rowGrid(widthPx: number, heightPx: number, rows: number) {
  return { xPx: 0, yPx: 0, widthPx, heightPx, tileWidthPx: widthPx, tileHeightPx: rows };
}

/** How pictures are cut. Even numbers; any give the same pixels. */
export interface TileSize {
  widthPx: number;
  heightPx: number;
}

/** As near to the usual size as leaves no thin remainder: its halo would cost more than it. */
export function cutIntoTiles(region: Rect, size: TileSize): TileGrid {
  const bands = Math.max(1, Math.round(region.heightPx / size.heightPx));
  const tileHeightPx = evenUp(Math.ceil(region.heightPx / bands));
  return { ...region, tileWidthPx: size.widthPx, tileHeightPx };
}
