// Derivatives and structure tensor of a quad tile, one tensor for each 2 × 2 block of pixels.
//
// The tensor is smoothed with σ = 2 px right after, so one value a block loses nothing that the smoothing
// keeps, and everything that follows (smoothing, eigen-analysis, choice of kernel) costs a quarter.

/** Derivative kernel ½[p, 1−2p, p]: B. Jähne, H. Scharr, S. Körkel 1999. */
const p: f32 = 0.183;

/**
 * E = Σ g_x², F = Σ g_x·g_y, G = Σ g_y² over R, G, B (Di Zenzo 1986), averaged over each 2 × 2 block.
 * @param src quad tile at the first block; one more pixel is read on every side
 * @param e @param f @param g planes of blocksX × blocksY float32
 */
export function blockTensor(
  src: usize, srcStride: i32, blocksX: i32, blocksY: i32, e: usize, f: usize, g: usize, dstStride: i32,
): void {
  const rowBytes = <usize>srcStride << 4;
  const side = f32x4.splat(p);
  const middle = f32x4.splat(1 - 2 * p);
  const half: f32 = 0.25 * 0.25; // ½ · ½ of the two derivatives, ¼ of the block mean
  for (let by = 0; by < blocksY; by++) {
    let at0 = src + (<usize>(2 * by - 1) * rowBytes) - 16;
    let out = <usize>(by * dstStride) << 2;
    for (let bx = 0; bx < blocksX; bx++, at0 += 32, out += 4) {
      const at1 = at0 + rowBytes;
      const at2 = at1 + rowBytes;
      const at3 = at2 + rowBytes;
      const a0 = v128.load(at0), a1 = v128.load(at0, 16), a2 = v128.load(at0, 32), a3 = v128.load(at0, 48);
      const b0 = v128.load(at1), b1 = v128.load(at1, 16), b2 = v128.load(at1, 32), b3 = v128.load(at1, 48);
      const c0 = v128.load(at2), c1 = v128.load(at2, 16), c2 = v128.load(at2, 32), c3 = v128.load(at2, 48);
      const d0 = v128.load(at3), d1 = v128.load(at3, 16), d2 = v128.load(at3, 32), d3 = v128.load(at3, 48);

      const xa0 = f32x4.sub(a2, a0), xa1 = f32x4.sub(a3, a1);
      const xb0 = f32x4.sub(b2, b0), xb1 = f32x4.sub(b3, b1);
      const xc0 = f32x4.sub(c2, c0), xc1 = f32x4.sub(c3, c1);
      const xd0 = f32x4.sub(d2, d0), xd1 = f32x4.sub(d3, d1);
      const gx00 = f32x4.add(f32x4.mul(side, f32x4.add(xa0, xc0)), f32x4.mul(middle, xb0));
      const gx10 = f32x4.add(f32x4.mul(side, f32x4.add(xa1, xc1)), f32x4.mul(middle, xb1));
      const gx01 = f32x4.add(f32x4.mul(side, f32x4.add(xb0, xd0)), f32x4.mul(middle, xc0));
      const gx11 = f32x4.add(f32x4.mul(side, f32x4.add(xb1, xd1)), f32x4.mul(middle, xc1));

      const ya0 = f32x4.sub(c0, a0), ya1 = f32x4.sub(c1, a1), ya2 = f32x4.sub(c2, a2), ya3 = f32x4.sub(c3, a3);
      const yb0 = f32x4.sub(d0, b0), yb1 = f32x4.sub(d1, b1), yb2 = f32x4.sub(d2, b2), yb3 = f32x4.sub(d3, b3);
      const gy00 = f32x4.add(f32x4.mul(side, f32x4.add(ya0, ya2)), f32x4.mul(middle, ya1));
      const gy10 = f32x4.add(f32x4.mul(side, f32x4.add(ya1, ya3)), f32x4.mul(middle, ya2));
      const gy01 = f32x4.add(f32x4.mul(side, f32x4.add(yb0, yb2)), f32x4.mul(middle, yb1));
      const gy11 = f32x4.add(f32x4.mul(side, f32x4.add(yb1, yb3)), f32x4.mul(middle, yb2));

      const xx = f32x4.add(
        f32x4.add(f32x4.mul(gx00, gx00), f32x4.mul(gx10, gx10)), f32x4.add(f32x4.mul(gx01, gx01), f32x4.mul(gx11, gx11)));
      const xy = f32x4.add(
        f32x4.add(f32x4.mul(gx00, gy00), f32x4.mul(gx10, gy10)), f32x4.add(f32x4.mul(gx01, gy01), f32x4.mul(gx11, gy11)));
      const yy = f32x4.add(
        f32x4.add(f32x4.mul(gy00, gy00), f32x4.mul(gy10, gy10)), f32x4.add(f32x4.mul(gy01, gy01), f32x4.mul(gy11, gy11)));
      store<f32>(e + out, (f32x4.extract_lane(xx, 0) + f32x4.extract_lane(xx, 1) + f32x4.extract_lane(xx, 2)) * half);
      store<f32>(f + out, (f32x4.extract_lane(xy, 0) + f32x4.extract_lane(xy, 1) + f32x4.extract_lane(xy, 2)) * half);
      store<f32>(g + out, (f32x4.extract_lane(yy, 0) + f32x4.extract_lane(yy, 1) + f32x4.extract_lane(yy, 2)) * half);
    }
  }
}

/**
 * Adds a quarter of the coarser level's tensor, its components upsampled bilinearly (never the angles):
 * flat areas take their orientation from the larger forms around them.
 * @param e @param f @param g planes of blocksX × blocksY, changed in place
 * @param coarse three planes one after the other, each coarseWidth × coarseHeight
 * @param x0 @param y0 the first block's place in this level's whole grid of blocks; it may lie outside, where the
 *   coarser level's edge is repeated
 */
export function addCoarseTensor(
  e: usize, f: usize, g: usize, stride: i32, blocksX: i32, blocksY: i32,
  coarse: usize, coarseWidth: i32, coarseHeight: i32, x0: i32, y0: i32,
): void {
  const plane = <usize>(coarseWidth * coarseHeight) << 2;
  for (let by = 0; by < blocksY; by++) {
    const Y = y0 + by;
    const nearY = inside(Y >> 1, coarseHeight);
    const farY = inside((Y >> 1) + ((Y & 1) == 0 ? -1 : 1), coarseHeight);
    const nearRow = coarse + (<usize>(nearY * coarseWidth) << 2);
    const farRow = coarse + (<usize>(farY * coarseWidth) << 2);
    let out = <usize>(by * stride) << 2;
    for (let bx = 0; bx < blocksX; bx++, out += 4) {
      const X = x0 + bx;
      const nearX = inside(X >> 1, coarseWidth);
      const farX = inside((X >> 1) + ((X & 1) == 0 ? -1 : 1), coarseWidth);
      const nn = nearRow + (<usize>nearX << 2), nf = nearRow + (<usize>farX << 2);
      const fn = farRow + (<usize>nearX << 2), ff = farRow + (<usize>farX << 2);
      store<f32>(e + out, load<f32>(e + out) + upsampled(nn, nf, fn, ff));
      store<f32>(f + out, load<f32>(f + out) + upsampled(nn + plane, nf + plane, fn + plane, ff + plane));
      store<f32>(g + out, load<f32>(g + out) + upsampled(nn + 2 * plane, nf + 2 * plane, fn + 2 * plane, ff + 2 * plane));
    }
  }
}

// @ts-ignore: decorator
@inline
function inside(v: i32, count: i32): i32 {
  return max(0, min(v, count - 1));
}

// @ts-ignore: decorator
@inline
function upsampled(nn: usize, nf: usize, fn: usize, ff: usize): f32 {
  return 0.25 * (0.5625 * load<f32>(nn) + 0.1875 * (load<f32>(nf) + load<f32>(fn)) + 0.0625 * load<f32>(ff));
}
