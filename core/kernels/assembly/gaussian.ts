// Gaussian smoothing of planes, separable.

/**
 * Weights of a sampled Gaussian, normalised to sum 1.
 * @param table receives 2·radius + 1 float32
 */
export function gaussianTable(sigmaPx: f64, radiusPx: i32, table: usize): void {
  let sum: f64 = 0;
  for (let i = -radiusPx; i <= radiusPx; i++) sum += Math.exp(-(<f64>(i * i)) / (2 * sigmaPx * sigmaPx));
  for (let i = -radiusPx; i <= radiusPx; i++) {
    store<f32>(
      table + ((<usize>(i + radiusPx)) << 2),
      <f32>(Math.exp(-(<f64>(i * i)) / (2 * sigmaPx * sigmaPx)) / sum),
    );
  }
}

/**
 * Down the columns. Reads rows −radius … height + radius − 1 of `src`.
 * @param width is rounded up to four: both planes must have room for that
 */
export function gaussianColumns(
  src: usize,
  srcStride: i32,
  width: i32,
  height: i32,
  table: usize,
  radiusPx: i32,
  dst: usize,
  dstStride: i32,
): void {
  const rowBytes = (<usize>srcStride) << 2;
  const taps = 2 * radiusPx + 1;
  for (let y = 0; y < height; y++) {
    const first = src + ((<usize>((y - radiusPx) * srcStride)) << 2);
    const out = dst + ((<usize>(y * dstStride)) << 2);
    for (let x = 0; x < width; x += 4) {
      let at = first + ((<usize>x) << 2);
      let sum = f32x4.splat(0);
      for (let i = 0; i < taps; i++, at += rowBytes) {
        sum = f32x4.add(sum, f32x4.mul(v128.load32_splat(table + ((<usize>i) << 2)), v128.load(at)));
      }
      v128.store(out + ((<usize>x) << 2), sum);
    }
  }
}

/** Along the rows. Reads columns −radius … width + radius − 1 of `src`; width is rounded up to four. */
export function gaussianRows(
  src: usize,
  srcStride: i32,
  width: i32,
  height: i32,
  table: usize,
  radiusPx: i32,
  dst: usize,
  dstStride: i32,
): void {
  const taps = 2 * radiusPx + 1;
  for (let y = 0; y < height; y++) {
    const row = src + ((<usize>(y * srcStride - radiusPx)) << 2);
    const out = dst + ((<usize>(y * dstStride)) << 2);
    for (let x = 0; x < width; x += 4) {
      let at = row + ((<usize>x) << 2);
      let sum = f32x4.splat(0);
      for (let i = 0; i < taps; i++, at += 4) {
        sum = f32x4.add(sum, f32x4.mul(v128.load32_splat(table + ((<usize>i) << 2)), v128.load(at)));
      }
      v128.store(out + ((<usize>x) << 2), sum);
    }
  }
}
