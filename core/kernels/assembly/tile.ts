// Moves pixels between pictures and tiles. A tile's rectangle may reach outside the picture: there the
// nearest pixel of the picture is repeated.
import { withSquare } from './vector';

// @ts-ignore: decorator
@inline
function clamp(v: i32, last: i32): i32 {
  return max(0, min(v, last));
}

// @ts-ignore: decorator
@inline
function loadPhotoPixel(row: usize, x: i32, channels: i32, bytesPerSample: i32): v128 {
  const at = row + <usize>(x * channels * bytesPerSample);
  if (bytesPerSample == 1) {
    const ints = i32x4(load<u8>(at), load<u8>(at, 1), load<u8>(at, 2), 0);
    return f32x4.div(f32x4.convert_i32x4_s(ints), f32x4.splat(255));
  }
  const ints = i32x4(load<u16>(at), load<u16>(at, 2), load<u16>(at, 4), 0);
  return f32x4.div(f32x4.convert_i32x4_s(ints), f32x4.splat(65535));
}

/**
 * Photo → quad tile, in encoded values 0..1.
 * @param src the photo, interleaved, 3 or 4 channels of 1 or 2 bytes; alpha is left out
 * @param x0 @param y0 the tile's first pixel in the photo, may lie outside
 * @param dst receives width × height quads
 */
export function photoToQuads(
  src: usize, pictureWidth: i32, pictureHeight: i32, channels: i32, bytesPerSample: i32,
  x0: i32, y0: i32, width: i32, height: i32, dst: usize, dstStride: i32,
): void {
  const rowBytes = <usize>(pictureWidth * channels * bytesPerSample);
  for (let y = 0; y < height; y++) {
    const row = src + <usize>clamp(y0 + y, pictureHeight - 1) * rowBytes;
    let out = dst + (<usize>(y * dstStride) << 4);
    for (let x = 0; x < width; x++, out += 16) {
      v128.store(out, withSquare(loadPhotoPixel(row, clamp(x0 + x, pictureWidth - 1), channels, bytesPerSample)));
    }
  }
}

/** Stored quad picture (no halo, stride = width) → quad tile. */
export function quadsToTile(
  src: usize, pictureWidth: i32, pictureHeight: i32,
  x0: i32, y0: i32, width: i32, height: i32, dst: usize, dstStride: i32,
): void {
  for (let y = 0; y < height; y++) {
    const row = src + ((<usize>clamp(y0 + y, pictureHeight - 1) * <usize>pictureWidth) << 4);
    const out = dst + (<usize>(y * dstStride) << 4);
    const inside0 = clamp(-x0, width);
    const inside1 = clamp(pictureWidth - x0, width);
    if (inside1 > inside0) memory.copy(out + (<usize>inside0 << 4), row + (<usize>(x0 + inside0) << 4), <usize>(inside1 - inside0) << 4);
    const first = v128.load(row);
    for (let x = 0; x < inside0; x++) v128.store(out + (<usize>x << 4), first);
    const last = v128.load(row + (<usize>(pictureWidth - 1) << 4));
    for (let x = max(inside1, 0); x < width; x++) v128.store(out + (<usize>x << 4), last);
  }
}

/**
 * Repeats the edge of the picture into those parts of a tile that lie outside it; used after a kernel has
 * written only the pixels inside.
 * @param tile the tile's first pixel, which is the picture's pixel (x0, y0)
 */
export function repeatEdges(
  tile: usize, stride: i32, x0: i32, y0: i32, width: i32, height: i32, pictureWidth: i32, pictureHeight: i32,
): void {
  const left = max(0, -x0);
  const right = min(width, pictureWidth - x0);
  const top = max(0, -y0);
  const bottom = min(height, pictureHeight - y0);
  for (let y = top; y < bottom; y++) {
    const row = tile + (<usize>(y * stride) << 4);
    if (left > 0) {
      const v = v128.load(row + (<usize>left << 4));
      for (let x = 0; x < left; x++) v128.store(row + (<usize>x << 4), v);
    }
    if (right < width) {
      const v = v128.load(row + (<usize>(right - 1) << 4));
      for (let x = right; x < width; x++) v128.store(row + (<usize>x << 4), v);
    }
  }
  const rowBytes = <usize>width << 4;
  for (let y = 0; y < top; y++) memory.copy(tile + (<usize>(y * stride) << 4), tile + (<usize>(top * stride) << 4), rowBytes);
  for (let y = bottom; y < height; y++) memory.copy(tile + (<usize>(y * stride) << 4), tile + (<usize>((bottom - 1) * stride) << 4), rowBytes);
}

/** Quad tile → stored quad picture. */
export function tileToQuads(src: usize, srcStride: i32, width: i32, height: i32, dst: usize, dstStride: i32): void {
  for (let y = 0; y < height; y++) {
    memory.copy(dst + (<usize>(y * dstStride) << 4), src + (<usize>(y * srcStride) << 4), <usize>width << 4);
  }
}

/** Quad tile → body stratum: R, G, B as 16-bit whole numbers, rounded to nearest. */
export function tileToBody(src: usize, srcStride: i32, width: i32, height: i32, dst: usize, dstStride: i32): void {
  const scale = f32x4.splat(65535);
  const half = f32x4.splat(0.5);
  for (let y = 0; y < height; y++) {
    let at = src + (<usize>(y * srcStride) << 4);
    let out = dst + <usize>(y * dstStride) * 6;
    for (let x = 0; x < width; x++, at += 16, out += 6) {
      const clamped = f32x4.pmin(f32x4.pmax(v128.load(at), f32x4.splat(0)), f32x4.splat(1));
      const whole = i32x4.trunc_sat_f32x4_s(f32x4.add(f32x4.mul(clamped, scale), half));
      store<u16>(out, i32x4.extract_lane(whole, 0));
      store<u16>(out, i32x4.extract_lane(whole, 1), 2);
      store<u16>(out, i32x4.extract_lane(whole, 2), 4);
    }
  }
}

/**
 * Halves a quad tile: each output pixel is the mean of 2 × 2. White noise halves with it.
 * @param src 2·width × 2·height quads
 */
export function halveQuads(src: usize, srcStride: i32, width: i32, height: i32, dst: usize, dstStride: i32): void {
  const quarter = f32x4.splat(0.25);
  const rowBytes = <usize>srcStride << 4;
  for (let y = 0; y < height; y++) {
    let at = src + (<usize>(2 * y * srcStride) << 4);
    let out = dst + (<usize>(y * dstStride) << 4);
    for (let x = 0; x < width; x++, at += 32, out += 16) {
      const top = f32x4.add(v128.load(at), v128.load(at, 16));
      const bottom = f32x4.add(v128.load(at + rowBytes), v128.load(at + rowBytes, 16));
      v128.store(out, withSquare(f32x4.mul(f32x4.add(top, bottom), quarter)));
    }
  }
}

/** Plane of float32 → plane. */
export function copyPlane(src: usize, srcStride: i32, width: i32, height: i32, dst: usize, dstStride: i32): void {
  for (let y = 0; y < height; y++) {
    memory.copy(dst + (<usize>(y * dstStride) << 2), src + (<usize>(y * srcStride) << 2), <usize>width << 2);
  }
}

/**
 * Stored quad picture of level `level` → ground stratum of 8 bits; alpha is taken from the photo, from the pixel
 * nearest to the middle of what the level's pixel stands for.
 */
export function quadsToGround(
  src: usize, srcWidth: i32, x0: i32, y0: i32, width: i32, height: i32, dst: usize, dstStride: i32,
  photo: usize, photoWidth: i32, photoHeight: i32, channels: i32, bytesPerSample: i32, level: i32,
): void {
  const middle = (1 << level) >> 1;
  for (let y = 0; y < height; y++) {
    const row = src + ((<usize>(y0 + y) * <usize>srcWidth + <usize>x0) << 4);
    const photoRow = photo + <usize>min(((y0 + y) << level) + middle, photoHeight - 1) * <usize>(photoWidth * channels * bytesPerSample);
    let out = dst + <usize>(y * dstStride * channels);
    for (let x = 0; x < width; x++, out += channels) {
      const v = f32x4.pmin(f32x4.pmax(v128.load(row + (<usize>x << 4)), f32x4.splat(0)), f32x4.splat(1));
      const whole = i32x4.trunc_sat_f32x4_s(f32x4.add(f32x4.mul(v, f32x4.splat(255)), f32x4.splat(0.5)));
      store<u8>(out, i32x4.extract_lane(whole, 0));
      store<u8>(out, i32x4.extract_lane(whole, 1), 1);
      store<u8>(out, i32x4.extract_lane(whole, 2), 2);
      if (channels == 4) {
        const at = photoRow + <usize>(min(((x0 + x) << level) + middle, photoWidth - 1) * 4 * bytesPerSample);
        store<u8>(out, bytesPerSample == 1 ? load<u8>(at, 3) : <u8>(load<u16>(at, 6) >>> 8), 3);
      }
    }
  }
}
