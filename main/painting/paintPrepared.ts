import type { Engine } from '../engine/engineApi.ts';
import { assertLayersWritable, layersBeside } from '../files/layers/writeLayers.ts';
import { assertFormatHolds } from '../files/outputFormat.ts';
import { assertWritable } from '../files/outputPath.ts';
import type { PhotoFile } from '../files/photoFile.ts';
import type { SpilledPhoto } from '../files/spillPhoto.ts';
import {
  type DeliveredPainting,
  type DeliveryOptions,
  deliverPainting,
  type PaintingOrder,
} from './deliverPainting.ts';
import { holdPhoto, letGo } from './holdPhoto.ts';

/** A painting made from a photo that nobody held before. */
export interface PreparedPainting extends DeliveredPainting {
  /** Of the photo, at full resolution: what `auto` stands for. */
  noiseFloor: number;
  /** Taking the pixels in and measuring the noise. */
  openMs: number;
}

/**
 * Paints a photo that has the print's pixels and writes it; the photo is given up in the end.
 * @param engine may still be starting
 * @param photo as `readForPrint` gives it
 * @throws FileError naming the output, before painting where that can be known; the signal's reason when it is aborted
 */
export async function paintPrepared(
  engine: Engine | Promise<Engine>,
  photo: PhotoFile | SpilledPhoto,
  order: PaintingOrder,
  options: DeliveryOptions,
): Promise<PreparedPainting> {
  const { signal, place } = options;
  const { out, layers } = order;
  let painter: Engine;
  try {
    // Whoever places files has seen to the folder, and has names of their own for what is taken.
    if (!place) await assertWritable(out);
    if (!place && layers) await assertLayersWritable(layersBeside(out, layers), layers);
    // The painting will be as transparent as the photo: better said now than after minutes.
    if (order.format === 'jpeg') await assertFormatHolds(out, photo, signal, 'jpeg');
    painter = await engine;
  } catch (failure) {
    letGo(photo);
    throw failure;
  }
  const startMs = performance.now();
  const enginePhoto = await holdPhoto(painter, photo, { signal });
  const openMs = performance.now() - startMs;
  try {
    const { pixels: _, ...file } = photo;
    const delivered = await deliverPainting(painter, { enginePhoto, file }, order, options);
    return { ...delivered, noiseFloor: enginePhoto.noiseFloor, openMs };
  } finally {
    enginePhoto.close();
  }
}
