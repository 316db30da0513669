// exp for weights whose argument may be large: argument reduced exactly, IEEE operations only.

/**
 * e^−x in four lanes, x ≥ 0; beyond 60 the answer is that of 60 (8.8e-27): nothing as a weight beside 1, and
 * products with it stay clear of denormal numbers, which cost a processor some hundred cycles each.
 * x = n·ln 2 + r with ln 2 in two parts (the first has 9 significant bits, so n times it is exact), then
 * 1 + r + r²·P(r), P of degree 4 fitted for the least largest relative error on |r| ≤ ½·ln 2 (3e-9 before
 * rounding to float32). Relative error with rounding: below 2e-7.
 */
// @ts-ignore: decorator
@inline
export function expOfMinus4(x: v128): v128 {
  const t = f32x4.neg(f32x4.min(x, f32x4.splat(60)));
  // Adding 1.5·2^23 rounds to a whole number (half to even) and leaves n in the low bits: half the
  // instructions of nearest, trunc_sat and a product with 2^n.
  const shifted = f32x4.add(f32x4.mul(t, f32x4.splat(1.4426950408889634)), f32x4.splat(12582912));
  const n = f32x4.sub(shifted, f32x4.splat(12582912));
  let r = f32x4.sub(t, f32x4.mul(n, f32x4.splat(0.693359375)));
  r = f32x4.add(r, f32x4.mul(n, f32x4.splat(0.00021219444005469057)));
  let p = f32x4.splat(0.0013814539935107942);
  p = f32x4.add(f32x4.mul(p, r), f32x4.splat(0.008368745116103256));
  p = f32x4.add(f32x4.mul(p, r), f32x4.splat(0.04166839078818284));
  p = f32x4.add(f32x4.mul(p, r), f32x4.splat(0.1666652039896506));
  p = f32x4.add(f32x4.mul(p, r), f32x4.splat(0.49999993432108125));
  p = f32x4.add(f32x4.mul(f32x4.mul(r, r), p), r);
  return i32x4.add(f32x4.add(p, f32x4.splat(1)), i32x4.shl(shifted, 23));
}

/** e^−x for a row of float32; count is rounded up to four. Its own test holds it to the true values. */
export function expOfMinus(src: usize, count: i32, dst: usize): void {
  for (let i = 0; i < count; i += 4) {
    v128.store(dst + (<usize>i << 2), expOfMinus4(v128.load(src + (<usize>i << 2))));
  }
}
