// Smoothing along the grain by streamlines: the second half of the flow-guided filter (Kyprianidis and Döllner
// 2008). Second-order Runge–Kutta steps through the block vectors.

/** Pixels a side of the squares that are left out where no ink can come. */
export const inkCell: i32 = 8;

/** Steps on each side: 2 σ at this step length. */
export function streamlineSteps(sigmaPx: f64, stepPx: f64): i32 {
  return <i32>Math.ceil((2 * sigmaPx) / stepPx);
}

/** Weights of a Gaussian at 0 … steps, normalised for both sides together. */
export function streamlineTable(sigmaPx: f64, stepPx: f64, steps: i32, table: usize): void {
  let sum: f64 = 0;
  for (let i = -steps; i <= steps; i++) sum += weightAt(i, sigmaPx, stepPx);
  for (let i = 0; i <= steps; i++) store<f32>(table + <usize>(i << 2), <f32>(weightAt(i, sigmaPx, stepPx) / sum));
}

function weightAt(i: i32, sigmaPx: f64, stepPx: f64): f64 {
  const d = <f64>i * stepPx;
  return Math.exp(-(d * d) / (2 * sigmaPx * sigmaPx));
}

/**
 * The least value in each cell of 8 × 8.
 * @param width @param height of the plane, cut into ⌈width/8⌉ × ⌈height/8⌉ cells
 */
export function cellMinima(src: usize, srcStride: i32, width: i32, height: i32, cells: usize, cellsX: i32): void {
  for (let y = 0; y < height; y++) {
    for (let x = 0; x < width; x++) {
      const cell = cells + <usize>(((y / inkCell) * cellsX + x / inkCell) << 2);
      const v = load<f32>(src + <usize>((y * srcStride + x) << 2));
      if (y % inkCell == 0 && x % inkCell == 0) store<f32>(cell, v);
      else store<f32>(cell, min<f32>(load<f32>(cell), v));
    }
  }
}

/** Whether any cell within `reach` cells holds a value below `threshold`. */
// @ts-ignore: decorator
@inline
function mayInk(cells: usize, cellsX: i32, cellsY: i32, cx: i32, cy: i32, reach: i32, threshold: f32): bool {
  for (let y = max(0, cy - reach); y <= min(cellsY - 1, cy + reach); y++) {
    for (let x = max(0, cx - reach); x <= min(cellsX - 1, cx + reach); x++) {
      if (load<f32>(cells + <usize>((y * cellsX + x) << 2)) < threshold) return true;
    }
  }
  return false;
}

// @ts-ignore: decorator
@inline
function clampTo(v: f32, first: f32, last: f32): f32 {
  return max<f32>(first, min<f32>(v, last));
}

/**
 * One side of a streamline: Σ weight · S at the steps. Places are counted from the pixel's own block, so that
 * rounding, and with it the pixels that are met, does not depend on where the area begins.
 * @param src @param vectors at the pixel's block
 * @param firstX @param firstY @param lastX @param lastY rim of the area, counted from there
 * @param x0 @param y0 middle of the pixel, 0.5 or 1.5
 */
// @ts-ignore: decorator
@inline
function walk(
  src: usize, srcStride: i32, firstX: f32, firstY: f32, lastX: f32, lastY: f32, vectors: usize, vectorsStride: i32,
  x0: f32, y0: f32, sign: f32, stepPx: f32, steps: i32, table: usize,
): f32 {
  let sum: f32 = 0;
  let x = x0, y = y0;
  let dx = load<f32>(vectors) * sign, dy = load<f32>(vectors, 4) * sign;
  const half: f32 = 0.5 * stepPx;
  for (let i = 1; i <= steps; i++) {
    const mx = <i32>floor<f32>(clampTo(x + half * dx, firstX, lastX));
    const my = <i32>floor<f32>(clampTo(y + half * dy, firstY, lastY));
    const at = vectors + <usize>(((my >> 1) * vectorsStride + (mx >> 1)) << 3);
    const vx = load<f32>(at), vy = load<f32>(at, 4);
    // The tensor knows lines, not directions: keep going forward.
    const forward: f32 = vx * dx + vy * dy < 0 ? -1 : 1;
    dx = vx * forward;
    dy = vy * forward;
    x = clampTo(x + stepPx * dx, firstX, lastX);
    y = clampTo(y + stepPx * dy, firstY, lastY);
    const met = src + <usize>((<i32>floor<f32>(y) * srcStride + <i32>floor<f32>(x)) << 2);
    sum += load<f32>(table + <usize>(i << 2)) * load<f32>(met);
  }
  return sum;
}

/**
 * Smooths S along the grain inside a margin. Cells from which no streamline can meet a value below the threshold
 * get `blank` at once: a mean of values above the threshold stays above it.
 * @param src S over the whole area; the result is made for the part inside `margin`
 * @param vectors of the blocks of the whole area
 * @param cells from `cellMinima` over the whole area
 */
export function streamlines(
  src: usize, srcStride: i32, areaWidth: i32, areaHeight: i32, margin: i32, vectors: usize, vectorsStride: i32,
  cells: usize, cellsX: i32, cellsY: i32, cellReach: i32, threshold: f32, blank: f32,
  stepPx: f32, steps: i32, table: usize, dst: usize, dstStride: i32,
): void {
  const middle = load<f32>(table);
  for (let cy = margin / inkCell; cy * inkCell < areaHeight - margin; cy++) {
    for (let cx = margin / inkCell; cx * inkCell < areaWidth - margin; cx++) {
      const isLive = mayInk(cells, cellsX, cellsY, cx, cy, cellReach, threshold);
      for (let y = max(cy * inkCell, margin); y < min((cy + 1) * inkCell, areaHeight - margin); y++) {
        for (let x = max(cx * inkCell, margin); x < min((cx + 1) * inkCell, areaWidth - margin); x++) {
          const out = dst + <usize>(((y - margin) * dstStride + x - margin) << 2);
          if (!isLive) {
            store<f32>(out, blank);
            continue;
          }
          const bx = x & ~1, by = y & ~1;
          const here = src + <usize>((by * srcStride + bx) << 2);
          const vector = vectors + <usize>(((by >> 1) * vectorsStride + (bx >> 1)) << 3);
          const fx = <f32>(x - bx) + 0.5, fy = <f32>(y - by) + 0.5;
          const firstX = <f32>-bx, firstY = <f32>-by;
          const lastX = <f32>(areaWidth - bx) - 0.5, lastY = <f32>(areaHeight - by) - 0.5;
          const own = middle * load<f32>(src + <usize>((y * srcStride + x) << 2));
          const forth = walk(here, srcStride, firstX, firstY, lastX, lastY, vector, vectorsStride, fx, fy, 1, stepPx, steps, table);
          const back = walk(here, srcStride, firstX, firstY, lastX, lastY, vector, vectorsStride, fx, fy, -1, stepPx, steps, table);
          store<f32>(out, own + (forth + back));
        }
      }
    }
  }
}
