// The classic filter (M. Kuwahara, K. Hachimura, S. Eiho, M. Kinoshita 1976): the mean of the calmest of four
// square windows. All sums are of whole numbers, so a pixel is the same wherever its tile begins.
import { withSquare } from './vector';

/** Bytes a window takes in the scratch: its mean (R, G, B, |c|²) and its score. */
const meanBytes: usize = 16;
const scoreBytes: usize = 8;

/**
 * Bits that V gives up so that n·Σv² − (Σv)² ≤ (n·vMax/2)² stays below 2^63: none up to a radius of 303 px.
 * The two terms may each wrap round 64 bits; their difference is exact all the same.
 */
// @ts-ignore: decorator
@inline
function bitsDropped(radiusPx: i32): i32 {
  const n = <i64>(radiusPx + 1) * <i64>(radiusPx + 1);
  let bits = 0;
  while (n * (<i64>65535 >> bits) > 6074000999) bits++;
  return bits;
}

/** Whole numbers 0…65535: R, G, B, V = max(R, G, B) without its dropped bits. Half goes to even. */
// @ts-ignore: decorator
@inline
function wholeOf(at: usize, bits: i32): v128 {
  let c = i32x4.trunc_sat_f32x4_s(f32x4.nearest(f32x4.mul(v128.load(at), f32x4.splat(65535))));
  c = i32x4.min_s(i32x4.max_s(c, i32x4.splat(0)), i32x4.splat(65535));
  const rg = i32x4.max_s(c, v128.shuffle<i32>(c, c, 1, 1, 1, 1));
  const v = i32x4.shr_u(i32x4.max_s(rg, v128.shuffle<i32>(c, c, 2, 2, 2, 2)), bits);
  return v128.shuffle<i32>(c, v, 0, 1, 2, 4);
}

// @ts-ignore: decorator
@inline
function squareOfV(c: v128): i64 {
  const v = <i64>i32x4.extract_lane(c, 3);
  return v * v;
}

/** Adds one row of the picture to the column sums. */
function addRow(row: usize, count: i32, bits: i32, sums: usize, squares: usize): void {
  for (let x = 0; x < count; x++, row += 16, sums += 16, squares += 8) {
    const c = wholeOf(row, bits);
    v128.store(sums, i32x4.add(v128.load(sums), c));
    store<i64>(squares, load<i64>(squares) + squareOfV(c));
  }
}

/** Adds one row of the picture to the column sums and takes another away. */
function exchangeRow(enters: usize, leaves: usize, count: i32, bits: i32, sums: usize, squares: usize): void {
  for (let x = 0; x < count; x++, enters += 16, leaves += 16, sums += 16, squares += 8) {
    const added = wholeOf(enters, bits);
    const taken = wholeOf(leaves, bits);
    v128.store(sums, i32x4.add(v128.load(sums), i32x4.sub(added, taken)));
    store<i64>(squares, load<i64>(squares) + (squareOfV(added) - squareOfV(taken)));
  }
}

/**
 * All windows of one row of windows, from left to right, and for each pixel the better of the window that
 * ends at its column and the one that begins there (the left one where they are equal).
 * @param sums @param squares column sums; the first belongs to the column `radiusPx` left of the tile
 * @param lineMean @param lineScore room for width + radius windows
 * @param bestMean @param bestScore receive `widthPx` windows
 */
function windowsOfRow(
  sums: usize, squares: usize, widthPx: i32, radiusPx: i32,
  lineMean: usize, lineScore: usize, bestMean: usize, bestScore: usize,
): void {
  const n = <i64>(radiusPx + 1) * <i64>(radiusPx + 1);
  const whole = f64x2.splat(<f64>n * 65535);
  let redGreen = f64x2.splat(0);
  let blueV = f64x2.splat(0);
  let sumV: i64 = 0;
  let sumVv: i64 = 0;
  for (let x = 0; x < radiusPx; x++) {
    const c = v128.load(sums + (<usize>x << 4));
    redGreen = f64x2.add(redGreen, f64x2.convert_low_i32x4_s(c));
    blueV = f64x2.add(blueV, f64x2.convert_low_i32x4_s(v128.shuffle<i32>(c, c, 2, 3, 2, 3)));
    sumV += <i64>i32x4.extract_lane(c, 3);
    sumVv += load<i64>(squares + (<usize>x << 3));
  }
  const back = <usize>(radiusPx + 1);
  let leaving = i32x4.splat(0);
  let leavingVv: i64 = 0;
  for (let x = 0; x < widthPx + radiusPx; x++) {
    const at = <usize>(x + radiusPx);
    const entering = v128.load(sums + (at << 4));
    if (x > 0) {
      leaving = v128.load(sums + ((at - back) << 4));
      leavingVv = load<i64>(squares + ((at - back) << 3));
    }
    const change = i32x4.sub(entering, leaving);
    redGreen = f64x2.add(redGreen, f64x2.convert_low_i32x4_s(change));
    blueV = f64x2.add(blueV, f64x2.convert_low_i32x4_s(v128.shuffle<i32>(change, change, 2, 3, 2, 3)));
    sumV += <i64>i32x4.extract_lane(change, 3);
    sumVv += load<i64>(squares + (at << 3)) - leavingVv;

    const mean = v128.shuffle<i32>(
      f32x4.demote_f64x2_zero(f64x2.div(redGreen, whole)), f32x4.demote_f64x2_zero(f64x2.div(blueV, whole)), 0, 1, 4, 5);
    const quad = withSquare(mean);
    const score = n * sumVv - sumV * sumV;
    const here = lineMean + (<usize>x << 4);
    const hereScore = lineScore + (<usize>x << 3);
    v128.store(here, quad);
    store<i64>(hereScore, score);
    if (x >= radiusPx) {
      const left = here - (<usize>radiusPx << 4);
      const leftScore = load<i64>(hereScore - (<usize>radiusPx << 3));
      const isRight = score < leftScore;
      v128.store(bestMean, v128.load(isRight ? here : left));
      store<i64>(bestScore, isRight ? score : leftScore);
      bestMean += meanBytes;
      bestScore += scoreBytes;
    }
  }
}

/** For each pixel the better of an upper and a lower window; the upper one where they are equal. */
function chooseRow(
  upperMean: usize, upperScore: usize, lowerMean: usize, lowerScore: usize, widthPx: i32, dst: usize,
): void {
  for (let x = 0; x < widthPx; x++, dst += 16) {
    const mean = <usize>x * meanBytes;
    const score = <usize>x * scoreBytes;
    const isLower = load<i64>(lowerScore + score) < load<i64>(upperScore + score);
    v128.store(dst, v128.load((isLower ? lowerMean : upperMean) + mean));
  }
}

/** Bytes of scratch that {@link quadrant} needs, 16-aligned; no part of it has to be cleared. */
export function quadrantScratchBytes(widthPx: i32, heightPx: i32, radiusPx: i32): i32 {
  const columns = widthPx + 2 * radiusPx;
  const line = widthPx + radiusPx;
  const ring = (radiusPx + 1) * widthPx;
  return (columns + line + ring) * <i32>(meanBytes + scoreBytes) + 16;
}

/**
 * Quadrant smoothing of a quad tile. Of the four windows of (radius + 1)² pixels that have the pixel as a
 * corner, the one with the least variance of V = max(R, G, B) gives the means of R, G and B; where variances
 * are equal the first of top-left, top-right, bottom-left, bottom-right. Pixels are taken as whole numbers
 * 0…65535 (8- and 16-bit photos exactly), variances compared as whole numbers. Above a radius of 303 px
 * V gives up its lowest bits.
 * Cost does not depend on the radius, but for the first radius + 1 rows and columns of a tile.
 * @param src quad tile; `radiusPx` pixels are read on every side
 * @param radiusPx 0…1024
 * @param scratch {@link quadrantScratchBytes}, 16-aligned
 * @param dst receives width × height quads; must not overlap `src`
 */
export function quadrant(
  src: usize, srcStride: i32, widthPx: i32, heightPx: i32, radiusPx: i32, scratch: usize, dst: usize, dstStride: i32,
): void {
  const bits = bitsDropped(radiusPx);
  const rowBytes = <usize>srcStride << 4;
  const columns = widthPx + 2 * radiusPx;
  const line = widthPx + radiusPx;
  const ringRows = radiusPx + 1;
  // All 16-byte parts come first, so that everything stays aligned.
  const sums = scratch;
  const lineMean = sums + <usize>columns * meanBytes;
  const ringMean = lineMean + <usize>line * meanBytes;
  const squares = ringMean + <usize>(ringRows * widthPx) * meanBytes;
  const lineScore = squares + <usize>columns * scoreBytes;
  const ringScore = lineScore + <usize>line * scoreBytes;
  const ringMeanRow = <usize>widthPx * meanBytes;
  const ringScoreRow = <usize>widthPx * scoreBytes;

  memory.fill(sums, 0, <usize>columns * meanBytes);
  memory.fill(squares, 0, <usize>columns * scoreBytes);
  const corner = src - <usize>(radiusPx * srcStride + radiusPx) * 16;
  for (let y = 0; y <= radiusPx; y++) addRow(corner + <usize>y * rowBytes, columns, bits, sums, squares);

  // Window row j covers rows j … j + radius of the tile with its halo: the lower windows of pixel row
  // j − radius and the upper windows of pixel row j, which is why radius + 1 rows of them are kept.
  for (let j = 0; j < heightPx + radiusPx; j++) {
    if (j > 0) {
      const leaves = corner + <usize>(j - 1) * rowBytes;
      exchangeRow(leaves + <usize>ringRows * rowBytes, leaves, columns, bits, sums, squares);
    }
    const slot = <usize>(j % ringRows);
    const lowerMean = ringMean + slot * ringMeanRow;
    const lowerScore = ringScore + slot * ringScoreRow;
    windowsOfRow(sums, squares, widthPx, radiusPx, lineMean, lineScore, lowerMean, lowerScore);
    const y = j - radiusPx;
    if (y >= 0) {
      const upper = <usize>(y % ringRows);
      chooseRow(
        ringMean + upper * ringMeanRow, ringScore + upper * ringScoreRow, lowerMean, lowerScore,
        widthPx, dst + (<usize>(y * dstStride) << 4));
    }
  }
}
