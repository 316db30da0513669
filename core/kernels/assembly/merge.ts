// Joins a finished coarser level with this level: joint bilateral upsampling (Kopf, Cohen, Lischinski,
// Uyttendaele 2007) guided by this level's own paint, let through where the two agree.
import { channelOf4, exp2x4, pixelOf4 } from './vector';

const log2e: f32 = 1.44269504;

/**
 * Spatial weights of the 3 × 3 coarse neighbours for the four pixels of a block: exp(−d²/(2·0.75²)), d in
 * coarse pixels.
 * @param table receives 9 × 4 float32
 */
export function mergeTable(table: usize): void {
  for (let n = 0; n < 9; n++) {
    for (let i = 0; i < 4; i++) {
      const dx = <f64>(n % 3) - 1 - ((i & 1) == 0 ? -0.25 : 0.25);
      const dy = <f64>(n / 3) - 1 - (i >> 1 == 0 ? -0.25 : 0.25);
      store<f32>(table + <usize>((n * 4 + i) << 2), <f32>Math.exp(-(dx * dx + dy * dy) / (2 * 0.75 * 0.75)));
    }
  }
}

/** Distance in bytes to coarse neighbour `n` of 3 × 3 from the first of them. */
// @ts-ignore: decorator
@inline
function placeOf(n: i32, coarseRowBytes: usize): usize {
  return <usize>(n / 3) * coarseRowBytes + (<usize>(n % 3) << 4);
}

/** |g − F'|² of four pixels to one coarse pixel. */
// @ts-ignore: decorator
@inline
function distanceTo(from: usize, r: v128, g: v128, b: v128): v128 {
  const dr = f32x4.sub(r, v128.load32_splat(from)),
    dg = f32x4.sub(g, v128.load32_splat(from, 4)),
    db = f32x4.sub(b, v128.load32_splat(from, 8));
  return f32x4.add(f32x4.mul(dr, dr), f32x4.add(f32x4.mul(dg, dg), f32x4.mul(db, db)));
}

/**
 * x = β·u + (1−β)·g: u is the coarser level brought up along g's edges, β = 1/(1+(min|g−F'|²/hold²)²).
 * @param fine g, quad tile
 * @param coarse F', quad tile whose pixel (0, 0) is the coarse pixel of the first block; one more is read on
 *   every side
 * @param rangeSigma σ_r of the upsampling, encoded units
 * @param hold τ, encoded units
 * @param dst x, quads; may be the same as `fine`
 */
export function merge(
  fine: usize,
  fineStride: i32,
  coarse: usize,
  coarseStride: i32,
  blocksX: i32,
  blocksY: i32,
  table: usize,
  rangeSigma: f32,
  hold: f32,
  dst: usize,
  dstStride: i32,
): void {
  const fineRowBytes = (<usize>fineStride) << 4;
  const dstRowBytes = (<usize>dstStride) << 4;
  const coarseRowBytes = (<usize>coarseStride) << 4;
  const sharpness = f32x4.splat(-log2e / (2 * rangeSigma * rangeSigma));
  const holdScale = f32x4.splat(1 / (hold * hold));
  const one = f32x4.splat(1);
  for (let by = 0; by < blocksY; by++) {
    let at = fine + <usize>(2 * by) * fineRowBytes;
    let out = dst + <usize>(2 * by) * dstRowBytes;
    let near = coarse + <usize>by * coarseRowBytes - coarseRowBytes - 16;
    for (let bx = 0; bx < blocksX; bx++, at += 32, out += 32, near += 16) {
      const p0 = v128.load(at),
        p1 = v128.load(at, 16);
      const p2 = v128.load(at + fineRowBytes),
        p3 = v128.load(at + fineRowBytes, 16);
      const r = channelOf4(p0, p1, p2, p3, 0);
      const g = channelOf4(p0, p1, p2, p3, 1);
      const b = channelOf4(p0, p1, p2, p3, 2);
      let least = f32x4.splat(1e9);
      for (let n = 0; n < 9; n++) {
        least = f32x4.pmin(least, distanceTo(near + placeOf(n, coarseRowBytes), r, g, b));
      }
      let weightSum = f32x4.splat(0);
      let ur = weightSum,
        ug = weightSum,
        ub = weightSum;
      for (let n = 0; n < 9; n++) {
        const from = near + placeOf(n, coarseRowBytes);
        // Relative to the nearest of the nine, so that the sum never vanishes.
        const apart = f32x4.sub(distanceTo(from, r, g, b), least);
        const exponent = f32x4.pmax(f32x4.mul(apart, sharpness), f32x4.splat(-120));
        const weight = f32x4.mul(exp2x4(exponent), v128.load(table + <usize>(n << 4)));
        weightSum = f32x4.add(weightSum, weight);
        ur = f32x4.add(ur, f32x4.mul(weight, v128.load32_splat(from)));
        ug = f32x4.add(ug, f32x4.mul(weight, v128.load32_splat(from, 4)));
        ub = f32x4.add(ub, f32x4.mul(weight, v128.load32_splat(from, 8)));
      }
      const scale = f32x4.div(one, weightSum);
      const strain = f32x4.mul(least, holdScale);
      const beta = f32x4.div(one, f32x4.add(one, f32x4.mul(strain, strain)));
      const xr = f32x4.add(r, f32x4.mul(beta, f32x4.sub(f32x4.mul(ur, scale), r)));
      const xg = f32x4.add(g, f32x4.mul(beta, f32x4.sub(f32x4.mul(ug, scale), g)));
      const xb = f32x4.add(b, f32x4.mul(beta, f32x4.sub(f32x4.mul(ub, scale), b)));
      const square = f32x4.add(f32x4.mul(xr, xr), f32x4.add(f32x4.mul(xg, xg), f32x4.mul(xb, xb)));
      v128.store(out, pixelOf4(xr, xg, xb, square, 0));
      v128.store(out, pixelOf4(xr, xg, xb, square, 1), 16);
      v128.store(out + dstRowBytes, pixelOf4(xr, xg, xb, square, 2));
      v128.store(out + dstRowBytes, pixelOf4(xr, xg, xb, square, 3), 16);
    }
  }
}
