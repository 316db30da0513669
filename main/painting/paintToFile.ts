import type { Engine } from '../engine/engineApi.ts';
import { refuseOverwritingOriginal } from '../files/outputPath.ts';
import { removeAbandonedSpills } from '../files/spillFile.ts';
import { writePicture } from '../files/writePicture.ts';
import type { DeliveryOptions, PaintingOrder } from './deliverPainting.ts';
import { type PreparedPainting, paintPrepared } from './paintPrepared.ts';
import { readForPrint } from './readForPrint.ts';

/** A painting made from a photo's file. */
export interface PaintedFile extends PreparedPainting {
  readMs: number;
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
  // Whether the output can be written is found out after this: a bad photo must leave no trace of a trial file.
  const photo = await readForPrint(photoPath, order, { signal, inMemoryPixels });
  const readMs = performance.now() - startMs;
  const painted = await paintPrepared(engine, photo, order, { ...options, writePicture });
  return { ...painted, readMs };
}
