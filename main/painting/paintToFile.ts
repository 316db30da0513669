import type { Engine } from '../engine/engineApi.ts';
import { assertLayersWritable, layersBeside } from '../files/layers/writeLayers.ts';
import { assertFormatHolds } from '../files/outputFormat.ts';
import { assertWritable, refuseOverwritingOriginal } from '../files/outputPath.ts';
import { removeAbandonedSpills } from '../files/spillFile.ts';
import { writePicture } from '../files/writePicture.ts';
import {
  type DeliveredPainting,
  type DeliveryOptions,
  deliverPainting,
  type PaintingOrder,
} from './deliverPainting.ts';
import { holdPhoto, letGo, readAnyPhoto } from './holdPhoto.ts';
import { prepareForPrint } from './prepareForPrint.ts';

/** A painting made from a photo's file. */
export interface PaintedFile extends DeliveredPainting {
  /** Of the photo, at full resolution: what `auto` stands for. */
  noiseFloor: number;
  readMs: number;
  /** Taking the pixels in and measuring the noise. */
  openMs: number;
}

/**
 * Reads a photo, paints it and writes the painting, never over the photo itself.
 * @param engine may still be starting while the photo is read
 * @throws FileError naming the photo or the output; the signal's reason when it is aborted
 */
export async function paintToFile(
  engine: Engine | Promise<Engine>,
  photoPath: string,
  order: PaintingOrder,
  options: Omit<DeliveryOptions, 'writePicture'> & { inMemoryPixels?: number } = {},
): Promise<PaintedFile> {
  const { signal, inMemoryPixels } = options;
  const startMs = performance.now();
  await refuseOverwritingOriginal(photoPath, order.out);
  await removeAbandonedSpills();
  const photo = await readForPrint(photoPath, order, { signal, inMemoryPixels });
  let painter: Engine;
  const readMs = performance.now() - startMs;
  try {
    // Checked once there is something to paint: a bad photo must leave no trace of a trial file.
    await assertWritable(order.out);
    const { layers } = order;
    // Whoever places files has names of their own for what is taken.
    if (layers && !options.place) await assertLayersWritable(layersBeside(order.out, layers), layers);
    // The painting will be as transparent as the photo: better said now than after minutes.
    if (order.format === 'jpeg') await assertFormatHolds(order.out, photo, signal, 'jpeg');
    painter = await engine;
  } catch (failure) {
    letGo(photo);
    throw failure;
  }
  const openStartMs = performance.now();
  const enginePhoto = await holdPhoto(painter, photo, { signal });
  const openMs = performance.now() - openStartMs;
  try {
    const { pixels: _, ...file } = photo;
    const delivered = await deliverPainting(painter, { enginePhoto, file }, order, {
      ...options,
      writePicture,
    });
    return { ...delivered, noiseFloor: enginePhoto.noiseFloor, readMs, openMs };
  } finally {
    enginePhoto.close();
  }
}

/** Reads a photo and brings it to the print's own pixels where that is asked for. */
async function readForPrint(
  photoPath: string,
  { printLongEdgeMm, print }: PaintingOrder,
  { signal, inMemoryPixels }: { signal?: AbortSignal; inMemoryPixels?: number },
) {
  const photo = await readAnyPhoto(photoPath, { signal, inMemoryPixels });
  try {
    return await prepareForPrint(photo, { printLongEdgeMm, ...print }, signal, inMemoryPixels);
  } catch (failure) {
    letGo(photo);
    throw failure;
  }
}
