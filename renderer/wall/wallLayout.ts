/** Where each frame hangs: rows from left to right, all at one print scale, pinned along a common line. */
export interface HungFrame {
  index: number;
  xPx: number;
  /** Of the picture's upper edge. */
  yPx: number;
  widthPx: number;
  heightPx: number;
}

export interface WallRow {
  /** Index of its first frame, and of the one after its last. */
  from: number;
  to: number;
  topPx: number;
  bottomPx: number;
}

export interface WallLayout {
  frames: readonly HungFrame[];
  rows: readonly WallRow[];
  heightPx: number;
}

export interface WallMeasures {
  /** Of the wall. */
  widthPx: number;
  /** Long edge of a print on the screen. */
  longEdgePx: number;
}

/** Room between frames, above a row for its pins, and below for what is written under the pictures. */
export const wallSpacing = { betweenPx: 34, abovePx: 30, belowPx: 76, edgePx: 30, leastWidthPx: 128 };

/** A photo whose header is not read yet is taken for the commonest shape. */
const usualShape = { widthPx: 3, heightPx: 2 };

/**
 * Hangs frames in their order.
 * @param sizes of the photos, upright; 0 where unknown
 */
export function hangFrames(
  sizes: readonly { widthPx: number; heightPx: number }[],
  { widthPx: wallWidth, longEdgePx }: WallMeasures,
): WallLayout {
  const { betweenPx, abovePx, belowPx, edgePx, leastWidthPx } = wallSpacing;
  const frames: HungFrame[] = [];
  const rows: WallRow[] = [];
  let top = edgePx / 2;
  let left = edgePx;
  let rowFrom = 0;
  const endRow = (to: number) => {
    const tallest = frames.slice(rowFrom, to).reduce((most, { heightPx }) => Math.max(most, heightPx), 0);
    const bottom = top + abovePx + tallest + belowPx;
    // A full row reaches from edge to edge; the last one hangs from the left.
    if (to < sizes.length && to - rowFrom > 1)
      spread(frames, rowFrom, to, left - betweenPx, wallWidth - edgePx);
    rows.push({ from: rowFrom, to, topPx: top, bottomPx: bottom });
    top = bottom;
    left = edgePx;
    rowFrom = to;
  };
  sizes.forEach((size, index) => {
    const shape = size.widthPx > 0 ? size : usualShape;
    const scale = longEdgePx / Math.max(shape.widthPx, shape.heightPx);
    const [widthPx, heightPx] = [Math.round(shape.widthPx * scale), Math.round(shape.heightPx * scale)];
    // A narrow frame keeps room for its name.
    const takesPx = Math.max(widthPx, leastWidthPx);
    if (index > rowFrom && left + takesPx > wallWidth - edgePx) endRow(index);
    frames.push({ index, xPx: left, yPx: top + abovePx, widthPx, heightPx });
    left += takesPx + betweenPx;
  });
  if (sizes.length > rowFrom) endRow(sizes.length);
  return { frames, rows, heightPx: top + edgePx };
}

/** Shares what is left of a row's width out between its frames. */
function spread(frames: HungFrame[], from: number, to: number, endPx: number, edgePx: number): void {
  const stepPx = Math.max(0, edgePx - endPx) / (to - from - 1);
  for (let i = from; i < to; i++)
    frames[i] = { ...frames[i], xPx: Math.round(frames[i].xPx + stepPx * (i - from)) };
}

/** The frames of the rows that touch a stretch of the wall. */
export function framesBetween(
  { rows }: WallLayout,
  fromPx: number,
  toPx: number,
): { from: number; to: number } {
  const first = rows.findIndex(({ bottomPx }) => bottomPx > fromPx);
  if (first < 0) return { from: 0, to: 0 };
  let last = first;
  while (last + 1 < rows.length && rows[last + 1].topPx < toPx) last++;
  return { from: rows[first].from, to: rows[last].to };
}

/** The frame above or below another, the one whose middle lies nearest. */
export function frameInNextRow({ frames, rows }: WallLayout, index: number, step: 1 | -1): number {
  const row = rows.findIndex(({ from, to }) => index >= from && index < to);
  const next = rows[row + step];
  if (!next) return index;
  const middle = (frame: HungFrame) => frame.xPx + frame.widthPx / 2;
  const wanted = middle(frames[index]);
  return frames
    .slice(next.from, next.to)
    .reduce((best, frame) =>
      Math.abs(middle(frame) - wanted) < Math.abs(middle(best) - wanted) ? frame : best,
    ).index;
}

/** Frames in view first, from the middle outwards, then those around them. */
export function nearestFirst(
  { frames }: WallLayout,
  view: { from: number; to: number },
  middlePx: number,
): number[] {
  const around = view.to - view.from;
  const from = Math.max(0, view.from - around);
  const to = Math.min(frames.length, view.to + around);
  const isIn = (index: number) => index >= view.from && index < view.to;
  const distance = (index: number) => Math.abs(frames[index].yPx + frames[index].heightPx / 2 - middlePx);
  return Array.from({ length: to - from }, (_, i) => from + i).sort(
    (a, b) => Number(isIn(b)) - Number(isIn(a)) || distance(a) - distance(b) || a - b,
  );
}
