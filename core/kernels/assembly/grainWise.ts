// Grain-wise smoothing from the kernel bank (anisotropic Kuwahara filtering: Kyprianidis, Kang, Döllner 2009).
import { fixedWeightSum, indexRowBytes, sectorCount } from './bank';
import { chooseBlock, keepSector } from './choose';
import { squareMiddle, squareStep, valueScale } from './fixedPoint';

/**
 * Smooths a tile, 2 × 2 pixels at a time: the four share a kernel, so each weight is loaded once for four.
 * @param src quad tile with a halo of the bank's reach
 * @param numbers u16 bank number of each block
 * @param bank built for `srcStride`
 * @param noiseFloor smallest deviation that counts, encoded units
 * @param crispness whole number q
 * @param scratch `choiceBytes` of the caller's own
 * @param dst quads, |c|² filled in
 */
export function grainWise(
  src: usize, srcStride: i32, blocksX: i32, blocksY: i32, numbers: usize, numbersStride: i32, bank: usize,
  noiseFloor: f32, crispness: i32, scratch: usize, dst: usize, dstStride: i32,
): void {
  const rowBytes = <usize>srcStride << 4;
  const dstRowBytes = <usize>dstStride << 4;
  const floorSquared = f32x4.splat(noiseFloor * noiseFloor);
  for (let by = 0; by < blocksY; by++) {
    let base = src + <usize>(2 * by) * rowBytes;
    let out = dst + <usize>(2 * by) * dstRowBytes;
    let number = numbers + (<usize>(by * numbersStride) << 1);
    for (let bx = 0; bx < blocksX; bx++, base += 32, out += 32, number += 2) {
      const index = bank + <usize>load<u16>(number) * indexRowBytes;
      let entry = bank + <usize>load<i32>(index);
      let least = f32x4.splat(3.4e38);
      for (let k = 0; k < sectorCount; k++) {
        const end = bank + <usize>load<i32>(index + <usize>(k * 4), 4);
        let s00 = f32x4.splat(0), s10 = f32x4.splat(0), s01 = f32x4.splat(0), s11 = f32x4.splat(0);
        for (; entry < end; entry += 8) {
          const at = base + <usize>load<i32>(entry);
          const below = at + rowBytes;
          const weight = v128.load32_splat(entry, 4);
          s00 = f32x4.add(s00, f32x4.mul(v128.load(at), weight));
          s10 = f32x4.add(s10, f32x4.mul(v128.load(at, 16), weight));
          s01 = f32x4.add(s01, f32x4.mul(v128.load(below), weight));
          s11 = f32x4.add(s11, f32x4.mul(v128.load(below, 16), weight));
        }
        // Four pixels of four numbers → four numbers of four pixels.
        const rg = v128.shuffle<i32>(s00, s10, 0, 4, 1, 5), rg2 = v128.shuffle<i32>(s01, s11, 0, 4, 1, 5);
        const bs = v128.shuffle<i32>(s00, s10, 2, 6, 3, 7), bs2 = v128.shuffle<i32>(s01, s11, 2, 6, 3, 7);
        const deviation = keepSector(
          scratch, k, v128.shuffle<i32>(rg, rg2, 0, 1, 4, 5), v128.shuffle<i32>(rg, rg2, 2, 3, 6, 7),
          v128.shuffle<i32>(bs, bs2, 0, 1, 4, 5), v128.shuffle<i32>(bs, bs2, 2, 3, 6, 7), floorSquared);
        least = f32x4.pmin(least, deviation);
      }
      chooseBlock(scratch, least, crispness, 1, 0, out, dstRowBytes);
    }
  }
}

/**
 * The same smoothing in fixed point, two samples a multiply-add.
 * @param src packed tile from `packPairs`, with a halo of the bank's reach
 * @param bank from `buildFixedBank`
 */
export function grainWiseFixed(
  src: usize, srcStride: i32, blocksX: i32, blocksY: i32, numbers: usize, numbersStride: i32, bank: usize,
  noiseFloor: f32, crispness: i32, scratch: usize, dst: usize, dstStride: i32,
): void {
  const rowBytes = <usize>srcStride << 4;
  const dstRowBytes = <usize>dstStride << 4;
  const floorSquared = f32x4.splat(noiseFloor * noiseFloor * (valueScale * valueScale));
  for (let by = 0; by < blocksY; by++) {
    let base = src + <usize>(2 * by) * rowBytes;
    let out = dst + <usize>(2 * by) * dstRowBytes;
    let number = numbers + (<usize>(by * numbersStride) << 1);
    for (let bx = 0; bx < blocksX; bx++, base += 32, out += 32, number += 2) {
      const index = bank + <usize>load<u16>(number) * indexRowBytes;
      let entry = bank + <usize>load<i32>(index);
      let least = f32x4.splat(3.4e38);
      for (let k = 0; k < sectorCount; k++) {
        const end = bank + <usize>load<i32>(index + <usize>(k * 4), 4);
        let s00 = i32x4.splat(0), s10 = i32x4.splat(0), s01 = i32x4.splat(0), s11 = i32x4.splat(0);
        for (; entry < end; entry += 8) {
          const at = base + <usize>load<i32>(entry);
          const below = at + rowBytes;
          const weight = v128.load32_splat(entry, 4);
          s00 = i32x4.add(s00, i32x4.dot_i16x8_s(v128.load(at), weight));
          s10 = i32x4.add(s10, i32x4.dot_i16x8_s(v128.load(at, 16), weight));
          s01 = i32x4.add(s01, i32x4.dot_i16x8_s(v128.load(below), weight));
          s11 = i32x4.add(s11, i32x4.dot_i16x8_s(v128.load(below, 16), weight));
        }
        // Four pixels of four numbers → four numbers of four pixels.
        const rg = v128.shuffle<i32>(s00, s10, 0, 4, 1, 5), rg2 = v128.shuffle<i32>(s01, s11, 0, 4, 1, 5);
        const bs = v128.shuffle<i32>(s00, s10, 2, 6, 3, 7), bs2 = v128.shuffle<i32>(s01, s11, 2, 6, 3, 7);
        const deviation = keepSector(
          scratch, k, mean(v128.shuffle<i32>(rg, rg2, 0, 1, 4, 5)), mean(v128.shuffle<i32>(rg, rg2, 2, 3, 6, 7)),
          mean(v128.shuffle<i32>(bs, bs2, 0, 1, 4, 5)), squareOf(v128.shuffle<i32>(bs, bs2, 2, 3, 6, 7)), floorSquared);
        least = f32x4.pmin(least, deviation);
      }
      chooseBlock(scratch, least, crispness, 1 / valueScale, 0.5, out, dstRowBytes);
    }
  }
}

// @ts-ignore: decorator
@inline
function mean(sums: v128): v128 {
  return f32x4.mul(f32x4.convert_i32x4_s(sums), f32x4.splat(1 / <f32>fixedWeightSum));
}

// @ts-ignore: decorator
@inline
function squareOf(sums: v128): v128 {
  return f32x4.add(f32x4.mul(mean(sums), f32x4.splat(squareStep)), f32x4.splat(squareMiddle));
}

/** Sets block numbers to 0, the round kernel. */
export function clearNumbers(numbers: usize, count: i32): void {
  memory.fill(numbers, 0, <usize>count << 1);
}
