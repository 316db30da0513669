import { open, stat } from 'node:fs/promises';
import type { Metadata } from 'sharp';
import { whyUndecodable } from './decodeFaults.ts';
import { FileError } from './fileError.ts';
import { sharp } from './imageLibrary.ts';
import { unlessAborted } from './interruption.ts';
import { swapsEdges } from './orientation.ts';
import { type PhotoFormat, requirePhotoFormat } from './photoFormat.ts';
import { fileErrorFrom } from './systemErrors.ts';

/** The most pixels a photo may have. */
export const pixelLimit = 500_000_000;

/** What a photo's header tells, before any pixel is decoded. */
export interface PhotoHeader {
  format: PhotoFormat;
  /** Size as stored, before it is turned upright. */
  storedWidthPx: number;
  storedHeightPx: number;
  /** EXIF orientation 1…8. */
  orientation: number;
  depth: 8 | 16;
  metadata: Metadata;
}

const headBytes = 64;
// A file read at once cannot change under the decoder and is not held open; a very large one would double
// the memory, so the library reads that from the disk.
const readAtOnceBytes = 64 * 2 ** 20;

/** Reads the whole file, or hands back its path where it is very large. */
export async function openPhoto(
  path: string,
  options: { wholeFile: boolean; signal?: AbortSignal },
): Promise<{ format: PhotoFormat; source: Buffer | string }> {
  try {
    const facts = await stat(path);
    if (facts.isDirectory()) throw new FileError(path, 'is a folder, not a photo', 'Name a photo in it.');
    if (!facts.isFile()) throw new FileError(path, 'is not a regular file', 'Name a photo file.');
    if (facts.size === 0) throw new FileError(path, 'is empty', 'Copy it again from the camera or the card.');
    const atOnce = options.wholeFile && facts.size <= readAtOnceBytes;
    const file = await open(path, 'r');
    try {
      const bytes = Buffer.alloc(atOnce ? facts.size : Math.min(headBytes, facts.size));
      let filled = 0;
      while (filled < bytes.length) {
        options.signal?.throwIfAborted();
        const { bytesRead } = await file.read(bytes, filled, bytes.length - filled, filled);
        if (bytesRead === 0) break;
        filled += bytesRead;
      }
      const format = requirePhotoFormat(path, bytes.subarray(0, headBytes));
      return { format, source: atOnce ? bytes.subarray(0, filled) : path };
    } finally {
      await file.close();
    }
  } catch (failure) {
    throw fileErrorFrom(path, failure);
  }
}

/**
 * Reads a photo's header.
 * @throws FileError where it cannot be read, holds samples we cannot carry, or is larger than `pixelLimit`
 */
export async function readHeader(
  path: string,
  opened: { format: PhotoFormat; source: Buffer | string },
  signal?: AbortSignal,
): Promise<PhotoHeader> {
  let metadata: Metadata;
  try {
    const reader = sharp(opened.source, { limitInputPixels: false, failOn: 'error' });
    metadata = await unlessAborted(reader.metadata(), signal);
  } catch (failure) {
    if (signal?.aborted) throw failure;
    throw whyUndecodable(path, failure);
  }
  const { width, height, orientation = 1 } = metadata;
  if (!(width > 0 && height > 0))
    throw new FileError(path, 'has no pixels', 'Export it again from the program that made it.');
  if (width * height > pixelLimit)
    throw new FileError(
      path,
      `has ${Math.round((width * height) / 1e6)} megapixels, more than the ${pixelLimit / 1e6} that can be painted`,
      'Make a smaller copy and open that.',
    );
  return {
    format: opened.format,
    storedWidthPx: width,
    storedHeightPx: height,
    orientation: orientation >= 1 && orientation <= 8 ? orientation : 1,
    depth: sampleDepth(path, metadata),
    metadata,
  };
}

function sampleDepth(path: string, metadata: Metadata): 8 | 16 {
  if (metadata.depth === 'uchar') return 8;
  if (metadata.depth === 'ushort') return 16;
  // Whole-number Lab samples: the library converts them.
  if (metadata.space === 'labs' || metadata.space === 'lab') return 16;
  const kind = /float|double|complex/.test(metadata.depth ?? '') ? 'floating-point' : '32-bit';
  throw new FileError(path, `holds ${kind} samples`, 'Export it as a 16-bit TIFF and open that.');
}

/** A photo's size as it is seen, turned upright. */
export interface PhotoSize {
  widthPx: number;
  heightPx: number;
  format: PhotoFormat;
  depth: 8 | 16;
  hasAlpha: boolean;
  /** Not stored upright. */
  isTurned: boolean;
}

/** Reads how large a photo is, upright, without decoding it. */
export async function readPhotoSize(
  path: string,
  options: { signal?: AbortSignal } = {},
): Promise<PhotoSize> {
  const opened = await openPhoto(path, { wholeFile: false, signal: options.signal });
  const header = await readHeader(path, { format: opened.format, source: path }, options.signal);
  const turned = swapsEdges(header.orientation);
  return {
    widthPx: turned ? header.storedHeightPx : header.storedWidthPx,
    heightPx: turned ? header.storedWidthPx : header.storedHeightPx,
    format: header.format,
    depth: header.depth,
    hasAlpha: header.metadata.hasAlpha,
    isTurned: header.orientation !== 1,
  };
}
