import { setImmediate } from 'node:timers/promises';
import type { DecodedPhoto } from '../../core/pixels/photo.ts';
import { focusOf } from '../../core/series/focus.ts';
import type { ColourMeasures, Texture } from '../../core/series/frameMeasures.ts';
import { paletteOf } from '../../core/series/palette.ts';
import { addRows, noTexture, textureOf } from '../../core/series/textureFigures.ts';
import { sharp } from '../files/imageLibrary.ts';

/** Long edge at which colours are gathered: noise has averaged away, and all frames are on one print scale. */
const paletteEdgePx = 400;
/** Long edge that focus is judged at. */
const focusEdgePx = 800;
/**
 * Long edges that texture is judged at, so that frames of different sizes compare. The greatest is about as fine as a
 * print is looked at; the others are for photos too small for that.
 */
const textureEdgesPx = [1200, 850, 600, 425, 300] as const;
/** What is brought down to less of its own size compares: hard edges have become as soft as everybody's. */
const mostOfOwnEdge = 0.8;
/** Rows looked at before others may have the thread: about two milliseconds. */
const rowsAtOnce = 96;

/** A texture, and the long edge it was judged at. */
export interface TextureAt extends Texture {
  readonly edgePx: number;
}

/** Gathers the colours of a photo, and how crisp it is, each at a print scale that all frames share. */
export async function measureColours(photo: DecodedPhoto): Promise<ColourMeasures> {
  const many = await reducedTo(photo, focusEdgePx);
  const { widthPx, heightPx, rgb16: pixels } = many;
  const few = await reducedTo({ widthPx, heightPx, channels: 3, pixels }, paletteEdgePx);
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

/** The long edge that a picture's texture is judged at, where those are measured: the greatest that suits it. */
export function textureEdge(
  { widthPx, heightPx }: { widthPx: number; heightPx: number },
  measured: readonly number[] = textureEdgesPx,
): number {
  const most = mostOfOwnEdge * Math.max(widthPx, heightPx);
  return measured.find((edgePx) => edgePx <= most) ?? measured[measured.length - 1];
}

/** Measures a painted body at every long edge that suits it; the greatest comes first. */
export async function measureTextures(
  body: Uint16Array,
  size: { widthPx: number; heightPx: number },
  printLongEdgeMm: number,
): Promise<TextureAt[]> {
  const edges = textureEdgesPx.slice(textureEdgesPx.indexOf(textureEdge(size) as 1200));
  const textures: TextureAt[] = [];
  for (const edgePx of edges)
    textures.push({ edgePx, ...(await measureTexture(body, size, printLongEdgeMm, edgePx)) });
  return textures;
}

/**
 * Measures the texture of a painted body.
 * @param body R, G, B in 0…65535, rows without padding; copied from
 * @param edgePx long edge that it is brought down to
 */
export async function measureTexture(
  body: Uint16Array,
  size: { widthPx: number; heightPx: number },
  printLongEdgeMm: number,
  edgePx: number,
): Promise<Texture> {
  // The image library does not take shared memory.
  const pixels = body.buffer instanceof SharedArrayBuffer ? body.slice() : body;
  const { rgb16, widthPx, heightPx } = await reducedTo({ ...size, channels: 3, pixels }, edgePx);
  const luma = new Uint8ClampedArray(lumaOf(rgb16));
  let sums = noTexture;
  for (let top = 0; top < heightPx; top += rowsAtOnce) {
    sums = addRows(sums, { widthPx, heightPx, luma }, top, top + rowsAtOnce);
    await setImmediate();
  }
  return textureOf(sums, printLongEdgeMm / Math.max(widthPx, heightPx), printLongEdgeMm);
}
