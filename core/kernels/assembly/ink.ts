// The soft threshold that turns S into ink (XDoG: Winnemöller, Kyprianidis, Olsen 2012), applied last.
import { exp2x4 } from './vector';

const twoLog2e: f32 = 2.88539008;

/** 1 − T: 0 where S ≥ ε, else −tanh(φ(S − ε)). */
// @ts-ignore: decorator
@inline
function coverage(s: v128, epsilon: v128, phi: v128): v128 {
  const u = f32x4.pmax(f32x4.mul(phi, f32x4.pmin(f32x4.sub(s, epsilon), f32x4.splat(0))), f32x4.splat(-30));
  const e = exp2x4(f32x4.mul(u, f32x4.splat(twoLog2e)));
  // −tanh(u) = (1 − e^2u)/(1 + e^2u)
  return f32x4.div(f32x4.sub(f32x4.splat(1), e), f32x4.add(f32x4.splat(1), e));
}

/**
 * S, brought up bilinearly by 2^shift, → ink coverage in bytes.
 * @param src plane of S, `srcWidth` × `srcHeight`, whose pixel (0, 0) stands at (originX, originY) of the smaller
 *   picture; neighbours beyond it are repeated
 * @param x0 @param y0 first output pixel in the full picture
 */
export function inkCoverage(
  src: usize, srcStride: i32, srcWidth: i32, srcHeight: i32, originX: i32, originY: i32, shift: i32,
  x0: i32, y0: i32, width: i32, height: i32, epsilon: f32, phi: f32, dst: usize, dstStride: i32,
): void {
  const size: f32 = 1 / <f32>(1 << shift);
  const ve = f32x4.splat(epsilon), vp = f32x4.splat(phi);
  for (let y = 0; y < height; y++) {
    const sy = (<f32>(y0 + y) + 0.5) * size - 0.5 - <f32>originY;
    const fy = floor<f32>(sy);
    const ty = sy - fy;
    const upper = src + (<usize>(max(0, min(<i32>fy, srcHeight - 1)) * srcStride) << 2);
    const lower = src + (<usize>(max(0, min(<i32>fy + 1, srcHeight - 1)) * srcStride) << 2);
    const out = dst + <usize>(y * dstStride);
    for (let x = 0; x < width; x += 4) {
      let s: v128 = f32x4.splat(0);
      if (shift == 0 && x + 4 <= width) {
        s = v128.load(upper + (<usize>(x0 + x - originX) << 2));
      } else {
        s = f32x4.replace_lane(s, 0, brought(upper, lower, ty, x0 + x, size, originX, srcWidth));
        s = f32x4.replace_lane(s, 1, brought(upper, lower, ty, x0 + x + 1, size, originX, srcWidth));
        s = f32x4.replace_lane(s, 2, brought(upper, lower, ty, x0 + x + 2, size, originX, srcWidth));
        s = f32x4.replace_lane(s, 3, brought(upper, lower, ty, x0 + x + 3, size, originX, srcWidth));
      }
      const ink = f32x4.add(f32x4.mul(coverage(s, ve, vp), f32x4.splat(255)), f32x4.splat(0.5));
      const words = i16x8.narrow_i32x4_u(i32x4.trunc_sat_f32x4_s(ink), i32x4.splat(0));
      const bytes = i32x4.extract_lane(i8x16.narrow_i16x8_u(words, words), 0);
      if (x + 4 <= width) store<u32>(out + <usize>x, bytes);
      else for (let i = 0; x + i < width; i++) store<u8>(out + <usize>(x + i), <u8>(bytes >>> (8 * i)));
    }
  }
}

// @ts-ignore: decorator
@inline
function brought(upper: usize, lower: usize, ty: f32, x: i32, size: f32, originX: i32, srcWidth: i32): f32 {
  const sx = (<f32>x + 0.5) * size - 0.5 - <f32>originX;
  const fx = floor<f32>(sx);
  const tx = sx - fx;
  const near = <usize>max(0, min(<i32>fx, srcWidth - 1)) << 2;
  const far = <usize>max(0, min(<i32>fx + 1, srcWidth - 1)) << 2;
  const a = load<f32>(upper + near) + tx * (load<f32>(upper + far) - load<f32>(upper + near));
  const b = load<f32>(lower + near) + tx * (load<f32>(lower + far) - load<f32>(lower + near));
  return a + ty * (b - a);
}
