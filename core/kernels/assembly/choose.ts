// From eight sectors' means and deviations to one colour, for the four pixels of a block at once: a lane a pixel.
import { sectorCount } from './bank';

/** Bytes of one sector's record: R, G, B and the squared deviation of four pixels. */
const recordBytes: usize = 64;
/** Bytes of the records of all sectors. */
export const choiceBytes: i32 = 512;

/**
 * Keeps one sector of a block.
 * @param r @param g @param b the means m; @param square E|c|²
 * @param floorSquared least squared deviation that counts, in the same units
 * @returns max(floor², s²) with s² = E|c|² − |m|²
 */
// @ts-ignore: decorator
@inline
export function keepSector(
  records: usize, sector: i32, r: v128, g: v128, b: v128, square: v128, floorSquared: v128,
): v128 {
  const m2 = f32x4.add(f32x4.mul(r, r), f32x4.add(f32x4.mul(g, g), f32x4.mul(b, b)));
  const deviation = f32x4.pmax(floorSquared, f32x4.sub(square, m2));
  const at = records + <usize>sector * recordBytes;
  v128.store(at, r);
  v128.store(at, g, 16);
  v128.store(at, b, 32);
  v128.store(at, deviation, 48);
  return deviation;
}

/** (least/s²)^(q/2): s^−q relative to the least of the eight, so that no crispness overflows. */
// @ts-ignore: decorator
@inline
function powerOf(ratio: v128, crispness: i32): v128 {
  if (crispness == 8) {
    const squared = f32x4.mul(ratio, ratio);
    return f32x4.mul(squared, squared);
  }
  let power = (crispness & 1) != 0 ? f32x4.sqrt(ratio) : f32x4.splat(1);
  let factor = ratio;
  for (let n = crispness >> 1; n > 0; n >>= 1) {
    if ((n & 1) != 0) power = f32x4.mul(power, factor);
    factor = f32x4.mul(factor, factor);
  }
  return power;
}

/**
 * Σ ω_k m_k / Σ ω_k with ω_k = max(floor, s_k)^−q.
 * @param records from `keepSector`, all eight
 * @param least the least of their squared deviations
 * @param scale @param offset output = offset + scale · m
 * @param out the block's upper left quad; |c|² is filled in
 */
// @ts-ignore: decorator
@inline
export function chooseBlock(
  records: usize, least: v128, crispness: i32, scale: f32, offset: f32, out: usize, outRowBytes: usize,
): void {
  let sum = f32x4.splat(0), r = sum, g = sum, b = sum;
  let at = records;
  for (let k = 0; k < sectorCount; k++, at += recordBytes) {
    const weight = powerOf(f32x4.div(least, v128.load(at, 48)), crispness);
    sum = f32x4.add(sum, weight);
    r = f32x4.add(r, f32x4.mul(weight, v128.load(at)));
    g = f32x4.add(g, f32x4.mul(weight, v128.load(at, 16)));
    b = f32x4.add(b, f32x4.mul(weight, v128.load(at, 32)));
  }
  const factor = f32x4.div(f32x4.splat(scale), sum);
  const shift = f32x4.splat(offset);
  r = f32x4.add(f32x4.mul(r, factor), shift);
  g = f32x4.add(f32x4.mul(g, factor), shift);
  b = f32x4.add(f32x4.mul(b, factor), shift);
  const square = f32x4.add(f32x4.mul(r, r), f32x4.add(f32x4.mul(g, g), f32x4.mul(b, b)));
  const rg = v128.shuffle<i32>(r, g, 0, 4, 1, 5), bs = v128.shuffle<i32>(b, square, 0, 4, 1, 5);
  v128.store(out, v128.shuffle<i32>(rg, bs, 0, 1, 4, 5));
  v128.store(out, v128.shuffle<i32>(rg, bs, 2, 3, 6, 7), 16);
  const rg2 = v128.shuffle<i32>(r, g, 2, 6, 3, 7), bs2 = v128.shuffle<i32>(b, square, 2, 6, 3, 7);
  v128.store(out + outRowBytes, v128.shuffle<i32>(rg2, bs2, 0, 1, 4, 5));
  v128.store(out + outRowBytes, v128.shuffle<i32>(rg2, bs2, 2, 3, 6, 7), 16);
}
