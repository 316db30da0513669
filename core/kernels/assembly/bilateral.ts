// Bilateral smoothing (C. Tomasi, R. Manduchi 1998) of a quad tile, eight pixels at a time.
import { expOfMinus4 } from './exponential';

/** A table entry: dx and dy (i32), spatial weight (f32), four bytes unused. */
const entryBytes: usize = 16;
/** Pixels done together. */
const group: i32 = 8;

/** Bytes of the table for a window of this radius. */
export function bilateralTableBytes(radiusPx: f32): i32 {
  const reach = <i32>floor<f32>(radiusPx);
  return (2 * reach + 1) * (2 * reach + 1) * <i32>entryBytes;
}

/**
 * The window: every pixel within `radiusPx` with the weight of a Gaussian of σ = radius / 2, row by row.
 * @param radiusPx 0.5 or more
 * @param table receives {@link bilateralTableBytes}
 * @returns number of entries
 */
export function bilateralTable(radiusPx: f32, table: usize): i32 {
  const reach = <i32>floor<f32>(radiusPx);
  const limit = radiusPx * radiusPx;
  const perSquare: f32 = 2 / limit; // 1 / (2·(radius/2)²)
  let at = table;
  for (let dy = -reach; dy <= reach; dy++) {
    for (let dx = -reach; dx <= reach; dx++) {
      const square = <f32>(dx * dx + dy * dy);
      if (square > limit) continue;
      store<i32>(at, dx);
      store<i32>(at, dy, 4);
      store<f32>(at, f32x4.extract_lane(expOfMinus4(f32x4.splat(square * perSquare)), 0), 8);
      store<f32>(at, 0, 12);
      at += entryBytes;
    }
  }
  return <i32>((at - table) / entryBytes);
}

// @ts-ignore: decorator
@inline
function planeStride(widthPx: i32, reach: i32): i32 {
  return ((widthPx + group - 1) & -group) + 2 * reach;
}

/** Bytes of scratch that {@link bilateral} needs, 16-aligned; no part of it has to be cleared. */
export function bilateralScratchBytes(widthPx: i32, heightPx: i32, radiusPx: f32): i32 {
  const reach = <i32>floor<f32>(radiusPx);
  return planeStride(widthPx, reach) * (heightPx + 2 * reach) * 12;
}

/** Takes R, G and B of the tile with its halo apart; columns beyond the halo repeat the last one. */
function splitPlanes(
  src: usize, srcStride: i32, columns: i32, rows: i32, red: usize, green: usize, blue: usize, stride: i32,
): void {
  for (let y = 0; y < rows; y++) {
    const row = src + (<usize>(y * srcStride) << 4);
    const out = <usize>(y * stride) << 2;
    for (let x = 0; x < stride; x++) {
      const at = row + (<usize>min(x, columns - 1) << 4);
      const to = out + (<usize>x << 2);
      store<f32>(red + to, load<f32>(at));
      store<f32>(green + to, load<f32>(at, 4));
      store<f32>(blue + to, load<f32>(at, 8));
    }
  }
}

/** The first `count` of four pixels, given by channel, as quads. */
// @ts-ignore: decorator
@inline
function storeQuads(r: v128, g: v128, b: v128, dst: usize, count: i32): void {
  const square = f32x4.add(f32x4.add(f32x4.mul(r, r), f32x4.mul(g, g)), f32x4.mul(b, b));
  const rgLow = v128.shuffle<i32>(r, g, 0, 4, 1, 5), rgHigh = v128.shuffle<i32>(r, g, 2, 6, 3, 7);
  const bsLow = v128.shuffle<i32>(b, square, 0, 4, 1, 5), bsHigh = v128.shuffle<i32>(b, square, 2, 6, 3, 7);
  if (count > 0) v128.store(dst, v128.shuffle<i64>(rgLow, bsLow, 0, 2));
  if (count > 1) v128.store(dst, v128.shuffle<i64>(rgLow, bsLow, 1, 3), 16);
  if (count > 2) v128.store(dst, v128.shuffle<i64>(rgHigh, bsHigh, 0, 2), 32);
  if (count > 3) v128.store(dst, v128.shuffle<i64>(rgHigh, bsHigh, 1, 3), 48);
}

/** Weight of four neighbours: spatial weight times exp(−|c − c₀|² / (2σ_r²)). */
// @ts-ignore: decorator
@inline
function weightOf(dr: v128, dg: v128, db: v128, perSquare: v128, spatial: v128): v128 {
  const square = f32x4.add(f32x4.add(f32x4.mul(dr, dr), f32x4.mul(dg, dg)), f32x4.mul(db, db));
  return f32x4.mul(spatial, expOfMinus4(f32x4.mul(square, perSquare)));
}

/**
 * Bilateral smoothing: mean over a round window, weighted by distance (σ_d = radius / 2) and by difference of
 * colour (σ_r on the Euclidean distance of encoded R, G, B). The differences from the pixel are averaged, not
 * the colours, so that a flat picture stays what it is to the last bit.
 * Every pixel sums its window in the table's order: the result does not depend on the tile.
 * @param src quad tile; ⌊radius⌋ pixels are read on every side
 * @param radiusPx the radius the table was made with
 * @param sigmaRange σ_r, above 0
 * @param table @param entryCount from {@link bilateralTable}
 * @param scratch {@link bilateralScratchBytes}, 16-aligned
 * @param dst receives width × height quads
 */
export function bilateral(
  src: usize, srcStride: i32, widthPx: i32, heightPx: i32, radiusPx: f32, sigmaRange: f32,
  table: usize, entryCount: i32, scratch: usize, dst: usize, dstStride: i32,
): void {
  const reach = <i32>floor<f32>(radiusPx);
  const stride = planeStride(widthPx, reach);
  const planeBytes = <usize>(stride * (heightPx + 2 * reach)) << 2;
  const corner = src - (<usize>(reach * srcStride + reach) << 4);
  splitPlanes(
    corner, srcStride, widthPx + 2 * reach, heightPx + 2 * reach,
    scratch, scratch + planeBytes, scratch + 2 * planeBytes, stride);

  const perSquare = f32x4.splat(1 / (2 * sigmaRange * sigmaRange));
  for (let y = 0; y < heightPx; y++) {
    const out = dst + (<usize>(y * dstStride) << 4);
    for (let x = 0; x < widthPx; x += group) {
      const at = scratch + (<usize>((y + reach) * stride + x + reach) << 2);
      smoothGroup(at, planeBytes, stride, perSquare, table, entryCount, out + (<usize>x << 4), widthPx - x);
    }
  }
}

/** Eight pixels side by side; the first `count` are stored. */
function smoothGroup(
  at: usize, planeBytes: usize, stride: i32, perSquare: v128, table: usize, entryCount: i32, dst: usize, count: i32,
): void {
  const r0 = v128.load(at), r1 = v128.load(at, 16);
  const g0 = v128.load(at + planeBytes), g1 = v128.load(at + planeBytes, 16);
  const b0 = v128.load(at + 2 * planeBytes), b1 = v128.load(at + 2 * planeBytes, 16);
  let sumW0 = f32x4.splat(0), sumW1 = f32x4.splat(0);
  let sumR0 = f32x4.splat(0), sumR1 = f32x4.splat(0);
  let sumG0 = f32x4.splat(0), sumG1 = f32x4.splat(0);
  let sumB0 = f32x4.splat(0), sumB1 = f32x4.splat(0);
  const end = table + <usize>entryCount * entryBytes;
  for (let entry = table; entry < end; entry += entryBytes) {
    const red = at + (<usize>(load<i32>(entry, 4) * stride + load<i32>(entry)) << 2);
    const green = red + planeBytes;
    const blue = green + planeBytes;
    const spatial = v128.load32_splat(entry, 8);
    const dr0 = f32x4.sub(v128.load(red), r0), dr1 = f32x4.sub(v128.load(red, 16), r1);
    const dg0 = f32x4.sub(v128.load(green), g0), dg1 = f32x4.sub(v128.load(green, 16), g1);
    const db0 = f32x4.sub(v128.load(blue), b0), db1 = f32x4.sub(v128.load(blue, 16), b1);
    const w0 = weightOf(dr0, dg0, db0, perSquare, spatial);
    const w1 = weightOf(dr1, dg1, db1, perSquare, spatial);
    sumW0 = f32x4.add(sumW0, w0);
    sumW1 = f32x4.add(sumW1, w1);
    sumR0 = f32x4.add(sumR0, f32x4.mul(w0, dr0));
    sumR1 = f32x4.add(sumR1, f32x4.mul(w1, dr1));
    sumG0 = f32x4.add(sumG0, f32x4.mul(w0, dg0));
    sumG1 = f32x4.add(sumG1, f32x4.mul(w1, dg1));
    sumB0 = f32x4.add(sumB0, f32x4.mul(w0, db0));
    sumB1 = f32x4.add(sumB1, f32x4.mul(w1, db1));
  }
  storeQuads(
    f32x4.add(r0, f32x4.div(sumR0, sumW0)), f32x4.add(g0, f32x4.div(sumG0, sumW0)),
    f32x4.add(b0, f32x4.div(sumB0, sumW0)), dst, count);
  storeQuads(
    f32x4.add(r1, f32x4.div(sumR1, sumW1)), f32x4.add(g1, f32x4.div(sumG1, sumW1)),
    f32x4.add(b1, f32x4.div(sumB1, sumW1)), dst + 64, count - 4);
}
