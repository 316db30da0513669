import {
  type ColourEngine,
  type ColourTransform,
  channelsOf,
  type Intent,
  type PixelSpace,
} from './colourEngine.ts';
import { ditherTo8 } from './dither.ts';
import { mirrorOut } from './mirrorOut.ts';
import { type TrimMarks, withTrimMarks } from './trimMarks.ts';

/** From the space of a profile to that of another. */
export interface Conversion {
  from: Uint8Array;
  to: Uint8Array;
  intent: Intent;
  blackPointCompensation: boolean;
}

/** What is done to a picture's pixels between painting and encoding, or between decoding and painting. */
export interface FinishJob {
  widthPx: number;
  heightPx: number;
  /** Interleaved; may lie in shared memory. Colours first, then alpha where there is one. */
  pixels: Uint8Array | Uint16Array;
  hasAlpha: boolean;
  space: PixelSpace;
  conversion: Conversion | null;
  /** Mirrored on every side. */
  bleedPx: number;
  trimMarks: TrimMarks | null;
  depth: 8 | 16;
}

export interface FinishedPixels {
  widthPx: number;
  heightPx: number;
  pixels: Uint8Array | Uint16Array;
  space: PixelSpace;
  hasAlpha: boolean;
}

/** Rows that are converted together. */
const bandPixels = 1 << 18;

/**
 * Converts, extends and reduces a picture.
 * @returns new pixels; `job` is not modified
 * @throws RangeError where a profile cannot be used
 */
export function finishPixels(engine: ColourEngine, job: FinishJob): FinishedPixels {
  const { widthPx, heightPx, conversion, bleedPx, trimMarks, depth, hasAlpha } = job;
  const converted = conversion ? convert(engine, job, conversion) : { pixels: job.pixels, space: job.space };
  const channels = channelsOf[converted.space] + (hasAlpha ? 1 : 0);
  const reduced =
    depth === 8 && converted.pixels instanceof Uint16Array
      ? ditherTo8(converted.pixels, widthPx, channels, hasAlpha ? channels - 1 : -1)
      : depth === 16 && converted.pixels instanceof Uint8Array
        ? Uint16Array.from(converted.pixels, (value) => value * 257)
        : converted.pixels;
  const bled = bleedPx > 0 ? mirrorOut(reduced, widthPx, heightPx, channels, bleedPx) : reduced;
  const size = { widthPx: widthPx + 2 * bleedPx, heightPx: heightPx + 2 * bleedPx };
  const { paper, ink } = marking(converted.space, hasAlpha, depth);
  const pixels = trimMarks ? withTrimMarks(bled, size.widthPx, size.heightPx, trimMarks, paper, ink) : bled;
  const slugPx = trimMarks?.slugPx ?? 0;
  return {
    widthPx: size.widthPx + 2 * slugPx,
    heightPx: size.heightPx + 2 * slugPx,
    pixels,
    space: converted.space,
    hasAlpha,
  };
}

/** Blank paper, and the marks on it: in CMYK no ink and black ink alone. */
function marking(space: PixelSpace, hasAlpha: boolean, depth: 8 | 16): { paper: number[]; ink: number[] } {
  const top = depth === 8 ? 255 : 65535;
  const alpha = hasAlpha ? [top] : [];
  if (space === 'CMYK') return { paper: [0, 0, 0, 0], ink: [0, 0, 0, top] };
  const colours = Array<number>(channelsOf[space]).fill(0);
  return { paper: [...colours.map(() => top), ...alpha], ink: [...colours, ...alpha] };
}

function convert(
  engine: ColourEngine,
  { widthPx, heightPx, pixels, space, hasAlpha }: FinishJob,
  { from, to, intent, blackPointCompensation }: Conversion,
): { pixels: Uint16Array; space: PixelSpace } {
  const transform = engine.transform(from, to, intent, blackPointCompensation);
  try {
    if (transform.from !== space)
      throw new RangeError(`Expected a profile for ${space} pixels, received one for ${transform.from}`);
    const outSpace = transform.to as PixelSpace;
    const inChannels = channelsOf[space] + (hasAlpha ? 1 : 0);
    const outChannels = channelsOf[outSpace] + (hasAlpha ? 1 : 0);
    const out = new Uint16Array(widthPx * heightPx * outChannels);
    const rows = Math.max(1, Math.floor(bandPixels / widthPx));
    for (let top = 0; top < heightPx; top += rows) {
      const count = Math.min(rows, heightPx - top) * widthPx;
      const band = pixels.subarray(top * widthPx * inChannels, (top * widthPx + count) * inChannels);
      const to = out.subarray(top * widthPx * outChannels, (top * widthPx + count) * outChannels);
      convertBand(transform, band, to, count, hasAlpha);
    }
    return { pixels: out, space: outSpace };
  } finally {
    transform.close();
  }
}

function convertBand(
  transform: ColourTransform,
  band: Uint8Array | Uint16Array,
  out: Uint16Array,
  count: number,
  hasAlpha: boolean,
): void {
  const step = band instanceof Uint8Array ? 257 : 1;
  const inChannels = band.length / count;
  const outChannels = out.length / count;
  const colours = inChannels - (hasAlpha ? 1 : 0);
  const outColours = outChannels - (hasAlpha ? 1 : 0);
  const bare = new Uint16Array(count * colours);
  for (let i = 0, at = 0; i < count; i++)
    for (let c = 0; c < colours; c++) bare[at++] = band[i * inChannels + c] * step;
  if (!hasAlpha) {
    transform.run(bare, out);
    return;
  }
  const made = new Uint16Array(count * outColours);
  transform.run(bare, made);
  for (let i = 0; i < count; i++) {
    for (let c = 0; c < outColours; c++) out[i * outChannels + c] = made[i * outColours + c];
    out[i * outChannels + outColours] = band[i * inChannels + colours] * step;
  }
}
