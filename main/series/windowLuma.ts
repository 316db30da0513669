import type { Rect } from '../../core/pixels/photo.ts';
import type { LumaWindow } from '../../core/series/windowFigures.ts';

/**
 * Luma (ITU-R BT.601) of a window of a body, brought down to a coarser scale by averaging over areas.
 * @param body R, G, B in 0…65535, `strideWidthPx` pixels a row; not modified
 * @param scale pixels of the body for one of the result, at least 1, need not be whole
 * @returns luma in 8-bit steps
 */
export function windowLuma(
  body: Uint16Array,
  strideWidthPx: number,
  window: Rect,
  scale: number,
): LumaWindow {
  const widthPx = Math.max(1, Math.floor(window.widthPx / scale));
  const heightPx = Math.max(1, Math.floor(window.heightPx / scale));
  const sums = new Float64Array(widthPx * heightPx);
  const columns = sharesAlong(window.widthPx, scale, widthPx);
  const rows = sharesAlong(window.heightPx, scale, heightPx);
  for (let y = 0; y < window.heightPx; y++) {
    const row = rows[y];
    for (let x = 0; x < window.widthPx; x++) {
      const at = ((window.yPx + y) * strideWidthPx + window.xPx + x) * 3;
      const luma = (0.299 * body[at] + 0.587 * body[at + 1] + 0.114 * body[at + 2]) / 257;
      const column = columns[x];
      add(sums, widthPx, heightPx, row.cell, column.cell, luma * row.first * column.first);
      add(sums, widthPx, heightPx, row.cell, column.cell + 1, luma * row.first * column.second);
      add(sums, widthPx, heightPx, row.cell + 1, column.cell, luma * row.second * column.first);
      add(sums, widthPx, heightPx, row.cell + 1, column.cell + 1, luma * row.second * column.second);
    }
  }
  return { widthPx, heightPx, luma: sums.map((sum) => sum / (scale * scale)) };
}

function add(
  sums: Float64Array,
  widthPx: number,
  heightPx: number,
  y: number,
  x: number,
  value: number,
): void {
  if (value !== 0 && x < widthPx && y < heightPx) sums[y * widthPx + x] += value;
}

/** For each pixel, the cell it falls into and how much of it lies there and in the next. */
function sharesAlong(lengthPx: number, scale: number, cells: number) {
  return Array.from({ length: lengthPx }, (_, at) => {
    const cell = Math.min(Math.floor(at / scale), cells);
    const first = Math.min(1, (cell + 1) * scale - at);
    return { cell, first, second: 1 - first };
  });
}
