// exp for weights whose argument may be large: argument reduced exactly, IEEE operations only.

/**
 * e^−x in four lanes, x ≥ 0; beyond 87 the answer is that of 87 (1.6e-38, the least normal magnitude).
 * x = n·ln 2 + r with ln 2 in two parts (the first has 9 significant bits, so n times it is exact), then
 * 1 + r + r²·P(r), P of degree 4 fitted for the least largest relative error on |r| ≤ ½·ln 2 (3e-9 before
 * rounding to float32). Relative error with rounding: below 2e-7.
 */
// @ts-ignore: decorator
@inline
export function expOfMinus4(x: v128): v128 {
  const t = f32x4.neg(f32x4.min(x, f32x4.splat(87)));
  const n = f32x4.nearest(f32x4.mul(t, f32x4.splat(1.4426950408889634)));
  const r = f32x4.sub(f32x4.sub(t, f32x4.mul(n, f32x4.splat(0.693359375))), f32x4.mul(n, f32x4.splat(-0.00021219444005469057)));
  let p = f32x4.splat(0.0013814539935107942);
  p = f32x4.add(f32x4.mul(p, r), f32x4.splat(0.008368745116103256));
  p = f32x4.add(f32x4.mul(p, r), f32x4.splat(0.04166839078818284));
  p = f32x4.add(f32x4.mul(p, r), f32x4.splat(0.1666652039896506));
  p = f32x4.add(f32x4.mul(p, r), f32x4.splat(0.49999993432108125));
  p = f32x4.add(f32x4.mul(f32x4.mul(r, r), p), r);
  const power = i32x4.shl(i32x4.add(i32x4.trunc_sat_f32x4_s(n), i32x4.splat(127)), 23);
  return f32x4.mul(f32x4.add(p, f32x4.splat(1)), power);
}

/** e^−x for a row of float32; count is rounded up to four. Its own test holds it to the true values. */
export function expOfMinus(src: usize, count: i32, dst: usize): void {
  for (let i = 0; i < count; i += 4) {
    v128.store(dst + (<usize>i << 2), expOfMinus4(v128.load(src + (<usize>i << 2))));
  }
}
