import { parseLength } from './parse.ts';
import type { LengthText } from './table.ts';

/** Long edge of the print in millimetres where nobody has said otherwise. */
export const defaultPrintLongEdgeMm = 300;

/** What a length needs to become pixels. */
export interface LengthScale {
  /** Long edge of the full-resolution photo, in pixels. */
  longEdgePx: number;
  /** Long edge of the print, in millimetres. */
  printLongEdgeMm: number;
}

/**
 * The one place where lengths become pixels of the full-resolution photo.
 * @param text a checked length, such as `4.5mm`
 * @param scale size of the photo and of its print
 * @returns pixels at full resolution, unrounded
 * @throws RangeError where `text` is no length
 */
export function lengthToPx(text: LengthText, scale: LengthScale): number {
  const length = parseLength(text);
  if (!length) throw new RangeError(`Expected a length with its unit, received ${text}`);
  switch (length.unit) {
    case 'px':
      return length.value;
    case 'mm':
      return (length.value * scale.longEdgePx) / scale.printLongEdgeMm;
    case 'permille':
      return (length.value * scale.longEdgePx) / 1000;
  }
}
