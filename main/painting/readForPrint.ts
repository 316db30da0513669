import type { PhotoFile } from '../files/photoFile.ts';
import type { SpilledPhoto } from '../files/spillPhoto.ts';
import { letGo, readAnyPhoto } from './holdPhoto.ts';
import { prepareForPrint } from './prepareForPrint.ts';
import type { SizeOrder } from './printOrder.ts';

/**
 * Reads a photo and brings it to the print's own pixels where that is asked for.
 * @param inMemoryPixels larger pictures go to a temporary file
 * @throws FileError naming the photo; the signal's reason when it is aborted
 */
export async function readForPrint(
  photoPath: string,
  { printLongEdgeMm, print }: SizeOrder,
  { signal, inMemoryPixels }: { signal?: AbortSignal; inMemoryPixels?: number } = {},
): Promise<PhotoFile | SpilledPhoto> {
  const photo = await readAnyPhoto(photoPath, { signal, inMemoryPixels });
  try {
    return await prepareForPrint(photo, { printLongEdgeMm, ...print }, signal, inMemoryPixels);
  } catch (failure) {
    letGo(photo);
    throw failure;
  }
}
