// Luma planes and their grain, for the ink line. Luma: 0.299 R + 0.587 G + 0.114 B of encoded values
// (ITU-R BT.601).

// @ts-ignore: decorator
@inline
function lumaOfBody(at: usize): f32 {
  return 0.299 * <f32>load<u16>(at) + 0.587 * <f32>load<u16>(at, 2) + 0.114 * <f32>load<u16>(at, 4);
}

/**
 * Body stratum → luma plane at 2^shift times smaller: the mean over each square of 2^shift pixels.
 * @param body window of the painted picture, u16 × 3, `windowWidth` pixels a row
 * @param windowX @param windowY the window's first pixel in the picture
 * @param x0 @param y0 first output pixel in the smaller picture, may lie outside: the edge is repeated
 */
export function lumaFromBody(
  body: usize, windowX: i32, windowY: i32, windowWidth: i32, pictureWidth: i32, pictureHeight: i32, shift: i32,
  x0: i32, y0: i32, width: i32, height: i32, dst: usize, dstStride: i32,
): void {
  const side = 1 << shift;
  const scale: f32 = 1 / (<f32>(side * side) * 65535);
  const lastX = ((pictureWidth + side - 1) >> shift) - 1;
  const lastY = ((pictureHeight + side - 1) >> shift) - 1;
  for (let y = 0; y < height; y++) {
    const Y = max(0, min(y0 + y, lastY)) << shift;
    let out = dst + (<usize>(y * dstStride) << 2);
    for (let x = 0; x < width; x++, out += 4) {
      const X = max(0, min(x0 + x, lastX)) << shift;
      let sum: f32 = 0;
      for (let j = 0; j < side; j++) {
        const row = body + <usize>((min(Y + j, pictureHeight - 1) - windowY) * windowWidth - windowX) * 6;
        for (let i = 0; i < side; i++) sum += lumaOfBody(row + <usize>min(X + i, pictureWidth - 1) * 6);
      }
      store<f32>(out, sum * scale);
    }
  }
}

/** Quad tile → luma plane. */
export function lumaFromQuads(src: usize, srcStride: i32, width: i32, height: i32, dst: usize, dstStride: i32): void {
  for (let y = 0; y < height; y++) {
    let at = src + (<usize>(y * srcStride) << 4);
    let out = dst + (<usize>(y * dstStride) << 2);
    for (let x = 0; x < width; x++, at += 16, out += 4) {
      store<f32>(out, 0.299 * load<f32>(at) + 0.587 * load<f32>(at, 4) + 0.114 * load<f32>(at, 8));
    }
  }
}

/** Derivative kernel as in tensor.ts. */
const p: f32 = 0.183;

// @ts-ignore: decorator
@inline
function at4(src: usize): v128 {
  return v128.load(src);
}

/**
 * Structure tensor of a luma plane, one a block of 2 × 2. Reads one pixel around the blocks and, to the right,
 * up to two more.
 * @param e @param f @param g planes of blocksX × blocksY
 */
export function lumaBlockTensor(
  src: usize, srcStride: i32, blocksX: i32, blocksY: i32, e: usize, f: usize, g: usize, dstStride: i32,
): void {
  const rowBytes = <usize>srcStride << 2;
  const side = f32x4.splat(p), middle = f32x4.splat(1 - 2 * p);
  for (let by = 0; by < blocksY; by++) {
    let row = src + <usize>(2 * by - 1) * rowBytes - 4;
    let out = <usize>(by * dstStride) << 2;
    for (let bx = 0; bx < blocksX; bx++, row += 8, out += 4) {
      // Four columns, x − 1 … x + 2, of four rows.
      const a = at4(row), b = at4(row + rowBytes), c = at4(row + 2 * rowBytes), d = at4(row + 3 * rowBytes);
      // Smoothed down the columns for g_x, differences down the columns for g_y; upper and lower pixel row.
      const smooth0 = f32x4.add(f32x4.mul(side, f32x4.add(a, c)), f32x4.mul(middle, b));
      const smooth1 = f32x4.add(f32x4.mul(side, f32x4.add(b, d)), f32x4.mul(middle, c));
      const step0 = f32x4.sub(c, a);
      const step1 = f32x4.sub(d, b);
      // Lanes 0, 1: upper row's two pixels; lanes 2, 3: lower row's.
      const left = v128.shuffle<i32>(smooth0, smooth1, 0, 1, 4, 5);
      const right = v128.shuffle<i32>(smooth0, smooth1, 2, 3, 6, 7);
      const gx = f32x4.sub(right, left);
      const yLeft = v128.shuffle<i32>(step0, step1, 0, 1, 4, 5);
      const yMiddle = v128.shuffle<i32>(step0, step1, 1, 2, 5, 6);
      const yRight = v128.shuffle<i32>(step0, step1, 2, 3, 6, 7);
      const gy = f32x4.add(f32x4.mul(side, f32x4.add(yLeft, yRight)), f32x4.mul(middle, yMiddle));
      store<f32>(e + out, sum4(f32x4.mul(gx, gx)) * 0.0625);
      store<f32>(f + out, sum4(f32x4.mul(gx, gy)) * 0.0625);
      store<f32>(g + out, sum4(f32x4.mul(gy, gy)) * 0.0625);
    }
  }
}

// @ts-ignore: decorator
@inline
function sum4(v: v128): f32 {
  return f32x4.extract_lane(v, 0) + f32x4.extract_lane(v, 1) + (f32x4.extract_lane(v, 2) + f32x4.extract_lane(v, 3));
}

/** Length of a grain vector. */
export const vectorUnit: i32 = 16384;

/**
 * Unit vector along the grain of each block, from the tensor by the half-angle formulas: with
 * cos 2θ = (E−G)/√((E−G)²+4F²) the gradient is (√((1+cos 2θ)/2), ±√((1−cos 2θ)/2)) and the grain its normal.
 * @param dst x, y of each block as i16, in 16384ths, `dstStride` blocks a row
 */
export function grainVectors(
  e: usize, f: usize, g: usize, stride: i32, blocksX: i32, blocksY: i32, dst: usize, dstStride: i32,
): void {
  for (let by = 0; by < blocksY; by++) {
    let at = <usize>(by * stride) << 2;
    let out = dst + (<usize>(by * dstStride) << 2);
    for (let bx = 0; bx < blocksX; bx++, at += 4, out += 4) {
      const difference = load<f32>(e + at) - load<f32>(g + at);
      const twoF: f32 = load<f32>(f + at) + load<f32>(f + at);
      const root = sqrt<f32>(difference * difference + twoF * twoF);
      const cosine: f32 = root > 1e-12 ? difference / root : 1;
      const gx = sqrt<f32>(max<f32>(0, (1 + cosine) * 0.5));
      const gy = sqrt<f32>(max<f32>(0, (1 - cosine) * 0.5));
      store<i16>(out, <i16>nearest<f32>((twoF < 0 ? gy : -gy) * <f32>vectorUnit));
      store<i16>(out, <i16>nearest<f32>(gx * <f32>vectorUnit), 2);
    }
  }
}
