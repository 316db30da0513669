import type { CarriedParts } from './carriedParts.ts';
import { type EncodedPicture, encodePicture } from './encodePicture.ts';
import { emptyExif, exifForPainting } from './exifBlock.ts';
import { FileError } from './fileError.ts';
import { sharp } from './imageLibrary.ts';
import { jpegLimits } from './jpegParts.ts';
import { assertFormatHolds, outputDepth } from './outputFormat.ts';
import type { AnyPictureFile } from './photoFile.ts';
import { depthOf } from './pictureRows.ts';
import { SpilledPixels } from './spilledPixels.ts';
import { fileErrorFrom } from './systemErrors.ts';
import { writeTiff } from './tiffWriter.ts';
import { UnfinishedFile } from './unfinishedFile.ts';

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
  picture: AnyPictureFile,
  options: { signal?: AbortSignal } = {},
): Promise<WrittenPicture> {
  const { signal } = options;
  signal?.throwIfAborted();
  requireSoundPicture(picture);
  await assertFormatHolds(path, picture, signal, picture.format);
  const remarks: string[] = [];
  const parts = partsToCarry(picture, remarks);
  // Encoded before the file is begun, so that a temporary file exists only while bytes go into it.
  const encoded = picture.format === 'tiff' ? undefined : await encodePicture(picture, parts, path, signal);
  const file = await UnfinishedFile.begin(path).catch((failure) => {
    encoded?.rest?.discard();
    throw failure;
  });
  try {
    if (encoded) await appendEncoded(file, encoded, signal);
    else await writeTiff(file, picture, parts, signal);
    await verify(file.temporaryPath, path, picture, parts);
    signal?.throwIfAborted();
    await file.finish();
    return { bytes: file.bytesWritten, remarks };
  } catch (failure) {
    throw fileErrorFrom(path, failure);
  } finally {
    file.discard();
    encoded?.rest?.discard();
  }
}

const copyBytes = 4 * 2 ** 20;

async function appendEncoded(
  file: UnfinishedFile,
  { pieces, rest, restAt }: EncodedPicture,
  signal?: AbortSignal,
): Promise<void> {
  for (const piece of pieces) await file.append(piece, signal);
  if (!rest) return;
  const end = rest.bytes;
  for (let at = restAt; at < end; at += copyBytes) {
    const piece = new Uint8Array(Math.min(copyBytes, end - at));
    await rest.read(piece, at, signal);
    await file.append(piece, signal);
  }
}

function requireSoundPicture(picture: AnyPictureFile): void {
  const { widthPx, heightPx, channels, pixels, format } = picture;
  const expected = widthPx * heightPx * channels;
  const received =
    pixels instanceof SpilledPixels ? pixels.widthPx * pixels.heightPx * pixels.channels : pixels.length;
  if (received !== expected || expected === 0)
    throw new RangeError(`Expected ${expected} samples for pixels but received ${received}`);
  const depth = depthOf(picture);
  if (outputDepth(format, depth) !== depth)
    throw new RangeError(`Expected 8-bit pixels for ${format} but received ${depth}-bit ones`);
}

function partsToCarry(picture: AnyPictureFile, remarks: string[]): CarriedParts {
  const parts: CarriedParts = { iccProfile: picture.iccProfile, densityPpi: picture.densityPpi };
  const { metadata = 'essential', description, software } = picture;
  if (metadata !== 'none') {
    const changes = { ...picture, metadata };
    if (picture.exif) {
      parts.exif = exifForPainting(picture.exif, changes);
      if (!parts.exif) remarks.push('The camera data of the photo is damaged and was left out.');
    }
    if (!parts.exif && (description || software)) parts.exif = exifForPainting(emptyExif(), changes);
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

/** Reads the header back with the library: a file that says something else than asked is not delivered. */
async function verify(
  writtenPath: string,
  path: string,
  picture: AnyPictureFile,
  parts: CarriedParts,
): Promise<void> {
  const found = await sharp(writtenPath, { limitInputPixels: false }).metadata();
  const is16Bit = depthOf(picture) === 16;
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
