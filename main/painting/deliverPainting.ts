import { srgbProfile } from '../../core/colour/matrixProfile.ts';
import { layerStack } from '../../core/composition/layerStack.ts';
import type { Parameters } from '../../core/parameters/table.ts';
import type { Engine, EnginePhoto, PaintReview, PaintStage, StageTimes } from '../engine/engineApi.ts';
import { layersBeside, layersDepth, writeLayers } from '../files/layers/writeLayers.ts';
import { assertSizeFits, outputDepth } from '../files/outputFormat.ts';
import type { AnyPictureFile, PhotoFile } from '../files/photoFile.ts';
import { paintedWith } from './describePainting.ts';
import { finishPainting } from './finishPainting.ts';
import { type LayeredPixels, paintLayered } from './paintLayered.ts';
import { type PaintedPixels, paintPixels } from './paintPixels.ts';
import { type FileOrder, planFinish } from './printOrder.ts';
import { assertRoomToPaint } from './room.ts';

/** A photo that was read and is held by an engine; its own pixels are not needed any more. */
export interface HeldPhotoFile {
  enginePhoto: EnginePhoto;
  file: Omit<PhotoFile, 'pixels'>;
}

/** What to make of a photo. */
export interface PaintingOrder extends FileOrder {
  parameters: Parameters;
  /** Where the file shall be. */
  out: string;
  /** What it is painted by, in words. */
  description?: string;
  /** What it is painted with; this program unless given. */
  software?: string;
}

export type WritePicture = (
  path: string,
  picture: AnyPictureFile,
  options: { signal?: AbortSignal },
) => Promise<unknown>;

export interface DeliveryOptions {
  signal?: AbortSignal;
  /** Stages of the engine, then `writing`. */
  onProgress?: (fraction01: number, stage: PaintStage | 'writing') => void;
  writePicture: WritePicture;
  /** Asked while the painting is made, where it is held in memory and no layers are written. */
  review?: PaintReview;
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
  /** Of the strata, where they were asked for. */
  layersPath: string | null;
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
/** Where the picture is written and its layers are not. */
const layersFrom01 = 0.93;

/**
 * Paints a held photo at full resolution and writes it: the one way from photo to file, whoever asks.
 * @throws FileError where the file cannot be written; the signal's reason when it is aborted
 */
export async function deliverPainting(
  engine: Engine,
  photo: HeldPhotoFile,
  order: PaintingOrder,
  { signal, onProgress, writePicture, review, place = placeAsNamed }: DeliveryOptions,
): Promise<DeliveredPainting> {
  const { enginePhoto, file } = photo;
  const { widthPx, heightPx, channels, exif } = file;
  const depth = outputDepth(order.format, order.depth ?? file.depth);
  // Found out before the painting: of a very large picture that takes minutes.
  assertSizeFits(order.out, file, order.format);
  if (enginePhoto.isReadByRows) {
    const layers = order.layers
      ? layerStack(order.parameters, file, layersDepth(order.layers, depth))
      : undefined;
    await assertRoomToPaint(order.out, { ...file, depth, format: order.format, layers });
  }
  const finish = await planFinish(order.out, order, file, depth);
  const painted = await paint(
    engine,
    enginePhoto,
    { ...order, depth: finish.paintDepth },
    { signal, onProgress, review },
  );
  try {
    signal?.throwIfAborted();
    onProgress?.(paintShare01, 'writing');
    const startMs = performance.now();
    const { pixels, pixelsSha256 } = painted;
    const { iccProfile, densityPpi } = finish;
    const { format, quality, metadata, description, software = paintedWith } = order;
    const parts = { iccProfile, densityPpi, exif, format, quality, metadata, description, software };
    const finished = await finishPainting(order.out, { widthPx, heightPx, channels, pixels }, finish, signal);
    const picture: AnyPictureFile = { ...finished, ...parts };
    const remarks = [...file.remarks];
    const path = await place(
      order.out,
      async (at) => {
        const written = await writePicture(at, picture, { signal });
        if (hasRemarks(written)) remarks.push(...written.remarks);
      },
      signal,
    );
    let layersPath: string | null = null;
    if (order.layers && 'layers' in painted) {
      onProgress?.(layersFrom01, 'writing');
      const { layers: kind, parameters } = order;
      const composed = { channels, pixels };
      const { layers } = painted;
      const own = { iccProfile: file.iccProfile ?? srgbProfile(), densityPpi };
      const layered = { widthPx, heightPx, layers, composed, parameters, ...own };
      const write = (at: string) => writeLayers(at, layered, kind, { signal });
      layersPath = await place(layersBeside(path, kind), write, signal);
    }
    onProgress?.(1, 'writing');
    const times = { ...painted.times, encodeMs: performance.now() - startMs };
    return {
      path,
      layersPath,
      widthPx: picture.widthPx,
      heightPx: picture.heightPx,
      depth,
      pixelsSha256,
      times,
      remarks,
    };
  } finally {
    painted.release();
  }
}

function paint(
  engine: Engine,
  photo: EnginePhoto,
  order: PaintingOrder & { depth: 8 | 16 },
  { signal, onProgress, review }: Pick<DeliveryOptions, 'signal' | 'onProgress' | 'review'>,
): Promise<PaintedPixels | LayeredPixels> {
  const { layers, depth } = order;
  if (!layers)
    return paintPixels(engine, photo, order, {
      signal,
      review,
      onProgress: onProgress && ((fraction01, stage) => onProgress(paintShare01 * fraction01, stage)),
    });
  const asked = { ...order, layersDepth: layersDepth(layers, depth) };
  return paintLayered(engine, photo, asked, {
    signal,
    onProgress: onProgress && ((fraction01) => onProgress(paintShare01 * fraction01, 'body')),
  });
}

async function placeAsNamed(out: string, write: (path: string) => Promise<unknown>): Promise<string> {
  await write(out);
  return out;
}

function hasRemarks(written: unknown): written is { remarks: string[] } {
  return typeof written === 'object' && written !== null && 'remarks' in written;
}
