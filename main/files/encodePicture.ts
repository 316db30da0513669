import type { Sharp } from 'sharp';
import type { CarriedParts } from './carriedParts.ts';
import { FileError } from './fileError.ts';
import { sharp } from './imageLibrary.ts';
import { unlessAborted } from './interruption.ts';
import { jpegWithParts } from './jpegParts.ts';
import type { AnyPictureFile } from './photoFile.ts';
import { depthOf } from './pictureRows.ts';
import { pngWithParts } from './pngParts.ts';
import { SpilledPixels } from './spilledPixels.ts';
import { SpillFile } from './spillFile.ts';
import { tiffPixelsAt } from './tiffDirectory.ts';
import { uncompressedTiff } from './tiffWriter.ts';
import { webpWithParts } from './webpParts.ts';

const defaultQuality = 92;

/** A compressed picture: pieces, then the rest of a temporary file where it was too large to be held. */
export interface EncodedPicture {
  pieces: Uint8Array[];
  /** Goes on from byte `restAt`; to be discarded. */
  rest: SpillFile | null;
  restAt: number;
}

/**
 * Compresses pixels alone; profile, density and EXIF are put in afterwards. The library would convert pixels to
 * a profile it is given, and the way round it (a TIFF in memory) costs a copy of the whole picture.
 */
export async function encodePicture(
  picture: AnyPictureFile,
  parts: CarriedParts,
  path: string,
  signal?: AbortSignal,
): Promise<EncodedPicture> {
  const { widthPx, heightPx, channels, pixels } = picture;
  try {
    if (pixels instanceof SpilledPixels) return await encodeSpilled(picture, pixels, parts, signal);
    const raw = sharp(pixels, {
      raw: { width: widthPx, height: heightPx, channels },
      limitInputPixels: false,
    });
    const encoded = await unlessAborted(
      picture.space === 'CMYK'
        ? compressInks(pixels as Uint8Array, picture)
        : compress(raw, picture).toBuffer(),
      signal,
    );
    return { pieces: withParts(encoded, parts, picture), rest: null, restAt: 0 };
  } catch (failure) {
    signal?.throwIfAborted();
    if (failure instanceof FileError) throw failure;
    const reason = failure instanceof Error ? failure.message.split('\n')[0] : String(failure);
    throw new FileError(
      path,
      `could not be compressed (${reason})`,
      'Choose another format or a smaller size.',
      { cause: failure },
    );
  }
}

/** Raw samples cannot be called inks, so they go through an uncompressed TIFF that says so. */
async function compressInks(pixels: Uint8Array, picture: AnyPictureFile): Promise<Buffer> {
  const { widthPx, heightPx } = picture;
  const facts = { widthPx, heightPx, channels: 4, bytesPerSample: 1, space: 'CMYK' } as const;
  const { header, tail, tailAt } = uncompressedTiff(facts);
  const tiff = new Uint8Array(tailAt + tail.length);
  tiff.set(header, 0);
  tiff.set(pixels, tiffPixelsAt);
  tiff.set(tail, tailAt);
  return sharp(tiff, { limitInputPixels: false, ignoreIcc: true })
    .pipelineColourspace('cmyk')
    .toColourspace('cmyk')
    .jpeg({ quality: picture.quality ?? defaultQuality, chromaSubsampling: '4:4:4', optimiseCoding: false })
    .toBuffer();
}

/** Enough for whatever the encoder puts before its pixels. */
const headBytes = 64 * 1024;

/** From file to file: the library holds some rows only. */
async function encodeSpilled(
  picture: AnyPictureFile,
  pixels: SpilledPixels,
  parts: CarriedParts,
  signal?: AbortSignal,
): Promise<EncodedPicture> {
  const raw = sharp(pixels.file.path, { limitInputPixels: false, sequentialRead: true, ignoreIcc: true });
  const rest = await SpillFile.create();
  let encoding: Promise<unknown> = Promise.resolve();
  try {
    encoding = compress(raw, picture).toFile(rest.path);
    await unlessAborted(encoding, signal);
    // A WebP is put together anew from its chunks; the others go on behind their head.
    const head = new Uint8Array(picture.format === 'webp' ? rest.bytes : Math.min(headBytes, rest.bytes));
    await rest.read(head, 0, signal);
    return { pieces: withParts(head, parts, picture), rest, restAt: head.length };
  } catch (failure) {
    rest.discardBehind(encoding);
    throw failure;
  }
}

/** @param encoded all of it, or so much that the pixels have begun */
function withParts(encoded: Uint8Array, parts: CarriedParts, picture: AnyPictureFile): Uint8Array[] {
  if (picture.format === 'jpeg') return jpegWithParts(encoded, parts);
  if (picture.format === 'png') return pngWithParts(encoded, parts);
  return webpWithParts(encoded, parts, picture);
}

/**
 * Settings chosen by time and size of a smooth picture of 24 megapixels, one thread, sharp 0.35.5 on two shared
 * cores. PNG, 8 bits: level 1 0.6 s 47 MB, level 2 1.1 s 36 MB, level 2 with filters 1.9 s 22 MB, level 6 2.0 s
 * 32 MB. PNG, 16 bits: filters take 6.6 s. WebP: effort 2 1.9 s, effort 4 3.2 s, 5 % smaller.
 */
function compress(raw: Sharp, picture: AnyPictureFile): Sharp {
  const quality = picture.quality ?? defaultQuality;
  if (picture.format === 'jpeg')
    // Optimised Huffman tables save 6 % and take five times as long.
    return raw.removeAlpha().jpeg({ quality, chromaSubsampling: '4:4:4', optimiseCoding: false });
  if (picture.format === 'webp')
    // exact: colours under transparent pixels are kept.
    return raw.webp({ quality, alphaQuality: 100, exact: true, effort: 2 });
  const is16Bit = depthOf(picture) === 16;
  const image = is16Bit ? raw.toColourspace('rgb16') : raw;
  return image.png({ compressionLevel: 2, adaptiveFiltering: !is16Bit });
}
