// An affine map of Oklab colours over a whole photo (Oklab: B. Ottosson 2020; sRGB transfer: IEC 61966-2-1).
// Written as one affine map of the cube roots of the cone responses:
// encoded → linear → cones → cube root → affine → cube → linear → encoded.

/** Steps of the table that encodes, over the square root of the linear value: error below 2e-7. */
const encodeSteps: i32 = 4096;
/** Steps of the table that decodes 16 bits, read linearly: error below 3e-8. Bytes have an entry each. */
const decodeSteps16: i32 = 4096;

/** Floats of the two tables for photos of `bytesPerSample`; the kernel reads one past each. */
export function toneTableBytes(bytesPerSample: i32): i32 {
  return ((bytesPerSample == 1 ? 256 : decodeSteps16 + 2) + encodeSteps + 2) << 2;
}

function decoded(encoded: f64): f64 {
  return encoded <= 0.04045 ? encoded / 12.92 : Math.pow((encoded + 0.055) / 1.055, 2.4);
}

function encoded(linear: f64): f64 {
  return linear <= 0.0031308 ? 12.92 * linear : 1.055 * Math.pow(linear, 1.0 / 2.4) - 0.055;
}

/** Writes the tables: what decodes first, then what encodes. */
export function toneTables(bytesPerSample: i32, table: usize): void {
  const steps = bytesPerSample == 1 ? 255 : decodeSteps16;
  const entries = bytesPerSample == 1 ? 256 : decodeSteps16 + 2;
  for (let i = 0; i < entries; i++) {
    store<f32>(table + (<usize>i << 2), <f32>decoded(Math.min(1, <f64>i / <f64>steps)));
  }
  const encode = table + (<usize>entries << 2);
  for (let i = 0; i < encodeSteps + 2; i++) {
    const root = Math.min(1, <f64>i / <f64>encodeSteps);
    store<f32>(encode + (<usize>i << 2), <f32>encoded(root * root));
  }
}

/** Value of a table at `position`, between its two neighbours. */
// @ts-ignore: decorator
@inline
function between(table: usize, position: f32): f32 {
  const whole = <i32>position;
  const at = table + (<usize>whole << 2);
  const low = load<f32>(at);
  return low + (position - <f32>whole) * (load<f32>(at, 4) - low);
}

// @ts-ignore: decorator
@inline
function linearOf(at: usize, isWide: bool, table: usize): f32 {
  if (!isWide) return load<f32>(table + (<usize>load<u8>(at) << 2));
  return between(table, <f32>load<u16>(at) * (<f32>decodeSteps16 / 65535));
}

/** One linear channel of four pixels. */
// @ts-ignore: decorator
@inline
function fourLinear(at: usize, step: usize, isWide: bool, table: usize): v128 {
  return f32x4(
    linearOf(at, isWide, table), linearOf(at + step, isWide, table),
    linearOf(at + 2 * step, isWide, table), linearOf(at + 3 * step, isWide, table),
  );
}

/** a·x + b·y + c·z with the three factors at `row`. */
// @ts-ignore: decorator
@inline
function mix(row: usize, x: v128, y: v128, z: v128): v128 {
  return f32x4.add(
    f32x4.add(f32x4.mul(v128.load32_splat(row), x), f32x4.mul(v128.load32_splat(row, 4), y)),
    f32x4.mul(v128.load32_splat(row, 8), z),
  );
}

/** x ← x·(x³ + 2a)/(2x³ + a): Halley's step towards the cube root of a. */
// @ts-ignore: decorator
@inline
function halley(x: v128, a: v128): v128 {
  const cube = f32x4.mul(f32x4.mul(x, x), x);
  const above = f32x4.add(cube, f32x4.add(a, a));
  const below = f32x4.add(f32x4.add(cube, cube), a);
  return f32x4.div(f32x4.mul(x, above), below);
}

/** Cube root of values 0…; the first guess divides the exponent by three. 0 becomes 1e-4, whose cube is lost again. */
// @ts-ignore: decorator
@inline
function cubeRoot(value: v128): v128 {
  const a = f32x4.pmax(value, f32x4.splat(1e-12));
  const third = f32x4.mul(f32x4.convert_i32x4_s(a), f32x4.splat(1.0 / 3));
  const guess = i32x4.add(i32x4.trunc_sat_f32x4_s(third), i32x4.splat(709921077));
  return halley(halley(guess, a), a);
}

// @ts-ignore: decorator
@inline
function cubed(x: v128): v128 {
  return f32x4.mul(f32x4.mul(x, x), x);
}

// @ts-ignore: decorator
@inline
function storeFour(linear: v128, encode: usize, out: usize, step: usize, count: i32): void {
  const inside = f32x4.pmin(f32x4.pmax(linear, f32x4.splat(0)), f32x4.splat(1));
  const position = f32x4.mul(f32x4.sqrt(inside), f32x4.splat(<f32>encodeSteps));
  storeOne(out, encode, f32x4.extract_lane(position, 0));
  if (count > 1) storeOne(out + step, encode, f32x4.extract_lane(position, 1));
  if (count > 2) storeOne(out + 2 * step, encode, f32x4.extract_lane(position, 2));
  if (count > 3) storeOne(out + 3 * step, encode, f32x4.extract_lane(position, 3));
}

// @ts-ignore: decorator
@inline
function storeOne(out: usize, encode: usize, position: f32): void {
  store<u16>(out, <u16>(between(encode, position) * 65535 + 0.5));
}

// @ts-ignore: decorator
@inline
function mapRun(src: usize, channels: i32, isWide: bool, count: i32, settings: usize, table: usize, out: usize): void {
  const sample: usize = isWide ? 2 : 1;
  const step = <usize>channels * sample;
  const outStep = <usize>channels * 2;
  const encode = table + (<usize>(isWide ? decodeSteps16 + 2 : 256) << 2);
  for (let i = 0; i < count; i += 4) {
    const at = src + <usize>i * step;
    const to = out + <usize>i * outStep;
    const r = fourLinear(at, step, isWide, table);
    const g = fourLinear(at + sample, step, isWide, table);
    const b = fourLinear(at + 2 * sample, step, isWide, table);
    const l = cubeRoot(mix(settings, r, g, b));
    const m = cubeRoot(mix(settings + 12, r, g, b));
    const s = cubeRoot(mix(settings + 24, r, g, b));
    const L = cubed(f32x4.add(mix(settings + 36, l, m, s), v128.load32_splat(settings, 72)));
    const M = cubed(f32x4.add(mix(settings + 48, l, m, s), v128.load32_splat(settings, 76)));
    const S = cubed(f32x4.add(mix(settings + 60, l, m, s), v128.load32_splat(settings, 80)));
    const left = min(4, count - i);
    storeFour(mix(settings + 84, L, M, S), encode, to, outStep, left);
    storeFour(mix(settings + 96, L, M, S), encode, to + 2, outStep, left);
    storeFour(mix(settings + 108, L, M, S), encode, to + 4, outStep, left);
    if (channels == 4) {
      for (let k: usize = 0; k < <usize>left; k++) {
        const alpha = at + k * step + 3 * sample;
        store<u16>(to + k * outStep + 6, isWide ? load<u16>(alpha) : <u16>load<u8>(alpha) * 257);
      }
    }
  }
}

/**
 * Maps pixels that follow one another; alpha stays.
 * @param src interleaved, 3 or 4 channels of 1 or 2 bytes; up to 24 bytes past the end are read, not used
 * @param settings 30 floats: linear → cones by rows, the affine map of their roots by rows, its offset, cones →
 *   linear by rows
 * @param table from {@link toneTables} for this depth
 * @param out interleaved, the same channels, 2 bytes a sample; must not overlap `src`
 */
export function toneMap(
  src: usize, channels: i32, bytesPerSample: i32, count: i32, settings: usize, table: usize, out: usize,
): void {
  if (bytesPerSample == 2) mapRun(src, channels, true, count, settings, table, out);
  else mapRun(src, channels, false, count, settings, table, out);
}
