import { type CropFrame, placeFrame } from '../../core/print/printPlan.ts';
import type { Point, Size } from '../geometry/viewTransform.ts';

/*
 * A frame is as large as the picture allows, so that it moves along one edge of it at most. Invariant: after any move
 * its middle is where it is drawn, never further out: there is no way to go back before it moves again.
 */

/** The edge a frame can move along; null where it takes the whole picture. */
export function freeAxis(photo: Size, frame: CropFrame): 'x' | 'y' | null {
  const placed = placeFrame(photo, frame);
  if (placed.widthPx < photo.widthPx) return 'x';
  return placed.heightPx < photo.heightPx ? 'y' : null;
}

/** Moves a frame by pixels of the photo, and no farther than the picture reaches. */
export function moveFrame(photo: Size, frame: CropFrame, deltaPx: Point): CropFrame {
  const { widthPx, heightPx } = placeFrame(photo, frame);
  return {
    ...frame,
    x01: keptIn(frame.x01, photo.widthPx, widthPx, deltaPx.x),
    y01: keptIn(frame.y01, photo.heightPx, heightPx, deltaPx.y),
  };
}

function keptIn(middle01: number, sizePx: number, framePx: number, deltaPx: number): number {
  const halfPx = framePx / 2;
  const inside = (px: number) => Math.min(sizePx - halfPx, Math.max(halfPx, px));
  return inside(inside(middle01 * sizePx) + deltaPx) / sizePx;
}

/** How far along its free edge a frame is: 0 at the left or the top, 1 at the other end. */
export function placeAlong(photo: Size, frame: CropFrame): number {
  const { xPx, yPx, widthPx, heightPx } = placeFrame(photo, frame);
  const axis = freeAxis(photo, frame);
  if (axis === null) return 0;
  return axis === 'x' ? xPx / (photo.widthPx - widthPx) : yPx / (photo.heightPx - heightPx);
}

/** Brings a frame to a place along its free edge. */
export function moveAlong(photo: Size, frame: CropFrame, place01: number): CropFrame {
  const { widthPx, heightPx } = placeFrame(photo, frame);
  const place = Math.min(1, Math.max(0, place01));
  const middle = (sizePx: number, framePx: number) => (place * (sizePx - framePx) + framePx / 2) / sizePx;
  const axis = freeAxis(photo, frame);
  if (axis === null) return frame;
  return axis === 'x'
    ? { ...frame, x01: middle(photo.widthPx, widthPx) }
    : { ...frame, y01: middle(photo.heightPx, heightPx) };
}

/** Where a frame is, for those who do not see it. */
export function placeInWords(photo: Size, frame: CropFrame): string {
  const axis = freeAxis(photo, frame);
  if (axis === null) return 'the whole picture';
  const percent = Math.round(placeAlong(photo, frame) * 100);
  if (percent === 50) return 'in the middle';
  if (axis === 'x')
    return percent === 0
      ? 'at the left'
      : percent === 100
        ? 'at the right'
        : `${percent} percent to the right`;
  return percent === 0 ? 'at the top' : percent === 100 ? 'at the foot' : `${percent} percent down`;
}
