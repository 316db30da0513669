import { statfs } from 'node:fs/promises';
import { resolve } from 'node:path';
import { mmPerInch } from '../../core/print/printPlan.ts';
import type { OutputSettings } from '../../core/recipes/outputSettings.ts';
import { FileError } from '../files/fileError.ts';

/** Nothing more can be written: the next frame would fare no better. */
export class DiskFull extends FileError {}

/** Left free on the disk whatever is written. */
const spareBytes = 16 * 2 ** 20;
type Shares = Record<OutputSettings['format'], number>;
/** A file's bytes by those of its samples. Paint compresses well: PNGs of paintings were a third. */
const expectedShare: Shares = { png: 0.35, jpeg: 0.12, tiff: 0.9, webp: 0.12 };
/** Until a frame is written nobody knows how well it compresses. */
const mostShare: Shares = { png: 0.9, jpeg: 0.4, tiff: 1, webp: 0.4 };
/** Strata beside a picture take about as much as so many pictures. */
const layerPictures = 6;

interface Size {
  widthPx: number;
  heightPx: number;
}

/**
 * Refuses to begin a run that will not fit.
 * @param sizes of the photos still to be painted
 * @throws DiskFull
 */
export async function requireRoomForAll(
  folder: string,
  sizes: readonly Size[],
  output: OutputSettings,
): Promise<void> {
  const share = expectedShare[output.format];
  const needed = sizes.reduce((sum, size) => sum + share * sampleBytes(size, output), 0);
  if (sizes.length > 0) await requireBytes(folder, needed + spareBytes, `${sizes.length} paintings need`);
}

/** @throws DiskFull where there is no room for the next painting */
export async function requireRoomForNext(folder: string, size: Size, output: OutputSettings): Promise<void> {
  const needed = mostShare[output.format] * sampleBytes(size, output);
  await requireBytes(folder, needed + spareBytes, 'the next painting needs');
}

async function requireBytes(folder: string, needed: number, what: string): Promise<void> {
  const { bavail, bsize } = await statfs(folder);
  const free = bavail * bsize;
  if (free >= needed) return;
  throw new DiskFull(
    resolve(folder),
    `${what} about ${megabytes(needed)}, and ${megabytes(free)} are free`,
    'Free some space, then go on with --resume.',
  );
}

function sampleBytes({ widthPx, heightPx }: Size, output: OutputSettings): number {
  const { isResampled, ppi, printLongEdgeMm, depth, layers, format } = output;
  const printPx = (printLongEdgeMm / mmPerInch) * ppi;
  const scale = isResampled ? printPx / Math.max(widthPx, heightPx) : 1;
  const isDeep = depth === 16 && (format === 'png' || format === 'tiff');
  const bytes = widthPx * heightPx * scale ** 2 * 3 * (isDeep ? 2 : 1);
  return layers === 'none' ? bytes : bytes * (1 + layerPictures);
}

/** The disk said so itself, at whatever depth of causes. */
export function isDiskFull(failure: unknown): boolean {
  for (let cause = failure; cause instanceof Error; cause = cause.cause) {
    const { code } = cause as NodeJS.ErrnoException;
    if (cause instanceof DiskFull || code === 'ENOSPC' || code === 'EDQUOT') return true;
  }
  return false;
}

function megabytes(bytes: number): string {
  return bytes >= 1e9 ? `${(bytes / 1e9).toFixed(1)} GB` : `${Math.ceil(bytes / 1e6)} MB`;
}
