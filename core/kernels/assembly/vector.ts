// Small SIMD building blocks, inlined where they are used. Only IEEE operations: the same bits everywhere.

/** 2^t in four lanes, t in −126…126. Polynomial of degree 6 on the fraction; relative error below 2e-7. */
// @ts-ignore: decorator
@inline
export function exp2x4(t: v128): v128 {
  const whole = f32x4.floor(t);
  const f = f32x4.sub(t, whole);
  let p = f32x4.splat(0.00021702255);
  p = f32x4.add(f32x4.mul(p, f), f32x4.splat(0.0012439688));
  p = f32x4.add(f32x4.mul(p, f), f32x4.splat(0.009678841));
  p = f32x4.add(f32x4.mul(p, f), f32x4.splat(0.055483342));
  p = f32x4.add(f32x4.mul(p, f), f32x4.splat(0.24022984));
  p = f32x4.add(f32x4.mul(p, f), f32x4.splat(0.69314698));
  p = f32x4.add(f32x4.mul(p, f), f32x4.splat(1));
  const exponent = i32x4.shl(i32x4.add(i32x4.trunc_sat_f32x4_s(whole), i32x4.splat(127)), 23);
  return f32x4.mul(p, exponent);
}

/** Lanes 0, 1 and 2 added up. */
// @ts-ignore: decorator
@inline
export function sum3(v: v128): f32 {
  return f32x4.extract_lane(v, 0) + f32x4.extract_lane(v, 1) + f32x4.extract_lane(v, 2);
}

/** R, G, B, anything → R, G, B, R² + G² + B². */
// @ts-ignore: decorator
@inline
export function withSquare(rgb: v128): v128 {
  const squared = f32x4.mul(rgb, rgb);
  return f32x4.replace_lane(rgb, 3, sum3(squared));
}

/** Rows (r0 g0 b0 x0) … → lanes of one channel: 0 red, 1 green, 2 blue, 3 the fourth. */
// @ts-ignore: decorator
@inline
export function channelOf4(a: v128, b: v128, c: v128, d: v128, channel: i32): v128 {
  switch (channel) {
    case 0: {
      const ab = v128.shuffle<i32>(a, b, 0, 4, 0, 4);
      const cd = v128.shuffle<i32>(c, d, 0, 4, 0, 4);
      return v128.shuffle<i32>(ab, cd, 0, 1, 4, 5);
    }
    case 1: {
      const ab = v128.shuffle<i32>(a, b, 1, 5, 1, 5);
      const cd = v128.shuffle<i32>(c, d, 1, 5, 1, 5);
      return v128.shuffle<i32>(ab, cd, 0, 1, 4, 5);
    }
    case 2: {
      const ab = v128.shuffle<i32>(a, b, 2, 6, 2, 6);
      const cd = v128.shuffle<i32>(c, d, 2, 6, 2, 6);
      return v128.shuffle<i32>(ab, cd, 0, 1, 4, 5);
    }
    default: {
      const ab = v128.shuffle<i32>(a, b, 3, 7, 3, 7);
      const cd = v128.shuffle<i32>(c, d, 3, 7, 3, 7);
      return v128.shuffle<i32>(ab, cd, 0, 1, 4, 5);
    }
  }
}

/** One pixel (lane `index` of each channel) back as r, g, b, x. */
// @ts-ignore: decorator
@inline
export function pixelOf4(r: v128, g: v128, b: v128, x: v128, index: i32): v128 {
  switch (index) {
    case 0: {
      const rg = v128.shuffle<i32>(r, g, 0, 4, 0, 4);
      const bx = v128.shuffle<i32>(b, x, 0, 4, 0, 4);
      return v128.shuffle<i32>(rg, bx, 0, 1, 4, 5);
    }
    case 1: {
      const rg = v128.shuffle<i32>(r, g, 1, 5, 1, 5);
      const bx = v128.shuffle<i32>(b, x, 1, 5, 1, 5);
      return v128.shuffle<i32>(rg, bx, 0, 1, 4, 5);
    }
    case 2: {
      const rg = v128.shuffle<i32>(r, g, 2, 6, 2, 6);
      const bx = v128.shuffle<i32>(b, x, 2, 6, 2, 6);
      return v128.shuffle<i32>(rg, bx, 0, 1, 4, 5);
    }
    default: {
      const rg = v128.shuffle<i32>(r, g, 3, 7, 3, 7);
      const bx = v128.shuffle<i32>(b, x, 3, 7, 3, 7);
      return v128.shuffle<i32>(rg, bx, 0, 1, 4, 5);
    }
  }
}
