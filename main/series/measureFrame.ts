import { parseLength } from '../../core/parameters/parse.ts';
import { type Parameters, parameterKeys } from '../../core/parameters/table.ts';
import type { DecodedPhoto } from '../../core/pixels/photo.ts';
import { focusOf } from '../../core/series/focus.ts';
import type { ColourMeasures, WindowMeasures } from '../../core/series/frameMeasures.ts';
import { softPen } from '../../core/series/inkHistogram.ts';
import { paletteOf } from '../../core/series/palette.ts';
import type { ToneMap } from '../../core/series/toneMap.ts';
import { addWindow, noWindows, textureOf } from '../../core/series/windowFigures.ts';
import type { Engine } from '../engine/engineApi.ts';
import { sharp } from '../files/imageLibrary.ts';
import { cutSampleSheet, type SampleSheet } from './sampleSheet.ts';
import { windowLuma } from './windowLuma.ts';

/** Long edge at which colours are gathered: noise has averaged away, and all frames are on one print scale. */
const paletteEdgePx = 400;
/** Long edge that texture is judged at, so that frames of different sizes compare. */
const textureEdgePx = 800;

/** Gathers the colours of a photo, and how crisp it is, each at a print scale that all frames share. */
export async function measureColours(photo: DecodedPhoto): Promise<ColourMeasures> {
  const [few, many] = await Promise.all([reducedTo(photo, paletteEdgePx), reducedTo(photo, textureEdgePx)]);
  const focus = focusOf(lumaOf(many.rgb16), many.widthPx, many.heightPx);
  return { palette: paletteOf(few.rgb16), focus };
}

/** Luma (ITU-R BT.601) in 8-bit steps. */
function lumaOf(rgb16: Uint16Array): Float64Array {
  const luma = new Float64Array(rgb16.length / 3);
  for (let i = 0, at = 0; i < luma.length; i++, at += 3)
    luma[i] = (0.299 * rgb16[at] + 0.587 * rgb16[at + 1] + 0.114 * rgb16[at + 2]) / 257;
  return luma;
}

async function reducedTo(photo: DecodedPhoto, longEdgePx: number) {
  const { widthPx: width, heightPx: height, channels, pixels } = photo;
  const isWide = pixels.BYTES_PER_ELEMENT === 2;
  const image = sharp(pixels, { raw: { width, height, channels }, limitInputPixels: false })
    .resize({
      width: longEdgePx,
      height: longEdgePx,
      fit: 'inside',
      withoutEnlargement: true,
      kernel: 'linear',
    })
    .removeAlpha();
  const raw = isWide ? image.toColourspace('rgb16').raw({ depth: 'ushort' }) : image.raw();
  const { data, info } = await raw.toBuffer({ resolveWithObject: true });
  const rgb16 = isWide ? new Uint16Array(new Uint8Array(data).buffer) : widened(data);
  return { rgb16, widthPx: info.width, heightPx: info.height };
}

/** A plain loop: `Uint16Array.from` with a function took 170 ms for 0.4 megapixels, on the thread that answers. */
function widened(bytes: Uint8Array): Uint16Array {
  const wide = new Uint16Array(bytes.length);
  for (let i = 0; i < bytes.length; i++) wide[i] = bytes[i] * 257;
  return wide;
}

/** The sample windows of a photo, taken once and painted as often as is needed. */
export class FrameWindows {
  readonly #sample: SampleSheet;
  readonly #longEdgePx: number;

  /** @param photo at full resolution; copied from, not kept */
  constructor(
    readonly engine: Engine,
    photo: DecodedPhoto,
    readonly printLongEdgeMm: number,
  ) {
    this.#sample = cutSampleSheet(photo);
    this.#longEdgePx = Math.max(photo.widthPx, photo.heightPx);
  }

  /**
   * Paints the windows and measures their texture.
   * @param parameters with a noise floor in numbers: the sheet's own noise is that of its seams too
   */
  async measure(
    parameters: Parameters,
    toneMap: ToneMap | null,
    signal?: AbortSignal,
  ): Promise<WindowMeasures> {
    const { sheet, windows } = this.#sample;
    const held = await this.engine.open(sheet, { toneMap, signal });
    try {
      const mmPerPx = this.printLongEdgeMm / this.#longEdgePx;
      const floor = parameters['body.noiseFloor'];
      const noiseFloor = floor === 'auto' ? held.noiseFloor : floor;
      const { strata } = await this.engine.paintStrata(
        held,
        { ...withoutPermille(parameters, this.printLongEdgeMm), ...softPen, 'body.noiseFloor': noiseFloor },
        { level: 0 },
        { printLongEdgeMm: Math.max(sheet.widthPx, sheet.heightPx) * mmPerPx, signal },
      );
      const scale = Math.max(1, this.#longEdgePx / textureEdgePx);
      const ink = new Array<number>(256).fill(0);
      let sums = noWindows;
      for (const window of windows) {
        sums = addWindow(sums, windowLuma(strata.body, strata.widthPx, window, scale));
        for (let y = window.yPx; y < window.yPx + window.heightPx; y++)
          for (let x = window.xPx; x < window.xPx + window.widthPx; x++)
            ink[strata.line[y * strata.widthPx + x]]++;
      }
      const texture = textureOf(sums, mmPerPx * scale, windows[0].widthPx * mmPerPx);
      return { noiseFloor, hold: parameters['body.hold'], ...texture, ink };
    } finally {
      held.close();
    }
  }
}

/** Lengths that follow the photo's own size, in millimetres: the sheet has another size. */
function withoutPermille(parameters: Parameters, printLongEdgeMm: number): Parameters {
  const changed: Record<string, unknown> = { ...parameters };
  for (const key of parameterKeys) {
    const value = parameters[key];
    const length = typeof value === 'string' ? parseLength(value) : null;
    if (length?.unit === 'permille') changed[key] = `${(length.value * printLongEdgeMm) / 1000}mm`;
  }
  return changed as Parameters;
}
