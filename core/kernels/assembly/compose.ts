// Lays the strata over one another: ground, body at strength, line at strength and blend, relief at strength.
import { flatRelief } from './relief';

/** Bytes of the relief → hard light's source, the flat surface being exactly the half that changes nothing. */
const reliefUnit: f32 = 1 / 254;

// Blend modes, numbered as in core/composition/blendModes.ts. Formulas: W3C Compositing and Blending Level 1,
// section 10; `b` is the backdrop (the paint), `s` the source (the ink).

// @ts-ignore: decorator
@inline
function screen(b: v128, s: v128): v128 {
  return f32x4.sub(f32x4.add(b, s), f32x4.mul(b, s));
}

// @ts-ignore: decorator
@inline
function hardLight(b: v128, s: v128): v128 {
  const twice = f32x4.add(s, s);
  return v128.bitselect(
    f32x4.mul(b, twice), screen(b, f32x4.sub(twice, f32x4.splat(1))), f32x4.le(s, f32x4.splat(0.5)));
}

// @ts-ignore: decorator
@inline
function colourBurn(b: v128, s: v128): v128 {
  const one = f32x4.splat(1);
  const burnt = f32x4.sub(one, f32x4.pmin(one, f32x4.div(f32x4.sub(one, b), s)));
  const orBlack = v128.bitselect(f32x4.splat(0), burnt, f32x4.le(s, f32x4.splat(0)));
  return v128.bitselect(one, orBlack, f32x4.ge(b, one));
}

// @ts-ignore: decorator
@inline
function softLight(b: v128, s: v128): v128 {
  const one = f32x4.splat(1);
  const twice = f32x4.add(s, s);
  const darker = f32x4.sub(b, f32x4.mul(f32x4.mul(f32x4.sub(one, twice), b), f32x4.sub(one, b)));
  const curve = f32x4.mul(
    f32x4.add(f32x4.mul(f32x4.sub(f32x4.mul(f32x4.splat(16), b), f32x4.splat(12)), b), f32x4.splat(4)), b);
  const d = v128.bitselect(curve, f32x4.sqrt(b), f32x4.le(b, f32x4.splat(0.25)));
  const lighter = f32x4.add(b, f32x4.mul(f32x4.sub(twice, one), f32x4.sub(d, b)));
  return v128.bitselect(darker, lighter, f32x4.le(s, f32x4.splat(0.5)));
}

// @ts-ignore: decorator
@inline
function blended(mode: i32, b: v128, s: v128): v128 {
  switch (mode) {
    case 1: return f32x4.mul(b, s);
    case 2: return screen(b, s);
    case 3: return hardLight(s, b);
    case 4: return f32x4.pmin(b, s);
    case 5: return f32x4.pmax(b, s);
    case 6: return colourBurn(b, s);
    case 7: return hardLight(b, s);
    case 8: return softLight(b, s);
    default: return s;
  }
}

/** Three or four samples as floats, in the numbers of the file. */
// @ts-ignore: decorator
@inline
function loadSamples(at: usize, bytesPerSample: i32): v128 {
  const words = bytesPerSample == 1 ? i16x8.extend_low_i8x16_u(v128.load32_zero(at)) : v128.load64_zero(at);
  return f32x4.convert_i32x4_s(i32x4.extend_low_i16x8_u(words));
}

/** One run of pixels; see `compose`. */
// @ts-ignore: decorator
@inline
function composeRun(
  ground: usize, groundBytes: i32, groundChannels: i32, hasBody: bool, body: usize, hasLine: bool, line: usize,
  hasRelief: bool, relief: usize, count: i32, settings: usize,
  mode: i32, out: usize, outBytes: i32, outChannels: i32,
): void {
  const ink = v128.load(settings, 16);
  const lineStrength = load<f32>(settings, 28) / 255;
  const paperStrength = load<f32>(settings, 12);
  const bodyStrength: f32 = hasBody ? load<f32>(settings, 32) : 0;
  // Ground, paper and body are one weighted sum, in the numbers of the output: no step of it leaves the range.
  const top: f32 = outBytes == 1 ? 255 : 65535;
  const groundTop: f32 = groundBytes == 1 ? 255 : 65535;
  const groundShare = f32x4.splat((1 - bodyStrength) * (1 - paperStrength) * (top / groundTop));
  const bodyShare = f32x4.splat(bodyStrength * (top / <f32>65535));
  const paperPart = f32x4.mul(v128.load(settings), f32x4.splat((1 - bodyStrength) * paperStrength * top));
  const alphaScale = f32x4.splat(top / groundTop);
  const unit = f32x4.splat(1 / top), scale = f32x4.splat(top), opaque = scale;
  const zero = f32x4.splat(0), one = f32x4.splat(1);
  const reliefShare = f32x4.splat(load<f32>(settings, 36));
  const groundStep = <usize>(groundBytes * groundChannels);
  const outStep = <usize>(outBytes * outChannels);
  for (let i = 0; i < count; i++, ground += groundStep, out += outStep) {
    const source = loadSamples(ground, groundBytes);
    let x = f32x4.add(f32x4.mul(source, groundShare), paperPart);
    if (hasBody) {
      x = f32x4.add(x, f32x4.mul(loadSamples(body, 2), bodyShare));
      body += 6;
    }
    if (hasLine) {
      const coverage = load<u8>(line);
      line += 1;
      if (coverage != 0) {
        const alpha = f32x4.splat(lineStrength * <f32>coverage);
        const backdrop = f32x4.pmin(f32x4.mul(x, unit), one);
        const inked = f32x4.add(backdrop, f32x4.mul(alpha, f32x4.sub(blended(mode, backdrop, ink), backdrop)));
        x = f32x4.mul(f32x4.pmin(f32x4.pmax(inked, zero), one), scale);
      }
    }
    if (hasRelief) {
      const light = load<u8>(relief);
      relief += 1;
      if (light != flatRelief) {
        const backdrop = f32x4.pmin(f32x4.mul(x, unit), one);
        const lit = hardLight(backdrop, f32x4.splat(<f32>light * reliefUnit));
        x = f32x4.mul(f32x4.add(backdrop, f32x4.mul(reliefShare, f32x4.sub(lit, backdrop))), scale);
      }
    }
    const alpha = groundChannels == 4 ? f32x4.mul(source, alphaScale) : opaque;
    x = v128.shuffle<i32>(x, alpha, 0, 1, 2, 7);
    // Added to 2²³, a number from 0 to 65535 leaves its nearest whole number in the low bits.
    const whole = v128.and(f32x4.add(x, f32x4.splat(8388608)), i32x4.splat(0xffff));
    storeSamples(out, whole, outBytes, outChannels);
  }
}

// @ts-ignore: decorator
@inline
function storeSamples(out: usize, whole: v128, outBytes: i32, outChannels: i32): void {
  const words = i16x8.narrow_i32x4_u(whole, whole);
  if (outBytes == 2) {
    if (outChannels == 4) {
      store<u64>(out, i64x2.extract_lane(words, 0));
    } else {
      store<u32>(out, i32x4.extract_lane(words, 0));
      store<u16>(out, i16x8.extract_lane_u(words, 2), 4);
    }
    return;
  }
  const bytes = i32x4.extract_lane(i8x16.narrow_i16x8_u(words, words), 0);
  if (outChannels == 4) {
    store<u32>(out, bytes);
  } else {
    store<u16>(out, <u16>bytes);
    store<u8>(out, <u8>(bytes >>> 16), 2);
  }
}

/**
 * Composes `count` pixels that follow one another.
 * @param ground interleaved, 3 or 4 channels of 1 or 2 bytes; four bytes past the end must be readable
 * @param body R, G, B of 2 bytes, or 0 where body strength is 0
 * @param line ink coverage, 1 byte, or 0 where line strength is 0
 * @param relief light on the surface, 1 byte, 127 where it is flat, or 0 where relief strength is 0
 * @param settings 12 float32: paper R, G, B, paper strength; ink R, G, B, line strength; body and relief strength
 * @param out 3 or 4 channels of 1 or 2 bytes; the ground's alpha is carried over, or opaque
 */
export function compose(
  ground: usize, groundBytes: i32, groundChannels: i32, body: usize, line: usize, relief: usize, count: i32,
  settings: usize, mode: i32, out: usize, outBytes: i32, outChannels: i32,
): void {
  // The window's case, with its layout known while compiling: a fifth faster than asking at every pixel.
  if (groundBytes == 1 && groundChannels == 3 && outBytes == 1 && outChannels == 4 && body != 0 && line != 0 && relief == 0) {
    composeRun(ground, 1, 3, true, body, true, line, false, 0, count, settings, mode, out, 1, 4);
  } else {
    composeRun(
      ground, groundBytes, groundChannels, body != 0, body, line != 0, line, relief != 0, relief, count, settings,
      mode, out, outBytes, outChannels);
  }
}
