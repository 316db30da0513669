import { createHash } from 'node:crypto';
import { createReadStream } from 'node:fs';
import { basename } from 'node:path';
import type { PhotoFingerprint } from '../../core/recipes/recipe.ts';
import { fileErrorFrom } from '../files/systemErrors.ts';

/**
 * Tells a photo by its bytes.
 * Cost: reads the whole file, a piece at a time; about a second for 500 MB.
 * @throws FileError where the photo cannot be read
 */
export async function fingerprintPhoto(path: string, signal?: AbortSignal): Promise<PhotoFingerprint> {
  const hash = createHash('sha256');
  let sizeBytes = 0;
  try {
    for await (const piece of createReadStream(path, { signal, highWaterMark: 2 ** 20 })) {
      hash.update(piece);
      sizeBytes += piece.length;
    }
  } catch (failure) {
    throw fileErrorFrom(path, failure);
  }
  return { fileName: basename(path), sha256: hash.digest('hex'), sizeBytes };
}
