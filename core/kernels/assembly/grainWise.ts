// Grain-wise smoothing from the kernel bank (anisotropic Kuwahara filtering: Kyprianidis, Kang, Döllner 2009).
import { indexRowBytes, sectorCount } from './bank';
import { chooseColour } from './choose';
import { channelOf4 } from './vector';

/**
 * Smooths a tile, 2 × 2 pixels at a time: the four share a kernel, so each weight is loaded once for four.
 * @param src quad tile with a halo of the bank's reach
 * @param numbers u16 bank number of each block
 * @param bank built for `srcStride`
 * @param noiseFloor smallest deviation that counts, encoded units
 * @param crispness whole number q
 * @param scratch 512 bytes of the caller's own
 * @param dst quads, |c|² filled in
 */
export function grainWise(
  src: usize, srcStride: i32, blocksX: i32, blocksY: i32, numbers: usize, numbersStride: i32, bank: usize,
  noiseFloor: f32, crispness: i32, scratch: usize, dst: usize, dstStride: i32,
): void {
  const rowBytes = <usize>srcStride << 4;
  const dstRowBytes = <usize>dstStride << 4;
  const floorSquared = noiseFloor * noiseFloor;
  for (let by = 0; by < blocksY; by++) {
    let base = src + <usize>(2 * by) * rowBytes;
    let out = dst + <usize>(2 * by) * dstRowBytes;
    let number = numbers + (<usize>(by * numbersStride) << 1);
    for (let bx = 0; bx < blocksX; bx++, base += 32, out += 32, number += 2) {
      const index = bank + <usize>load<u16>(number) * indexRowBytes;
      let entry = bank + <usize>load<i32>(index);
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
        const to = scratch + <usize>(k << 4);
        v128.store(to, s00);
        v128.store(to, s10, 128);
        v128.store(to, s01, 256);
        v128.store(to, s11, 384);
      }
      v128.store(out, colourFrom(scratch, floorSquared, crispness));
      v128.store(out, colourFrom(scratch + 128, floorSquared, crispness), 16);
      v128.store(out + dstRowBytes, colourFrom(scratch + 256, floorSquared, crispness));
      v128.store(out + dstRowBytes, colourFrom(scratch + 384, floorSquared, crispness), 16);
    }
  }
}

// @ts-ignore: decorator
@inline
function colourFrom(sums: usize, floorSquared: f32, crispness: i32): v128 {
  const a = v128.load(sums), b = v128.load(sums, 16), c = v128.load(sums, 32), d = v128.load(sums, 48);
  const e = v128.load(sums, 64), f = v128.load(sums, 80), g = v128.load(sums, 96), h = v128.load(sums, 112);
  return chooseColour(
    channelOf4(a, b, c, d, 0), channelOf4(a, b, c, d, 1), channelOf4(a, b, c, d, 2), channelOf4(a, b, c, d, 3),
    channelOf4(e, f, g, h, 0), channelOf4(e, f, g, h, 1), channelOf4(e, f, g, h, 2), channelOf4(e, f, g, h, 3),
    floorSquared, crispness);
}

/** Sets block numbers to 0, the round kernel. */
export function clearNumbers(numbers: usize, count: i32): void {
  memory.fill(numbers, 0, <usize>count << 1);
}
