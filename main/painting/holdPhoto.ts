import type { Engine, EnginePhoto, OpenOptions } from '../engine/engineApi.ts';
import type { PhotoFile } from '../files/photoFile.ts';
import { readPhotoSize } from '../files/photoHeader.ts';
import { readPhoto } from '../files/readPhoto.ts';
import { SpilledPixels } from '../files/spilledPixels.ts';
import { type SpilledPhoto, spillPhoto } from '../files/spillPhoto.ts';

/**
 * Photos of more pixels are unpacked to a file and painted band by band: in memory one of 40 megapixels takes up to
 * 1.6 GB while it is painted.
 */
export const heldInMemoryPixels = 40_000_000;

/** Reads a photo, to memory or, a very large one, to a temporary file. */
export async function readAnyPhoto(
  path: string,
  { signal, inMemoryPixels = heldInMemoryPixels }: { signal?: AbortSignal; inMemoryPixels?: number } = {},
): Promise<PhotoFile | SpilledPhoto> {
  const { widthPx, heightPx } = await readPhotoSize(path, { signal });
  return widthPx * heightPx > inMemoryPixels ? spillPhoto(path, { signal }) : readPhoto(path, { signal });
}

/** Gives a photo to an engine, which from then on sees to its pixels, also where they are in a file. */
export function holdPhoto(
  engine: Engine,
  photo: PhotoFile | SpilledPhoto,
  options?: OpenOptions,
): Promise<EnginePhoto> {
  const { pixels } = photo;
  return pixels instanceof SpilledPixels
    ? engine.openRows(pixels, options)
    : engine.open({ ...photo, pixels }, options);
}

/** Gives up a photo that no engine has taken. */
export function letGo({ pixels }: PhotoFile | SpilledPhoto): void {
  if (pixels instanceof SpilledPixels) pixels.discard();
}
