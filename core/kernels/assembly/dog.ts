// Difference of Gaussians across the grain: the first half of the flow-guided filter of Kyprianidis and
// Döllner 2008, with the weights of Winnemöller, Kyprianidis and Olsen 2012.

/** Slopes of the sampling line that have weights of their own: minor over major step, 0…1. */
const slopeCount: i32 = 33;
/** Standard deviations the wider Gaussian is cut at. */
const cut: f64 = 2.5;
/** Wider over narrower standard deviation. */
const ratio: f64 = 1.6;

/** Steps on each side of the pixel. */
export function dogReachPx(sigmaPx: f64): i32 {
  return <i32>Math.ceil(cut * ratio * sigmaPx);
}

export function dogTableBytes(sigmaPx: f64): i32 {
  return slopeCount * (dogReachPx(sigmaPx) + 1) * 4;
}

/**
 * Weights of S = (1+p)·G_σ − p·G_kσ along a line sampled once a pixel of its major axis: for a slope s the
 * samples are √(1+s²) apart. Each Gaussian is normalised for its own spacing.
 * @param table slope by slope, weights at 0 … reach
 */
export function dogTable(sigmaPx: f64, p: f64, table: usize): void {
  const reach = dogReachPx(sigmaPx);
  for (let i = 0; i < slopeCount; i++) {
    const slope = <f64>i / <f64>(slopeCount - 1);
    const spacing = Math.sqrt(1 + slope * slope);
    let narrow: f64 = 1, wide: f64 = 1;
    for (let j = 1; j <= reach; j++) {
      narrow += 2 * gaussian(<f64>j * spacing, sigmaPx);
      wide += 2 * gaussian(<f64>j * spacing, sigmaPx * ratio);
    }
    for (let j = 0; j <= reach; j++) {
      const d = <f64>j * spacing;
      const weight = ((1 + p) * gaussian(d, sigmaPx)) / narrow - (p * gaussian(d, sigmaPx * ratio)) / wide;
      store<f32>(table + <usize>((i * (reach + 1) + j) << 2), <f32>weight);
    }
  }
}

function gaussian(d: f64, sigma: f64): f64 {
  return Math.exp(-(d * d) / (2 * sigma * sigma));
}

// @ts-ignore: decorator
@inline
function between(a: v128, b: v128, t: v128): v128 {
  return f32x4.add(a, f32x4.mul(t, f32x4.sub(b, a)));
}

// Two rows of two pixels each as one vector.
// @ts-ignore: decorator
@inline
function rows2(upper: v128, lower: v128): v128 {
  return v128.shuffle<i32>(upper, lower, 0, 1, 4, 5);
}

/** 2 × 2 pixels at a step of `dx` columns and a fraction of a row below `at`. */
// @ts-ignore: decorator
@inline
function alongX(at: usize, rowBytes: usize, t: v128): v128 {
  const a = v128.load64_zero(at), b = v128.load64_zero(at + rowBytes), c = v128.load64_zero(at + 2 * rowBytes);
  return between(rows2(a, b), rows2(b, c), t);
}

/** 2 × 2 pixels a fraction of a column to the right of `at`. */
// @ts-ignore: decorator
@inline
function alongY(at: usize, rowBytes: usize, t: v128): v128 {
  const a = v128.load(at), b = v128.load(at + rowBytes);
  return between(v128.shuffle<i32>(a, b, 0, 1, 4, 5), v128.shuffle<i32>(a, b, 1, 2, 5, 6), t);
}

/**
 * S across the grain, the four pixels of a block along lines of one direction.
 * @param src luma plane; `reach` + 2 pixels are read around
 * @param vectors x, y along the grain of each block, from `grainVectors`
 * @param dst plane of 2·blocksX × 2·blocksY
 */
export function dogAcross(
  src: usize, srcStride: i32, blocksX: i32, blocksY: i32, vectors: usize, vectorsStride: i32,
  table: usize, reach: i32, dst: usize, dstStride: i32,
): void {
  const rowBytes = <usize>srcStride << 2;
  for (let by = 0; by < blocksY; by++) {
    let vector = vectors + (<usize>(by * vectorsStride) << 2);
    let here = src + <usize>(2 * by) * rowBytes;
    let out = dst + (<usize>(2 * by * dstStride) << 2);
    for (let bx = 0; bx < blocksX; bx++, vector += 4, here += 8, out += 8) {
      const tx = <f32>load<i16>(vector), ty = <f32>load<i16>(vector, 2);
      // The line runs along the gradient (ty, −tx).
      const isFlat = abs(ty) >= abs(tx);
      const slope = isFlat ? -tx / ty : -ty / tx;
      const weights = table + <usize>(<i32>(abs(slope) * <f32>(slopeCount - 1) + 0.5) * (reach + 1)) * 4;
      let sum = f32x4.mul(
        v128.load32_splat(weights), rows2(v128.load64_zero(here), v128.load64_zero(here + rowBytes)));
      for (let j = 1; j <= reach; j++) {
        const weight = v128.load32_splat(weights + <usize>(j << 2));
        const shift = slope * <f32>j;
        const forth = floor<f32>(shift);
        const back = floor<f32>(-shift);
        const tForth = f32x4.splat(shift - forth);
        const tBack = f32x4.splat(-shift - back);
        let pair: v128;
        if (isFlat) {
          pair = f32x4.add(
            alongX(here + <usize>(<i32>forth * <i32>rowBytes + (j << 2)), rowBytes, tForth),
            alongX(here + <usize>(<i32>back * <i32>rowBytes - (j << 2)), rowBytes, tBack));
        } else {
          pair = f32x4.add(
            alongY(here + <usize>(j * <i32>rowBytes + (<i32>forth << 2)), rowBytes, tForth),
            alongY(here + <usize>(-j * <i32>rowBytes + (<i32>back << 2)), rowBytes, tBack));
        }
        sum = f32x4.add(sum, f32x4.mul(weight, pair));
      }
      v128.store64_lane(out, sum, 0);
      v128.store64_lane(out + (<usize>dstStride << 2), sum, 1);
    }
  }
}
