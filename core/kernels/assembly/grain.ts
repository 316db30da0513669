// Eigen-analysis of the structure tensor, straight to the number of a kernel in the bank.

/** Orientations over π and anisotropies over 0…1 of the kernel bank; part of the definition of the paint. */
export const orientationCount: i32 = 64;
export const anisotropyCount: i32 = 16;

/** atan(t) for t in 0…1: minimax polynomial in t², error below 1e-5 rad, far less than half a step (0.025). */
// @ts-ignore: decorator
@inline
function atan01(t: v128): v128 {
  const u = f32x4.mul(t, t);
  let p = f32x4.splat(-0.0117212);
  p = f32x4.add(f32x4.mul(p, u), f32x4.splat(0.05265332));
  p = f32x4.add(f32x4.mul(p, u), f32x4.splat(-0.11643287));
  p = f32x4.add(f32x4.mul(p, u), f32x4.splat(0.19354346));
  p = f32x4.add(f32x4.mul(p, u), f32x4.splat(-0.33262347));
  p = f32x4.add(f32x4.mul(p, u), f32x4.splat(0.99997726));
  return f32x4.mul(p, t);
}

/** atan2(y, x) in units of full turns, −½…½. Where both are 0 the answer is 0. */
// @ts-ignore: decorator
@inline
export function turnsOf(y: v128, x: v128): v128 {
  const ax = f32x4.abs(x);
  const ay = f32x4.abs(y);
  const high = f32x4.pmax(ax, ay);
  const low = f32x4.pmin(ax, ay);
  const t = f32x4.div(low, f32x4.pmax(high, f32x4.splat(1e-30)));
  let turns = f32x4.mul(atan01(t), f32x4.splat(0.15915494));
  turns = v128.bitselect(f32x4.sub(f32x4.splat(0.25), turns), turns, f32x4.gt(ay, ax));
  turns = v128.bitselect(f32x4.sub(f32x4.splat(0.5), turns), turns, f32x4.lt(x, f32x4.splat(0)));
  return v128.bitselect(f32x4.neg(turns), turns, f32x4.lt(y, f32x4.splat(0)));
}

/**
 * For each block the bank number o·16 + i: tangent angle φ = ½·atan2(2F, E−G) + π/2 to the nearest of 64
 * orientations, anisotropy A = (λ1−λ2)/(λ1+λ2) to the nearest of 16 values i/15.
 * @param e @param f @param g planes, width rounded up to four readable
 * @param dst u16 numbers, blocksX rounded up to four writable
 */
export function grainNumbers(
  e: usize, f: usize, g: usize, stride: i32, blocksX: i32, blocksY: i32, dst: usize, dstStride: i32,
): void {
  for (let by = 0; by < blocksY; by++) {
    const row = <usize>(by * stride) << 2;
    const out = dst + (<usize>(by * dstStride) << 1);
    for (let bx = 0; bx < blocksX; bx += 4) {
      const at = row + (<usize>bx << 2);
      const ve = v128.load(e + at), vf = v128.load(f + at), vg = v128.load(g + at);
      const difference = f32x4.sub(ve, vg);
      const twoF = f32x4.add(vf, vf);
      const trace = f32x4.pmax(f32x4.add(ve, vg), f32x4.splat(1e-20));
      const root = f32x4.sqrt(f32x4.add(f32x4.mul(difference, difference), f32x4.mul(twoF, twoF)));
      const anisotropy = f32x4.pmin(f32x4.div(root, trace), f32x4.splat(1));
      const i = i32x4.trunc_sat_f32x4_s(f32x4.add(f32x4.mul(anisotropy, f32x4.splat(15)), f32x4.splat(0.5)));
      // Half the double angle in units of π is the double angle in turns; + ½ turn is the tangent.
      const step = f32x4.floor(
        f32x4.add(f32x4.mul(f32x4.add(turnsOf(twoF, difference), f32x4.splat(0.5)), f32x4.splat(64)), f32x4.splat(0.5)));
      const o = v128.and(i32x4.trunc_sat_f32x4_s(step), i32x4.splat(63));
      const number = i32x4.add(i32x4.shl(o, 4), i);
      store<u64>(out + (<usize>bx << 1), i64x2.extract_lane(i16x8.narrow_i32x4_u(number, number), 0));
    }
  }
}
