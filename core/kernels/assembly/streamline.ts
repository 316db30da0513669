// Smoothing along the grain by streamlines: the second half of the flow-guided filter (Kyprianidis and Döllner
// 2008). Second-order Runge–Kutta steps through the block vectors.

/** Half a pixel in 16384ths. */
const halfPixel: i32 = 8192;

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
  for (let cy = 0; cy * inkCell < height; cy++) {
    for (let cx = 0; cx < cellsX; cx++) {
      let least: f32 = f32.MAX_VALUE;
      for (let y = cy * inkCell; y < min((cy + 1) * inkCell, height); y++) {
        for (let x = cx * inkCell; x < min((cx + 1) * inkCell, width); x++) {
          const v = load<f32>(src + <usize>((y * srcStride + x) << 2));
          least = v < least ? v : least;
        }
      }
      store<f32>(cells + <usize>((cy * cellsX + cx) << 2), least);
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

/**
 * One side of a streamline: Σ weight · S at the steps, two pixels each. Places are whole 16384ths of a pixel from
 * the block's corner, so that a line runs the same wherever its tile begins.
 */
// @ts-ignore: decorator
@inline
function walk(
  src: usize, srcStride: i32, vectors: usize, vectorsStride: i32, x0: i32, y0: i32, dx0: i32, dy0: i32,
  steps: i32, table: usize,
): f32 {
  let sum: f32 = 0;
  let x = x0, y = y0, dx = dx0, dy = dy0;
  for (let i = 1; i <= steps; i++) {
    // Half a step is one pixel: the vector's own length.
    const at = vectors + <usize>((((y + dy) >> 15) * vectorsStride + ((x + dx) >> 15)) << 2);
    const vx = <i32>load<i16>(at), vy = <i32>load<i16>(at, 2);
    // The tensor knows lines, not directions: keep going forward.
    const back = (vx * dx + vy * dy) >> 31;
    dx = (vx ^ back) - back;
    dy = (vy ^ back) - back;
    x += dx << 1;
    y += dy << 1;
    const met = src + <usize>(((y >> 14) * srcStride + (x >> 14)) << 2);
    sum += load<f32>(table + <usize>(i << 2)) * load<f32>(met);
  }
  return sum;
}

/**
 * Smooths S along the grain inside a margin. Cells from which no streamline can meet a value below the threshold
 * get `blank` at once: a mean of values above the threshold stays above it.
 * @param src S over the whole area; the result is made for the part inside `margin`
 * @param vectors of the blocks of the whole area
 * @param margin at least twice `steps`, and one more: no streamline leaves the area
 * @param cells from `cellMinima` over the whole area
 */
export function streamlines(
  src: usize, srcStride: i32, areaWidth: i32, areaHeight: i32, margin: i32, vectors: usize, vectorsStride: i32,
  cells: usize, cellsX: i32, cellsY: i32, cellReach: i32, threshold: f32, blank: f32,
  steps: i32, table: usize, dst: usize, dstStride: i32,
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
          const vector = vectors + <usize>(((by >> 1) * vectorsStride + (bx >> 1)) << 2);
          const fx = ((x - bx) << 14) + halfPixel, fy = ((y - by) << 14) + halfPixel;
          const vx = <i32>load<i16>(vector), vy = <i32>load<i16>(vector, 2);
          const own = middle * load<f32>(src + <usize>((y * srcStride + x) << 2));
          const forth = walk(here, srcStride, vector, vectorsStride, fx, fy, vx, vy, steps, table);
          const back = walk(here, srcStride, vector, vectorsStride, fx, fy, -vx, -vy, steps, table);
          store<f32>(out, own + (forth + back));
        }
      }
    }
  }
}
