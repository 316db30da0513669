// Relief: the surface of the paint as a height field, and the light on it. Bristle marks are noise drawn out along
// the grain (line integral convolution: Cabral and Leedom 1993), the streamlines being those of the ink.

/**
 * Noise of one pixel, −1…1: its position's bits, mixed (multipliers and shifts of C. Wellons' low-bias hash, 2018),
 * so that it is the same wherever a tile begins.
 */
// @ts-ignore: decorator
@inline
function noiseAt(x: i32, y: i32): f32 {
  let bits = (<u32>x * 0x9e3779b1) ^ (<u32>y * 0xc2b2ae3d);
  bits = (bits ^ (bits >>> 16)) * 0x7feb352d;
  bits = (bits ^ (bits >>> 15)) * 0x846ca68b;
  bits ^= bits >>> 16;
  return <f32>(<i32>(bits >>> 8)) * (<f32>2 / 16777216) - 1;
}

/**
 * Noise seeded by position, smoothed by [side, 1 − 2·side, side] both ways.
 * @param x0 @param y0 place of the first pixel in its level
 * @param dst plane of `height` + 2 rows; the result is in the first `height`
 */
export function bristleNoise(
  x0: i32, y0: i32, width: i32, height: i32, side: f32, dst: usize, dstStride: i32,
): void {
  const middle: f32 = 1 - 2 * side;
  for (let y = 0; y < height + 2; y++) {
    const row = dst + (<usize>(y * dstStride) << 2);
    let left = noiseAt(x0 - 1, y0 + y - 1);
    let here = noiseAt(x0, y0 + y - 1);
    for (let x = 0; x < width; x++) {
      const right = noiseAt(x0 + x + 1, y0 + y - 1);
      store<f32>(row + (<usize>x << 2), middle * here + side * (left + right));
      left = here;
      here = right;
    }
  }
  const step = <usize>dstStride << 2;
  for (let y = 0; y < height; y++) {
    let at = dst + <usize>y * step;
    for (let x = 0; x < width; x++, at += 4) {
      const outer = load<f32>(at) + load<f32>(at + 2 * step);
      store<f32>(at, middle * load<f32>(at + step) + side * outer);
    }
  }
}

/**
 * Adds the body's lightness to bristle marks: height = marks · markGain + luma · lumaGain, in place.
 * @param marks plane of the marks, which becomes the height
 */
export function addHeights(
  marks: usize, marksStride: i32, luma: usize, lumaStride: i32, width: i32, height: i32,
  markGain: f32, lumaGain: f32,
): void {
  for (let y = 0; y < height; y++) {
    const to = marks + (<usize>(y * marksStride) << 2);
    const from = luma + (<usize>(y * lumaStride) << 2);
    for (let x = 0; x < width; x++) {
      const at = to + (<usize>x << 2);
      store<f32>(at, load<f32>(at) * markGain + load<f32>(from + (<usize>x << 2)) * lumaGain);
    }
  }
}

/** Sine of the light's height over the surface, and its cosine: 40°. */
const lightHigh: f32 = 0.64278764;
const lightFlat: f32 = 0.76604444;

/**
 * Light on a height field: −1 dark … 0 as a flat surface is … 1 bright. Diffuse by the cosine law, and a highlight
 * that is the cosine to the half vector raised to 32 (Blinn 1977).
 * @param heights plane of `width` × `height`; heights beyond it are repeated
 * @param firstRow @param rows the band of it to light
 * @param slope height → pixels
 * @param bearingDegrees where the light comes from: 0 the top, clockwise
 * @param shine 0…1 weight of the highlight
 * @param dst plane as the heights
 */
export function lightHeights(
  heights: usize, width: i32, height: i32, firstRow: i32, rows: i32, slope: f32, bearingDegrees: f64, shine: f32,
  dst: usize,
): void {
  const turn = (bearingDegrees * Math.PI) / 180;
  const lx: f32 = <f32>Math.sin(turn) * lightFlat;
  const ly: f32 = -(<f32>Math.cos(turn)) * lightFlat;
  const halfLength = sqrt<f32>(2 + 2 * lightHigh);
  const hx: f32 = lx / halfLength, hy: f32 = ly / halfLength, hz: f32 = (lightHigh + 1) / halfLength;
  const flatShine = to32nd(hz);
  const half: f32 = 0.5 * slope;
  for (let y = firstRow; y < firstRow + rows; y++) {
    const above = heights + (<usize>(max(0, y - 1) * width) << 2);
    const row = heights + (<usize>(y * width) << 2);
    const below = heights + (<usize>(min(height - 1, y + 1) * width) << 2);
    const out = dst + (<usize>(y * width) << 2);
    for (let x = 0; x < width; x++) {
      const left = <usize>max(0, x - 1) << 2, right = <usize>min(width - 1, x + 1) << 2;
      const at = <usize>x << 2;
      const a = half * (load<f32>(row + right) - load<f32>(row + left));
      const b = half * (load<f32>(below + at) - load<f32>(above + at));
      const inverse: f32 = 1 / sqrt<f32>(1 + a * a + b * b);
      const diffuse = (lightHigh - a * lx - b * ly) * inverse - lightHigh;
      const highlight = to32nd(max<f32>(0, (hz - a * hx - b * hy) * inverse)) - flatShine;
      store<f32>(out + at, max<f32>(-1, min<f32>(1, diffuse + shine * highlight)));
    }
  }
}

// @ts-ignore: decorator
@inline
function to32nd(c: f32): f32 {
  const c2 = c * c, c4 = c2 * c2, c8 = c4 * c4, c16 = c8 * c8;
  return c16 * c16;
}

/** Byte of an unlit, flat surface; 0 … 254 are −1 … 1. */
export const flatRelief: i32 = 127;

/**
 * Light, brought up bilinearly by 2^shift, → bytes 0…254 with 127 for the flat surface.
 * @param src plane of the light, whose pixel (0, 0) stands at (originX, originY) of the smaller picture; neighbours
 *   beyond it are repeated
 * @param x0 @param y0 first output pixel in the full picture
 */
export function raiseRelief(
  src: usize, srcStride: i32, srcWidth: i32, srcHeight: i32, originX: i32, originY: i32, shift: i32,
  x0: i32, y0: i32, width: i32, height: i32, dst: usize, dstStride: i32,
): void {
  const size: f32 = 1 / <f32>(1 << shift);
  for (let y = 0; y < height; y++) {
    const sy = (<f32>(y0 + y) + 0.5) * size - 0.5 - <f32>originY;
    const fy = floor<f32>(sy);
    const ty = sy - fy;
    const upper = src + (<usize>(max(0, min(<i32>fy, srcHeight - 1)) * srcStride) << 2);
    const lower = src + (<usize>(max(0, min(<i32>fy + 1, srcHeight - 1)) * srcStride) << 2);
    for (let x = 0; x < width; x++) {
      const sx = (<f32>(x0 + x) + 0.5) * size - 0.5 - <f32>originX;
      const fx = floor<f32>(sx);
      const tx = sx - fx;
      const near = <usize>max(0, min(<i32>fx, srcWidth - 1)) << 2;
      const far = <usize>max(0, min(<i32>fx + 1, srcWidth - 1)) << 2;
      const a = load<f32>(upper + near) + tx * (load<f32>(upper + far) - load<f32>(upper + near));
      const b = load<f32>(lower + near) + tx * (load<f32>(lower + far) - load<f32>(lower + near));
      const light = a + ty * (b - a);
      store<u8>(dst + <usize>(y * dstStride + x), <u8>nearest<f32>(<f32>flatRelief * (1 + light)));
    }
  }
}
