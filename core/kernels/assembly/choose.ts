// From the eight sectors' means and deviations to one colour.

/** v^(−n/2) relative to the least of eight, so that no crispness overflows: (least/v)^(n/2). */
// @ts-ignore: decorator
@inline
function powerOf(ratio: v128, crispness: i32): v128 {
  let power = (crispness & 1) != 0 ? f32x4.sqrt(ratio) : f32x4.splat(1);
  let factor = ratio;
  for (let n = crispness >> 1; n > 0; n >>= 1) {
    if ((n & 1) != 0) power = f32x4.mul(power, factor);
    factor = f32x4.mul(factor, factor);
  }
  return power;
}

// @ts-ignore: decorator
@inline
function sumLanes(v: v128): f32 {
  return (
    f32x4.extract_lane(v, 0) + f32x4.extract_lane(v, 1) + (f32x4.extract_lane(v, 2) + f32x4.extract_lane(v, 3))
  );
}

// @ts-ignore: decorator
@inline
function leastLane(v: v128): f32 {
  return min(
    min(f32x4.extract_lane(v, 0), f32x4.extract_lane(v, 1)), min(f32x4.extract_lane(v, 2), f32x4.extract_lane(v, 3)));
}

/**
 * Σ ω_k m_k / Σ ω_k with ω_k = max(floor, s_k)^−q and s_k² = E|c|² − |m|². Channels of sectors 0–3 and 4–7.
 * @param floorSquared the noise floor, squared, in the units of s²
 */
// @ts-ignore: decorator
@inline
export function chooseColour(
  r0: v128, g0: v128, b0: v128, q0: v128, r1: v128, g1: v128, b1: v128, q1: v128, floorSquared: f32, crispness: i32,
): v128 {
  const floor = f32x4.splat(floorSquared);
  const v0 = f32x4.max(
    f32x4.sub(q0, f32x4.add(f32x4.mul(r0, r0), f32x4.add(f32x4.mul(g0, g0), f32x4.mul(b0, b0)))), floor);
  const v1 = f32x4.max(
    f32x4.sub(q1, f32x4.add(f32x4.mul(r1, r1), f32x4.add(f32x4.mul(g1, g1), f32x4.mul(b1, b1)))), floor);
  const least = f32x4.splat(leastLane(f32x4.min(v0, v1)));
  const w0 = powerOf(f32x4.div(least, v0), crispness);
  const w1 = powerOf(f32x4.div(least, v1), crispness);
  const scale: f32 = 1 / sumLanes(f32x4.add(w0, w1));
  const r = sumLanes(f32x4.add(f32x4.mul(w0, r0), f32x4.mul(w1, r1))) * scale;
  const g = sumLanes(f32x4.add(f32x4.mul(w0, g0), f32x4.mul(w1, g1))) * scale;
  const b = sumLanes(f32x4.add(f32x4.mul(w0, b0), f32x4.mul(w1, b1))) * scale;
  return f32x4(r, g, b, r * r + g * g + b * b);
}
