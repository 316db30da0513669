import type { Parameters } from '../../core/parameters/table.ts';
import type { Engine } from '../engine/engineApi.ts';
import { FileError } from '../files/fileError.ts';
import { outputDepth, outputFormatFor } from '../files/outputFormat.ts';
import { assertWritable, refuseOverwritingOriginal } from '../files/outputPath.ts';
import { readPhotoSize } from '../files/photoHeader.ts';
import { readPhoto } from '../files/readPhoto.ts';
import { writePicture } from '../files/writePicture.ts';
import { heldInMemoryPixels } from './holdPhoto.ts';

/** Share of the width that stays white between the two. */
const gutterShare = 0.02;

/**
 * Paints a photo twice and writes both beside one another, at full size.
 * @throws FileError naming the photo or the output; also where the photo is too large to be held twice
 */
export async function paintSideBySide(
  engine: Engine,
  photoPath: string,
  pair: readonly [Parameters, Parameters] | readonly Parameters[],
  { out, printLongEdgeMm }: { out: string; printLongEdgeMm: number },
): Promise<{ path: string; widthPx: number; heightPx: number }> {
  const format = outputFormatFor(out);
  await refuseOverwritingOriginal(photoPath, out);
  const size = await readPhotoSize(photoPath);
  if (size.widthPx * size.heightPx > heldInMemoryPixels / 2)
    throw new FileError(
      photoPath,
      'is too large to be painted twice into one picture',
      'Paint the two states each to a file of its own.',
    );
  const photo = await readPhoto(photoPath);
  await assertWritable(out);
  const depth = outputDepth(format, photo.depth);
  const { widthPx, heightPx, channels, iccProfile } = photo;
  const gutterPx = Math.max(2, Math.round(widthPx * gutterShare));
  const wholeWidthPx = 2 * widthPx + gutterPx;
  const samples = wholeWidthPx * heightPx * channels;
  const pixels = depth === 8 ? new Uint8Array(samples).fill(255) : new Uint16Array(samples).fill(65535);
  const held = await engine.open(photo);
  try {
    for (const [index, parameters] of pair.entries()) {
      const painted = await engine.paintPicture(held, parameters, { depth, printLongEdgeMm });
      try {
        const rowSamples = widthPx * channels;
        const left = index * (widthPx + gutterPx) * channels;
        for (let y = 0; y < heightPx; y++)
          pixels.set(
            painted.pixels.subarray(y * rowSamples, (y + 1) * rowSamples),
            y * wholeWidthPx * channels + left,
          );
      } finally {
        painted.release();
      }
    }
  } finally {
    held.close();
  }
  await writePicture(out, { widthPx: wholeWidthPx, heightPx, channels, pixels, iccProfile, format });
  return { path: out, widthPx: wholeWidthPx, heightPx };
}
