import type { Engine, EnginePhoto, OpenOptions } from '../engine/engineApi.ts';
import type { PhotoFile } from '../files/photoFile.ts';
import { readPhotoSize } from '../files/photoHeader.ts';
import { readPhoto } from '../files/readPhoto.ts';
import { SpilledPixels } from '../files/spilledPixels.ts';
import { type SpilledPhoto, spillPhoto } from '../files/spillPhoto.ts';
import { assertRoomToUnpack, heldBytes, machineRoom } from './room.ts';

/**
 * Photos of more pixels are unpacked to a file and painted band by band: in memory one of 40 megapixels takes up to
 * 1.6 GB while it is painted.
 */
export const heldInMemoryPixels = 40_000_000;

/**
 * Reads a photo to memory or, where it is very large or memory is short, to a temporary file.
 * @throws FileError also where there is no room for it
 */
export async function readAnyPhoto(
  path: string,
  { signal, inMemoryPixels = heldInMemoryPixels }: { signal?: AbortSignal; inMemoryPixels?: number } = {},
): Promise<PhotoFile | SpilledPhoto> {
  const size = await readPhotoSize(path, { signal });
  const isHeld =
    size.widthPx * size.heightPx <= inMemoryPixels && heldBytes(size) <= machineRoom.memoryBytes();
  if (isHeld) return readPhoto(path, { signal });
  await assertRoomToUnpack(path, size);
  return spillPhoto(path, { signal });
}

/**
 * Gives a photo to an engine, which from then on sees to its pixels, also where they are in a file; they are given
 * up where this fails.
 * @param engine may still be starting
 */
export async function holdPhoto(
  engine: Engine | Promise<Engine>,
  photo: PhotoFile | SpilledPhoto,
  options?: OpenOptions,
): Promise<EnginePhoto> {
  const { pixels } = photo;
  try {
    options?.signal?.throwIfAborted();
    const painter = await engine;
    return await (pixels instanceof SpilledPixels
      ? painter.openRows(pixels, options)
      : painter.open({ ...photo, pixels }, options));
  } catch (failure) {
    letGo(photo);
    throw failure;
  }
}

/** Gives up a photo that no engine has taken. */
export function letGo({ pixels }: PhotoFile | SpilledPhoto): void {
  if (pixels instanceof SpilledPixels) pixels.discard();
}
