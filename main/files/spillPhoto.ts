import type { Sharp } from 'sharp';
import { type ColourPlan, planColours } from './colourPlan.ts';
import { FileError } from './fileError.ts';
import { swapsEdges, turnUpright } from './orientation.ts';
import type { PhotoFile } from './photoFile.ts';
import { openPhoto, readHeader } from './photoHeader.ts';
import { decodeWith, factsOf } from './readPhoto.ts';
import { type PixelFacts, SpilledPixels } from './spilledPixels.ts';
import { SpillFile } from './spillFile.ts';
import { throughProfile } from './throughProfile.ts';
import { uncompressedPixels } from './uncompressedPixels.ts';

/** A photo whose pixels are in a temporary file; discard them in the end. */
export interface SpilledPhoto extends Omit<PhotoFile, 'pixels'> {
  pixels: SpilledPixels;
}

/** Rows turned at a time. */
const turnRows = 256;

/**
 * Reads a photo as `readPhoto` does, the pixels going to a temporary file instead of memory.
 * @throws FileError naming the file, what is wrong with it and what to do
 * @throws the signal's reason when it is aborted
 */
export async function spillPhoto(
  path: string,
  options: { signal?: AbortSignal } = {},
): Promise<SpilledPhoto> {
  const { signal } = options;
  signal?.throwIfAborted();
  const opened = await openPhoto(path, { wholeFile: false, signal });
  const header = await readHeader(path, opened, signal);
  const colours = planColours(header.metadata);
  const stored = await SpillFile.create('.v');
  let decoding: Promise<unknown> = Promise.resolve();
  const decode = (image: Sharp) => {
    decoding = image.toFile(stored.path);
    return decoding;
  };
  try {
    const { remarks } = await decodeWith({ path, source: opened.source, header, colours }, decode, signal);
    const pixels = await uncompressedPixels(path, stored);
    const expected = header.depth === 16 ? 2 : 1;
    if (pixels.bytesPerSample !== expected)
      throw new FileError(path, 'decodes to a wrong bit depth', 'Export it again as RGB and open that.');
    const { through } = colours;
    const converted = through ? await convertedRows(path, pixels, through, signal) : pixels;
    const upright = await turned(converted, header.orientation, signal);
    const { widthPx, heightPx, channels } = upright;
    const facts = await factsOf(path, opened.source, header, colours, remarks);
    return { ...facts, widthPx, heightPx, channels, pixels: upright };
  } catch (failure) {
    stored.discardBehind(decoding);
    throw failure;
  }
}

/** Pixels converted together. */
const convertedPixels = 2 ** 20;

/** The pixels brought through a profile, in a file of their own; the stored ones go. */
async function convertedRows(
  path: string,
  stored: SpilledPixels,
  through: NonNullable<ColourPlan['through']>,
  signal?: AbortSignal,
): Promise<SpilledPixels> {
  const { widthPx, heightPx, channels } = stored;
  const facts: PixelFacts = {
    widthPx,
    heightPx,
    channels: through.space === 'CMYK' ? 3 : channels,
    bytesPerSample: 2,
  };
  const file = await SpillFile.create();
  try {
    const converted = new SpilledPixels(file, facts, 0);
    const bandRows = Math.max(1, Math.floor(convertedPixels / widthPx));
    for (let top = 0; top < heightPx; top += bandRows) {
      const rows = Math.min(bandRows, heightPx - top);
      const band = { pixels: await stored.samples(top, rows, signal), widthPx, heightPx: rows, channels };
      const { pixels } = await throughProfile(path, band, through, signal);
      const piece = new Uint8Array(pixels.buffer, pixels.byteOffset, pixels.byteLength);
      await file.write(piece, top * widthPx * converted.pixelBytes, signal);
    }
    stored.discard();
    return converted;
  } catch (failure) {
    file.discard();
    throw failure;
  }
}

/**
 * The pixels upright, in a file of their own where anything is to be done; the stored ones go then. Blocks of rows
 * are turned one at a time; after a quarter turn they stand side by side as strips.
 */
async function turned(
  stored: SpilledPixels,
  orientation: number,
  signal?: AbortSignal,
): Promise<SpilledPixels> {
  if (orientation === 1) return stored;
  const isQuarter = swapsEdges(orientation);
  const isReversed = [3, 4, 6, 7].includes(orientation);
  const { widthPx, heightPx, channels, bytesPerSample, pixelBytes } = stored;
  const facts: PixelFacts = isQuarter
    ? { widthPx: heightPx, heightPx: widthPx, channels, bytesPerSample }
    : { widthPx, heightPx, channels, bytesPerSample };
  const edges: number[] = [];
  const file = await SpillFile.create();
  try {
    for (let top = 0; top < heightPx; top += turnRows) {
      const rows = Math.min(turnRows, heightPx - top);
      const block = { pixels: await stored.samples(top, rows, signal), widthPx, heightPx: rows, channels };
      const { pixels } = await turnUpright(block, orientation, signal);
      // Where the block's first row, or column, comes to lie.
      const first = isReversed ? heightPx - top - rows : top;
      edges.push(first);
      const piece = new Uint8Array(pixels.buffer, pixels.byteOffset, pixels.byteLength);
      await file.write(piece, first * widthPx * pixelBytes, signal);
    }
    stored.discard();
    return new SpilledPixels(file, facts, 0, isQuarter ? edges.sort((a, b) => a - b) : [0]);
  } catch (failure) {
    file.discard();
    throw failure;
  }
}
