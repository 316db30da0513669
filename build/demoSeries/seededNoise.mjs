// Repeatable randomness: a small generator for placing things, and lattice noise for textures.

/**
 * A stream of numbers in [0, 1) that depends on nothing but its seed.
 * @param {number} seed any integer
 * @returns {() => number}
 */
export function randomStream(seed) {
  let state = (seed ^ 0x9e3779b9) >>> 0;
  return () => {
    state = (state + 0x6d2b79f5) >>> 0;
    let t = Math.imul(state ^ (state >>> 15), state | 1);
    t ^= t + Math.imul(t ^ (t >>> 7), t | 61);
    return ((t ^ (t >>> 14)) >>> 0) / 4294967296;
  };
}

const tableSize = 4096;
const tableMask = tableSize - 1;
const shuffled = new Uint16Array(tableSize * 2);
const heights = new Float32Array(tableSize);
{
  const next = randomStream(7151);
  for (let i = 0; i < tableSize; i++) shuffled[i] = i;
  for (let i = tableSize - 1; i > 0; i--) {
    const j = Math.floor(next() * (i + 1));
    const held = shuffled[i];
    shuffled[i] = shuffled[j];
    shuffled[j] = held;
  }
  shuffled.copyWithin(tableSize, 0, tableSize);
  for (let i = 0; i < tableSize; i++) heights[i] = next() * 2 - 1;
}

/** Value noise over the plane, −1 … 1, smooth to the second derivative. */
export function noise2(x, y) {
  const xi = Math.floor(x);
  const yi = Math.floor(y);
  const fx = x - xi;
  const fy = y - yi;
  const u = fx * fx * fx * (fx * (fx * 6 - 15) + 10);
  const v = fy * fy * fy * (fy * (fy * 6 - 15) + 10);
  const row0 = shuffled[xi & tableMask];
  const row1 = shuffled[(xi + 1) & tableMask];
  const yj = yi & tableMask;
  const a = heights[shuffled[row0 + yj]];
  const b = heights[shuffled[row1 + yj]];
  const yk = (yi + 1) & tableMask;
  const c = heights[shuffled[row0 + yk]];
  const d = heights[shuffled[row1 + yk]];
  const low = a + (b - a) * u;
  return low + (c + (d - c) * u - low) * v;
}

/** Value noise in space, −1 … 1. */
export function noise3(x, y, z) {
  const xi = Math.floor(x);
  const yi = Math.floor(y);
  const zi = Math.floor(z);
  const fx = x - xi;
  const fy = y - yi;
  const fz = z - zi;
  const u = fx * fx * fx * (fx * (fx * 6 - 15) + 10);
  const v = fy * fy * fy * (fy * (fy * 6 - 15) + 10);
  const w = fz * fz * fz * (fz * (fz * 6 - 15) + 10);
  const x0 = shuffled[xi & tableMask];
  const x1 = shuffled[(xi + 1) & tableMask];
  const y0 = yi & tableMask;
  const y1 = (yi + 1) & tableMask;
  const z0 = zi & tableMask;
  const z1 = (zi + 1) & tableMask;
  const p00 = shuffled[x0 + y0];
  const p10 = shuffled[x1 + y0];
  const p01 = shuffled[x0 + y1];
  const p11 = shuffled[x1 + y1];
  let a = heights[shuffled[p00 + z0]];
  let b = heights[shuffled[p01 + z0]];
  a += (heights[shuffled[p10 + z0]] - a) * u;
  b += (heights[shuffled[p11 + z0]] - b) * u;
  const near = a + (b - a) * v;
  a = heights[shuffled[p00 + z1]];
  b = heights[shuffled[p01 + z1]];
  a += (heights[shuffled[p10 + z1]] - a) * u;
  b += (heights[shuffled[p11 + z1]] - b) * u;
  return near + (a + (b - a) * v - near) * w;
}

/**
 * Summed octaves of plane noise, each turned against the last so that the lattice does not show.
 * Octaves finer than the footprint fade out, which keeps distant texture from sparkling.
 * @param {number} x
 * @param {number} y
 * @param {number} octaves
 * @param {number} [footprint] size of a pixel in units of x and y
 */
export function fbm2(x, y, octaves, footprint = 0) {
  let sum = 0;
  let gain = 0.5;
  let size = footprint;
  for (let i = 0; i < octaves; i++) {
    if (size > 0.75) break;
    const fade = size > 0.35 ? (0.75 - size) * 2.5 : 1;
    sum += gain * fade * noise2(x, y);
    const turned = x * 1.57 - y * 1.21 + 17.3;
    y = x * 1.21 + y * 1.57 + 41.7;
    x = turned;
    size *= 1.98;
    gain *= 0.52;
  }
  return sum;
}

/** Summed octaves of noise in space; see fbm2. */
export function fbm3(x, y, z, octaves, footprint = 0) {
  let sum = 0;
  let gain = 0.5;
  let size = footprint;
  for (let i = 0; i < octaves; i++) {
    if (size > 0.75) break;
    const fade = size > 0.35 ? (0.75 - size) * 2.5 : 1;
    sum += gain * fade * noise3(x, y, z);
    const turned = x * 1.57 - z * 1.21 + 17.3;
    z = x * 1.21 + z * 1.57 + 41.7;
    x = turned;
    y = y * 1.98 + 9.1;
    size *= 1.98;
    gain *= 0.52;
  }
  return sum;
}

/** A number in [0, 1) for a cell, for choosing plank tones, stones and tiles. */
export function cellValue(x, y) {
  return heights[shuffled[shuffled[Math.floor(x) & tableMask] + (Math.floor(y) & tableMask)]] * 0.5 + 0.5;
}

/** Smooth step from 0 at `from` to 1 at `to`, whichever is the larger. */
export function smoothStep(from, to, x) {
  let t = (x - from) / (to - from);
  t = t < 0 ? 0 : t > 1 ? 1 : t;
  return t * t * (3 - 2 * t);
}

export const mix = (a, b, t) => a + (b - a) * t;
