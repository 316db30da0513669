// The kernel bank: for each of 64 × 16 (orientation, anisotropy) pairs the eight sectors' weights as sparse
// lists. Built once per radius, pull and row stride, inside the module, so that every machine has the same.
import { anisotropyCount, orientationCount } from './grain';

const kernelCount: i32 = orientationCount * anisotropyCount;
export const sectorCount: i32 = 8;
/** Bytes of one row of the index: the first entry of each sector and the end of the last. */
export const indexRowBytes: i32 = 4 * (sectorCount + 1);
/** Bytes of one entry: distance to the pixel in bytes (i32) and its weight (f32, or two i16). */
const entryBytes: i32 = 8;

/** Polynomial sector weights: Kyprianidis, Semmo, Kang, Döllner 2010, on the unit disc. */
const zeta: f64 = 1.0 / 3.0;
const falloff: f64 = 3.125;

// @ts-ignore: decorator
@inline
function eta(): f64 {
  const gamma = (3.0 * Math.PI) / 16.0;
  return (zeta + Math.cos(gamma)) / (Math.sin(gamma) * Math.sin(gamma));
}

/** Half width of the square that holds every kernel of this radius and pull: the tile's halo. */
export function bankReachPx(radiusPx: f64, pull: f64): i32 {
  return <i32>Math.ceil(radiusPx * (1 + pull));
}

/** Most bytes a bank can take, index included. */
export function bankBytes(radiusPx: f64, pull: f64): i32 {
  // Area of the ellipse plus a rim for the pixels its outline cuts; seldom more than three sectors hold a
  // pixel, all eight only near the middle.
  const samples = Math.PI * radiusPx * radiusPx + 8 * radiusPx * (1 + pull) + 16;
  return kernelCount * (indexRowBytes + <i32>(samples * 4 + 40) * entryBytes);
}

/**
 * Normalised weights of the eight sectors at a place on the unit disc, falloff included.
 * @param weights receives 8 float64
 * @returns false outside the disc
 */
export function sectorWeights(vx: f64, vy: f64, weights: usize): bool {
  const squared = vx * vx + vy * vy;
  // The rim belongs to the window; rounding must not decide that differently for a kernel and its mirror image.
  if (squared > 1 + 1e-9) return false;
  const e = eta();
  let sum: f64 = 0;
  for (let k = 0; k < sectorCount; k++) {
    const angle = (<f64>k * Math.PI) / 4.0;
    const c = Math.cos(angle), s = Math.sin(angle);
    const x = c * vx + s * vy;
    const y = -s * vx + c * vy;
    const raw = Math.max(0, x + zeta - e * y * y);
    store<f64>(weights + (<usize>k << 3), raw * raw);
    sum += raw * raw;
  }
  const scale = Math.exp(-falloff * squared) / sum;
  for (let k = 0; k < sectorCount; k++) {
    const at = weights + (<usize>k << 3);
    store<f64>(at, load<f64>(at) * scale);
  }
  return true;
}

/** Fills `grid` (side² × 8 float64) with the kernel's weights; zero outside the ellipse. */
function fillGrid(orientation: i32, anisotropy: i32, radiusPx: f64, pull: f64, reach: i32, grid: usize): void {
  const A = <f64>anisotropy / <f64>(anisotropyCount - 1);
  const stretch = 1 + pull * A;
  const a = radiusPx * stretch;
  const b = radiusPx / stretch;
  const angle = (<f64>orientation * Math.PI) / <f64>orientationCount;
  const c = Math.cos(angle), s = Math.sin(angle);
  let at = grid;
  for (let dy = -reach; dy <= reach; dy++) {
    for (let dx = -reach; dx <= reach; dx++, at += 64) {
      const along = (c * <f64>dx + s * <f64>dy) / a;
      const across = (-s * <f64>dx + c * <f64>dy) / b;
      if (!sectorWeights(along, across, at)) memory.fill(at, 0, 64);
    }
  }
}

/** Bytes of scratch that building a bank needs. */
export function bankScratchBytes(radiusPx: f64, pull: f64): i32 {
  const side = 2 * bankReachPx(radiusPx, pull) + 1;
  return side * side * 64;
}

/**
 * Builds the bank with float32 weights. Layout: 1024 index rows, then the entries in order.
 * @param strideElements pixels between rows of the tiles it will be used on, 16 bytes each
 * @returns bytes used
 */
export function buildBank(radiusPx: f64, pull: f64, strideElements: i32, bank: usize, scratch: usize): i32 {
  const reach = bankReachPx(radiusPx, pull);
  const side = 2 * reach + 1;
  let entry = kernelCount * indexRowBytes;
  for (let number = 0; number < kernelCount; number++) {
    const index = bank + <usize>(number * indexRowBytes);
    fillGrid(number / anisotropyCount, number % anisotropyCount, radiusPx, pull, reach, scratch);
    for (let k = 0; k < sectorCount; k++) {
      store<i32>(index + <usize>(k * 4), entry);
      let sum: f64 = 0;
      for (let i = 0; i < side * side; i++) sum += load<f64>(scratch + <usize>(i * 64 + k * 8));
      for (let i = 0; i < side * side; i++) {
        const weight = load<f64>(scratch + <usize>(i * 64 + k * 8));
        if (weight == 0) continue;
        const dy = i / side - reach, dx = (i % side) - reach;
        store<i32>(bank + <usize>entry, (dy * strideElements + dx) * 16);
        store<f32>(bank + <usize>entry, <f32>(weight / sum), 4);
        entry += entryBytes;
      }
    }
    store<i32>(index + <usize>(sectorCount * 4), entry);
  }
  return entry;
}

/** Weights of a sector in the fixed-point bank add up to this. */
export const fixedWeightSum: i32 = 32767;

/**
 * Builds the bank for the fixed-point smoothing: an entry is two neighbours in a row, with two i16 weights (the
 * second may be 0). A sector's weights are rounded so that they add up to 32767 exactly: a flat picture stays flat.
 * @returns bytes used
 */
export function buildFixedBank(radiusPx: f64, pull: f64, strideElements: i32, bank: usize, scratch: usize): i32 {
  const reach = bankReachPx(radiusPx, pull);
  const side = 2 * reach + 1;
  let entry = kernelCount * indexRowBytes;
  for (let number = 0; number < kernelCount; number++) {
    const index = bank + <usize>(number * indexRowBytes);
    fillGrid(number / anisotropyCount, number % anisotropyCount, radiusPx, pull, reach, scratch);
    for (let k = 0; k < sectorCount; k++) {
      store<i32>(index + <usize>(k * 4), entry);
      roundSector(scratch, k, side * side);
      for (let dy = 0; dy < side; dy++) {
        for (let dx = 0; dx < side; dx++) {
          const first = roundedWeight(scratch, k, dy * side + dx);
          if (first == 0) continue;
          const second = dx + 1 < side ? roundedWeight(scratch, k, dy * side + dx + 1) : 0;
          store<i32>(bank + <usize>entry, ((dy - reach) * strideElements + dx - reach) * 16);
          store<i32>(bank + <usize>entry, first | (second << 16), 4);
          entry += entryBytes;
          dx++;
        }
      }
    }
    store<i32>(index + <usize>(sectorCount * 4), entry);
  }
  return entry;
}

// @ts-ignore: decorator
@inline
function roundedWeight(grid: usize, k: i32, i: i32): i32 {
  return <i32>load<f64>(grid + <usize>(i * 64 + k * 8));
}

/** Replaces a sector's weights in the grid by whole numbers that add up to 32767; the largest takes the rest. */
function roundSector(grid: usize, k: i32, count: i32): void {
  let sum: f64 = 0;
  for (let i = 0; i < count; i++) sum += load<f64>(grid + <usize>(i * 64 + k * 8));
  let total: f64 = 0;
  let largest: usize = 0;
  let most: f64 = -1;
  for (let i = 0; i < count; i++) {
    const at = grid + <usize>(i * 64 + k * 8);
    const whole = Math.floor((load<f64>(at) / sum) * <f64>fixedWeightSum + 0.5);
    store<f64>(at, whole);
    total += whole;
    if (whole > most) {
      most = whole;
      largest = at;
    }
  }
  store<f64>(largest, most + <f64>fixedWeightSum - total);
}
