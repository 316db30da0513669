import type { Rect } from '../pixels/photo.ts';

/** Millimetres of an inch: exact by definition (international yard and pound agreement of 1959). */
export const mmPerInch = 25.4;

/** How a picture is to lie on paper. */
export interface PrintGeometry {
  /** Long edge of the trimmed print. */
  printLongEdgeMm: number;
  /** The picture is brought to so many pixels per inch of the print; its own pixels stay where this is null. */
  ppi: number | null;
  /** Cuts the picture to an aspect first, about a place in it; null for the whole picture. */
  crop: CropFrame | null;
}

/** A frame of a wished aspect, as large as the picture allows. */
export interface CropFrame {
  /** Width over height. */
  aspect: number;
  /** Where the frame's middle shall be, 0…1 of the width and height; moved in where it would stand out. */
  x01: number;
  y01: number;
}

/** A picture's way to its print. */
export interface PrintPlan {
  /** In pixels of the photo. */
  crop: Rect;
  /** After cropping and resampling: what is painted. */
  widthPx: number;
  heightPx: number;
  /** Pixels per inch of the print. */
  ppi: number;
  widthMm: number;
  heightMm: number;
}

/**
 * Plans cropping and resampling. A picture is resampled before it is painted, so that strokes are laid at the print's
 * own pixels and are never blurred by resampling.
 * @throws RangeError where the print would have no pixels
 */
export function planPrint(
  photo: { widthPx: number; heightPx: number },
  { printLongEdgeMm, ppi, crop: frame }: PrintGeometry,
): PrintPlan {
  const crop = frame ? placeFrame(photo, frame) : { xPx: 0, yPx: 0, ...photo };
  const longPx = Math.max(crop.widthPx, crop.heightPx);
  const inches = printLongEdgeMm / mmPerInch;
  const scale = ppi === null ? 1 : Math.max(1, Math.round(inches * ppi)) / longPx;
  const widthPx = Math.max(1, Math.round(crop.widthPx * scale));
  const heightPx = Math.max(1, Math.round(crop.heightPx * scale));
  const mmPerPx = printLongEdgeMm / Math.max(widthPx, heightPx);
  return {
    crop: { xPx: crop.xPx, yPx: crop.yPx, widthPx: crop.widthPx, heightPx: crop.heightPx },
    widthPx,
    heightPx,
    ppi: ppi ?? longPx / inches,
    widthMm: widthPx * mmPerPx,
    heightMm: heightPx * mmPerPx,
  };
}

/** Whether a picture goes to its print with its own pixels, all of them. */
export function keepsPixels(photo: { widthPx: number; heightPx: number }, plan: PrintPlan): boolean {
  const { crop, widthPx, heightPx } = plan;
  const isWhole = crop.widthPx === photo.widthPx && crop.heightPx === photo.heightPx;
  return isWhole && widthPx === photo.widthPx && heightPx === photo.heightPx;
}

/**
 * Where a frame lies in a picture, in whole pixels.
 * @param frame its middle is moved in where it would stand out
 */
export function placeFrame(
  photo: { widthPx: number; heightPx: number },
  { aspect, x01, y01 }: CropFrame,
): Rect {
  const isWider = photo.widthPx / photo.heightPx > aspect;
  const widthPx = isWider ? Math.max(1, Math.round(photo.heightPx * aspect)) : photo.widthPx;
  const heightPx = isWider ? photo.heightPx : Math.max(1, Math.round(photo.widthPx / aspect));
  const place = (middle01: number, size: number, frame: number) =>
    Math.min(size - frame, Math.max(0, Math.round(middle01 * size - frame / 2)));
  return {
    xPx: place(x01, photo.widthPx, widthPx),
    yPx: place(y01, photo.heightPx, heightPx),
    widthPx,
    heightPx,
  };
}

/** What lies around a print on its sheet, in millimetres: common practice of the printing trade. */
export const trimMarkMm = { slug: 8, length: 5, line: 0.25 };

/** What lies around a print on its sheet, in pixels. */
export interface SheetMargins {
  bleedPx: number;
  /** Null without trim marks. */
  marks: { slugPx: number; lengthPx: number; linePx: number } | null;
  /** Bleed and slug together: how far the sheet reaches beyond the print on every side. */
  outsidePx: number;
}

/** Plans bleed and trim marks at so many pixels per inch. */
export function planMargins(ppi: number, bleedMm: number, hasMarks: boolean): SheetMargins {
  const bleedPx = mmToPx(bleedMm, ppi);
  const marks = hasMarks
    ? {
        slugPx: mmToPx(trimMarkMm.slug, ppi),
        lengthPx: mmToPx(trimMarkMm.length, ppi),
        linePx: Math.max(1, mmToPx(trimMarkMm.line, ppi)),
      }
    : null;
  return { bleedPx, marks, outsidePx: bleedPx + (marks?.slugPx ?? 0) };
}

/** A length on the print in pixels, to the nearest. */
export function mmToPx(lengthMm: number, ppi: number): number {
  return Math.round((lengthMm / mmPerInch) * ppi);
}
