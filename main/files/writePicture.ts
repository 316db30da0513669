import type { Sharp } from 'sharp';
import type { CarriedParts } from './carriedParts.ts';
import { exifForPainting } from './exifBlock.ts';
import { FileError } from './fileError.ts';
import { sharp } from './imageLibrary.ts';
import { unlessAborted } from './interruption.ts';
import { jpegLimits, jpegWithParts } from './jpegParts.ts';
import { assertFormatHolds, outputDepth } from './outputFormat.ts';
import type { PictureFile } from './photoFile.ts';
import { pngWithParts } from './pngParts.ts';
import { fileErrorFrom } from './systemErrors.ts';
import { writeTiff } from './tiffWriter.ts';
import { UnfinishedFile } from './unfinishedFile.ts';
import { webpWithParts } from './webpParts.ts';

const defaultQuality = 92;

/** What was written. */
export interface WrittenPicture {
  bytes: number;
  /** What could not be carried along, in plain sentences; usually empty. */
  remarks: string[];
}

/**
 * Writes a picture to a file, whole or not at all: a failure or an abort leaves the folder as it was. Sample
 * values go into the file as they are (JPEG and WebP are lossy); the profile describes them and converts nothing.
 * @throws FileError naming the file, what is wrong and what to do
 * @throws the signal's reason when it is aborted
 */
export async function writePicture(
  path: string,
  picture: PictureFile,
  options: { signal?: AbortSignal } = {},
): Promise<WrittenPicture> {
  const { signal } = options;
  signal?.throwIfAborted();
  requireSoundPicture(picture);
  await assertFormatHolds(path, picture, signal, picture.format);
  const remarks: string[] = [];
  const parts = partsToCarry(picture, remarks);
  // Encoded before the file is begun, so that a temporary file exists only while bytes go into it.
  const pieces = picture.format === 'tiff' ? undefined : await encode(picture, parts, path, signal);
  const file = await UnfinishedFile.begin(path);
  try {
    if (pieces) for (const piece of pieces) await file.append(piece, signal);
    else await writeTiff(file, picture, parts, signal);
    await verify(file.temporaryPath, path, picture, parts);
    signal?.throwIfAborted();
    await file.finish();
    return { bytes: file.bytesWritten, remarks };
  } catch (failure) {
    throw fileErrorFrom(path, failure);
  } finally {
    file.discard();
  }
}

function requireSoundPicture({ widthPx, heightPx, channels, pixels, format }: PictureFile): void {
  const expected = widthPx * heightPx * channels;
  if (pixels.length !== expected || expected === 0)
    throw new RangeError(`Expected ${expected} samples for pixels but received ${pixels.length}`);
  const depth = pixels.BYTES_PER_ELEMENT === 2 ? 16 : 8;
  if (outputDepth(format, depth) !== depth)
    throw new RangeError(`Expected 8-bit pixels for ${format} but received ${depth}-bit ones`);
}

function partsToCarry(picture: PictureFile, remarks: string[]): CarriedParts {
  const parts: CarriedParts = { iccProfile: picture.iccProfile, densityPpi: picture.densityPpi };
  const hasRoomForExif = picture.format !== 'tiff';
  if (picture.exif && hasRoomForExif) {
    parts.exif = exifForPainting(picture.exif, picture);
    if (!parts.exif) remarks.push('The camera data of the photo is damaged and was left out.');
  }
  if (picture.format !== 'jpeg') return parts;
  if (parts.exif && parts.exif.length > jpegLimits.exifBytes) {
    parts.exif = undefined;
    remarks.push('The camera data of the photo is too long for a JPEG and was left out.');
  }
  if (parts.iccProfile && parts.iccProfile.length > jpegLimits.profileBytes) {
    parts.iccProfile = undefined;
    remarks.push('The colour profile is too long for a JPEG and was left out.');
  }
  return parts;
}

/**
 * Compresses pixels alone; profile, density and EXIF are put in afterwards. The library would convert pixels to
 * a profile it is given, and the way round it (a TIFF in memory) costs a copy of the whole picture.
 */
async function encode(
  picture: PictureFile,
  parts: CarriedParts,
  path: string,
  signal?: AbortSignal,
): Promise<Uint8Array[]> {
  const { widthPx, heightPx, channels, pixels } = picture;
  const raw = sharp(pixels, {
    raw: { width: widthPx, height: heightPx, channels },
    limitInputPixels: false,
  });
  let encoded: Uint8Array;
  try {
    encoded = await unlessAborted(compress(raw, picture).toBuffer(), signal);
  } catch (failure) {
    signal?.throwIfAborted();
    const reason = failure instanceof Error ? failure.message.split('\n')[0] : String(failure);
    throw new FileError(
      path,
      `could not be compressed (${reason})`,
      'Choose another format or a smaller size.',
      {
        cause: failure,
      },
    );
  }
  if (picture.format === 'jpeg') return jpegWithParts(encoded, parts);
  if (picture.format === 'png') return pngWithParts(encoded, parts);
  return webpWithParts(encoded, parts, picture);
}

/**
 * Settings chosen by time and size of a smooth picture of 24 megapixels, one thread, sharp 0.35.5 on two shared
 * cores. PNG, 8 bits: level 1 0.6 s 47 MB, level 2 1.1 s 36 MB, level 2 with filters 1.9 s 22 MB, level 6 2.0 s
 * 32 MB. PNG, 16 bits: filters take 6.6 s. WebP: effort 2 1.9 s, effort 4 3.2 s, 5 % smaller.
 */
function compress(raw: Sharp, picture: PictureFile): Sharp {
  const quality = picture.quality ?? defaultQuality;
  if (picture.format === 'jpeg')
    // Optimised Huffman tables save 6 % and take five times as long.
    return raw.removeAlpha().jpeg({ quality, chromaSubsampling: '4:4:4', optimiseCoding: false });
  if (picture.format === 'webp')
    // exact: colours under transparent pixels are kept.
    return raw.webp({ quality, alphaQuality: 100, exact: true, effort: 2 });
  const is16Bit = picture.pixels.BYTES_PER_ELEMENT === 2;
  const image = is16Bit ? raw.toColourspace('rgb16') : raw;
  return image.png({ compressionLevel: 2, adaptiveFiltering: !is16Bit });
}

/** Reads the header back with the library: a file that says something else than asked is not delivered. */
async function verify(
  writtenPath: string,
  path: string,
  picture: PictureFile,
  parts: CarriedParts,
): Promise<void> {
  const found = await sharp(writtenPath, { limitInputPixels: false }).metadata();
  const is16Bit = picture.pixels.BYTES_PER_ELEMENT === 2;
  const faults = [
    found.width === picture.widthPx && found.height === picture.heightPx ? '' : 'size',
    picture.format === 'jpeg' || found.channels === picture.channels ? '' : 'channels',
    found.depth === (is16Bit ? 'ushort' : 'uchar') ? '' : 'bit depth',
    (found.orientation ?? 1) === 1 ? '' : 'orientation',
    sameBytes(found.icc, parts.iccProfile) ? '' : 'colour profile',
  ].filter(Boolean);
  if (faults.length > 0)
    throw new FileError(
      path,
      `the written file has a wrong ${faults.join(', ')}, so it was not kept`,
      'Choose another format and report this photo.',
    );
}

function sameBytes(found: Uint8Array | undefined, asked: Uint8Array | undefined): boolean {
  if (!found || !asked) return !found && !asked;
  return Buffer.compare(found, asked) === 0;
}
