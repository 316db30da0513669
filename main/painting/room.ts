import { statfs } from 'node:fs/promises';
import { totalmem } from 'node:os';
import { dirname } from 'node:path';
import { FileError } from '../files/fileError.ts';
import type { OutputFormat } from '../files/photoFile.ts';
import { spillFolder } from '../files/spillFile.ts';

/** What the machine has left. */
export interface Room {
  memoryBytes(): number;
  /** Infinity where the system does not say. */
  diskBytes(folder: string): Promise<number>;
}

export const machineRoom: Room = {
  // macOS counts memory as used that it would give at once; there the whole of it has to do.
  memoryBytes: () => (process.platform === 'darwin' ? totalmem() : process.availableMemory()),
  diskBytes: (folder) =>
    statfs(folder).then(
      ({ bavail, bsize }) => bavail * bsize,
      () => Number.POSITIVE_INFINITY,
    ),
};

interface Size {
  widthPx: number;
  heightPx: number;
}

/** Painted in memory: photo, painting, body, line and half as much again for levels. Measured: 33 bytes a pixel. */
const heldBytesAPixel = 40;

/** What painting a photo in memory takes. */
export function heldBytes({ widthPx, heightPx }: Size): number {
  return widthPx * heightPx * heldBytesAPixel;
}

/**
 * What painting a photo in bands takes: the program, sliding rows, tensors of the large levels and three pictures of
 * the largest level that is held whole. Measured with 100 and 250 megapixels, rounded up; see DEVELOPERS.md.
 */
export function bandBytes({ widthPx, heightPx }: Size): number {
  return 250e6 + 40_000 * widthPx + widthPx * heightPx + 430e6;
}

/** libwebp holds the whole picture, four bytes a pixel and its own planes. */
const webpBytesAPixel = 8;

/**
 * Refuses to unpack a photo that there is no room for.
 * @throws FileError
 */
export async function assertRoomToUnpack(
  path: string,
  photo: Size & { depth: 8 | 16; isTurned: boolean; hasAlpha: boolean },
  room: Room = machineRoom,
): Promise<void> {
  requireMemory(path, bandBytes(photo), room);
  const pixelBytes = (photo.depth / 8) * (photo.hasAlpha ? 4 : 3);
  const once = photo.widthPx * photo.heightPx * pixelBytes;
  await requireSpillSpace(path, photo.isTurned ? 2 * once : once, room);
}

/**
 * Refuses to paint in bands what there is no room to write.
 * @throws FileError
 */
export async function assertRoomToPaint(
  out: string,
  painting: Size & {
    channels: 3 | 4;
    depth: 8 | 16;
    format: OutputFormat;
    layers?: readonly { channels: number; bytesPerSample: number }[];
  },
  room: Room = machineRoom,
): Promise<void> {
  const { widthPx, heightPx, channels, depth, format, layers = [] } = painting;
  if (format === 'webp') requireMemory(out, 250e6 + widthPx * heightPx * webpBytesAPixel, room);
  const bytes = widthPx * heightPx * channels * (depth / 8);
  const layerBytes = layers.reduce(
    (sum, layer) => sum + widthPx * heightPx * layer.channels * layer.bytesPerSample,
    0,
  );
  // The compressed file is first written to the temporary folder too, but for a TIFF.
  const packed = format === 'tiff' ? 0 : compressedShare[format] * bytes;
  await requireSpillSpace(out, bytes + layerBytes + packed, room);
  const folder = dirname(out);
  const free = await room.diskBytes(folder);
  const needed = compressedShare[format] * bytes + compressedShare.tiff * layerBytes;
  if (free < needed)
    throw new FileError(
      out,
      `needs about ${gigabytes(needed)} in "${folder}", where ${gigabytes(free)} are free`,
      'Free some space or choose a folder on another disk.',
    );
}

/** Of a painting's own bytes; paint compresses well, noise in the ground less so. */
const compressedShare: Record<OutputFormat, number> = { jpeg: 0.3, png: 0.8, tiff: 0.9, webp: 0.3 };

function requireMemory(path: string, needed: number, room: Room): void {
  const free = room.memoryBytes();
  if (free < needed)
    throw new FileError(
      path,
      `needs about ${gigabytes(needed)} of memory to be painted, and ${gigabytes(free)} are free`,
      'Close other programs, or paint a smaller copy.',
    );
}

async function requireSpillSpace(path: string, needed: number, room: Room): Promise<void> {
  const folder = await spillFolder();
  const free = await room.diskBytes(folder);
  if (free < needed)
    throw new FileError(
      path,
      `needs about ${gigabytes(needed)} for temporary files in "${folder}", where ${gigabytes(free)} are free`,
      'Free some space there, or set TMPDIR to a folder on a larger disk.',
    );
}

function gigabytes(bytes: number): string {
  return `${(bytes / 1e9).toFixed(1)} GB`;
}
