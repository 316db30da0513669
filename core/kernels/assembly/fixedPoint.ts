// Quads as whole numbers, two neighbours in one vector, for the fixed-point smoothing.
//
// A pixel is R, G, B as round((c − ½)·32766), −16383 … 16383, and the sum of their squares, less its middle, in
// steps of 12288: −32768 … 32767. A packed element holds a pixel and its right neighbour, lane by lane
// (R R' G G' B B' S S'), so that one multiply-add takes two samples of a window at once.

/** Whole numbers per unit of encoded value. */
export const valueScale: f32 = 32766;
/** Steps of the fourth number, and the middle it is counted from, in squares of those whole numbers. */
export const squareStep: f32 = 12288;
export const squareMiddle: f32 = 402653184;

// @ts-ignore: decorator
@inline
function wholeQuad(quad: v128): v128 {
  const centred = f32x4.mul(f32x4.sub(quad, f32x4.splat(0.5)), f32x4.splat(valueScale));
  const q = i32x4.trunc_sat_f32x4_s(f32x4.nearest(centred));
  const squares = i32x4.mul(q, q);
  const sum = i32x4.extract_lane(squares, 0) + i32x4.extract_lane(squares, 1) + i32x4.extract_lane(squares, 2);
  const square = <i32>nearest<f32>((<f32>sum - squareMiddle) / squareStep);
  return i32x4.replace_lane(q, 3, max(-32768, min(square, 32767)));
}

/** Quad tile → packed tile of the same stride. Values must lie in 0..1. The last column's neighbour is itself. */
export function packPairs(src: usize, stride: i32, width: i32, height: i32, dst: usize): void {
  for (let y = 0; y < height; y++) {
    let at = src + (<usize>(y * stride) << 4);
    let out = dst + (<usize>(y * stride) << 4);
    let own = wholeQuad(v128.load(at));
    for (let x = 1; x < width; x++, out += 16) {
      at += 16;
      const next = wholeQuad(v128.load(at));
      v128.store(out, interleaved(own, next));
      own = next;
    }
    v128.store(out, interleaved(own, own));
  }
}

// @ts-ignore: decorator
@inline
function interleaved(a: v128, b: v128): v128 {
  return v128.shuffle<i16>(a, b, 0, 8, 2, 10, 4, 12, 6, 14);
}
