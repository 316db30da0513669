import type { Parameters } from '../../core/parameters/table.ts';
import type { Engine, EnginePhoto, StageTimes } from '../engine/engineApi.ts';
import { assertSizeFits, outputDepth } from '../files/outputFormat.ts';
import type { AnyPictureFile, OutputFormat, PhotoFile } from '../files/photoFile.ts';
import { paintPixels } from './paintPixels.ts';
import { assertRoomToPaint } from './room.ts';

/** A photo that was read and is held by an engine; its own pixels are not needed any more. */
export interface HeldPhotoFile {
  enginePhoto: EnginePhoto;
  file: Omit<PhotoFile, 'pixels'>;
}

/** What to make of a photo. */
export interface PaintingOrder {
  parameters: Parameters;
  /** Where the file shall be. */
  out: string;
  format: OutputFormat;
  /** Bits a sample; the photo's own unless given, and never more than the format holds. */
  depth?: 8 | 16;
  /** 1…100, for JPEG and WebP. */
  quality?: number;
  printLongEdgeMm: number;
}

export type WritePicture = (
  path: string,
  picture: AnyPictureFile,
  options: { signal?: AbortSignal },
) => Promise<unknown>;

export interface DeliveryOptions {
  signal?: AbortSignal;
  /** Stages of the engine, then `writing`. */
  onProgress?: (
    fraction01: number,
    stage: 'grain' | 'body' | 'line' | 'relief' | 'compose' | 'writing',
  ) => void;
  writePicture: WritePicture;
  /**
   * Decides the name and what happens to a file that has it; writes to `out` itself unless given.
   * @param write makes the whole file at the path it is given
   * @returns where the file is now
   */
  place?: (out: string, write: (path: string) => Promise<unknown>, signal?: AbortSignal) => Promise<string>;
}

/** A painting that was written. */
export interface DeliveredPainting {
  path: string;
  widthPx: number;
  heightPx: number;
  depth: 8 | 16;
  /** SHA-256 of the interleaved pixels as painted, before encoding; little-endian where they have 16 bits. */
  pixelsSha256: string;
  times: StageTimes & { encodeMs: number };
  remarks: string[];
}

/** Share of a delivery's time that painting takes; encoding and writing report nothing in between. */
const paintShare01 = 0.9;

/**
 * Paints a held photo at full resolution and writes it: the one way from photo to file, whoever asks.
 * @throws FileError where the file cannot be written; the signal's reason when it is aborted
 */
export async function deliverPainting(
  engine: Engine,
  photo: HeldPhotoFile,
  order: PaintingOrder,
  { signal, onProgress, writePicture, place = placeAsNamed }: DeliveryOptions,
): Promise<DeliveredPainting> {
  const { enginePhoto, file } = photo;
  const { widthPx, heightPx, channels, iccProfile, densityPpi, exif } = file;
  const depth = outputDepth(order.format, order.depth ?? file.depth);
  // Found out before the painting: of a very large picture that takes minutes.
  assertSizeFits(order.out, file, order.format);
  if (enginePhoto.isReadByRows) await assertRoomToPaint(order.out, { ...file, depth, format: order.format });
  const painted = await paintPixels(
    engine,
    enginePhoto,
    { ...order, depth },
    {
      signal,
      onProgress: onProgress && ((fraction01, stage) => onProgress(paintShare01 * fraction01, stage)),
    },
  );
  try {
    signal?.throwIfAborted();
    onProgress?.(paintShare01, 'writing');
    const startMs = performance.now();
    const { pixels, pixelsSha256 } = painted;
    const parts = { iccProfile, densityPpi, exif, format: order.format, quality: order.quality };
    const picture: AnyPictureFile = { widthPx, heightPx, channels, pixels, ...parts };
    const remarks = [...file.remarks];
    const path = await place(
      order.out,
      async (at) => {
        const written = await writePicture(at, picture, { signal });
        if (hasRemarks(written)) remarks.push(...written.remarks);
      },
      signal,
    );
    onProgress?.(1, 'writing');
    const times = { ...painted.times, encodeMs: performance.now() - startMs };
    return { path, widthPx, heightPx, depth, pixelsSha256, times, remarks };
  } finally {
    painted.release();
  }
}

async function placeAsNamed(out: string, write: (path: string) => Promise<unknown>): Promise<string> {
  await write(out);
  return out;
}

function hasRemarks(written: unknown): written is { remarks: string[] } {
  return typeof written === 'object' && written !== null && 'remarks' in written;
}
