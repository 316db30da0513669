import type { PrintPlan } from '../../core/print/printPlan.ts';
import { sharp } from '../files/imageLibrary.ts';
import { unlessAborted } from '../files/interruption.ts';
import type { PhotoFile } from '../files/photoFile.ts';
import { depthOf, samplesOf } from '../files/pictureRows.ts';
import type { SpilledPixels } from '../files/spilledPixels.ts';
import { SpillFile } from '../files/spillFile.ts';
import type { SpilledPhoto } from '../files/spillPhoto.ts';
import { PictureSpill } from '../files/spillPicture.ts';
import { uncompressedPixels } from '../files/uncompressedPixels.ts';
import { narrowed, widened } from './sampleWidths.ts';

/** Samples copied at a time. */
const bandSamples = 4 * 2 ** 20;

/**
 * Crops and resamples a photo from file to file, with the pixels that `prepareForPrint` would give in memory.
 * @returns pixels in a file, which are the caller's to discard; the photo's own stay as they are
 * @throws FileError where the temporary folder takes no more
 */
export async function prepareSpilled(
  photo: PhotoFile | SpilledPhoto,
  { crop, widthPx, heightPx }: PrintPlan,
  signal?: AbortSignal,
): Promise<SpilledPixels> {
  const isResampled = widthPx !== crop.widthPx || heightPx !== crop.heightPx;
  const isWidened = isResampled && photo.channels === 4 && depthOf(photo) === 8;
  const cut = await cropped(photo, crop, isWidened, signal);
  if (!isResampled) return cut;
  try {
    const sized = await resampled(photo.path, cut, { widthPx, heightPx }, signal);
    return isWidened ? await narrowedRows(sized, signal) : sized;
  } finally {
    cut.discard();
  }
}

async function cropped(
  photo: PhotoFile | SpilledPhoto,
  crop: PrintPlan['crop'],
  isWidened: boolean,
  signal?: AbortSignal,
): Promise<SpilledPixels> {
  const { channels } = photo;
  const { widthPx, heightPx } = crop;
  const bytesPerSample = isWidened || depthOf(photo) === 16 ? 2 : 1;
  const spill = await PictureSpill.begin({ widthPx, heightPx, channels, bytesPerSample });
  try {
    const rows = Math.max(1, Math.floor(bandSamples / (photo.widthPx * channels)));
    for (let top = 0; top < heightPx; top += rows) {
      const bottom = Math.min(heightPx, top + rows);
      const band = await samplesOf(photo, crop.yPx + top, crop.yPx + bottom, signal);
      const kept = band.slice(0, (bottom - top) * widthPx * channels);
      for (let y = 0; y < bottom - top; y++) {
        const from = (y * photo.widthPx + crop.xPx) * channels;
        kept.set(band.subarray(from, from + widthPx * channels), y * widthPx * channels);
      }
      await spill.append(isWidened ? widened(kept) : kept, signal);
    }
    return await spill.finish();
  } catch (failure) {
    spill.discard();
    throw failure;
  }
}

async function resampled(
  path: string,
  cut: SpilledPixels,
  { widthPx, heightPx }: { widthPx: number; heightPx: number },
  signal?: AbortSignal,
): Promise<SpilledPixels> {
  const file = await SpillFile.create('.v');
  let work: Promise<unknown> = Promise.resolve();
  try {
    const source = sharp(cut.file.path, { limitInputPixels: false, sequentialRead: true, ignoreIcc: true });
    const sized = source.resize(widthPx, heightPx, { fit: 'fill', kernel: 'lanczos3' });
    work = (cut.bytesPerSample === 2 ? sized.toColourspace('rgb16') : sized).toFile(file.path);
    await unlessAborted(work, signal);
    return await uncompressedPixels(path, file);
  } catch (failure) {
    file.discardBehind(work);
    throw failure;
  }
}

async function narrowedRows(wide: SpilledPixels, signal?: AbortSignal): Promise<SpilledPixels> {
  const { widthPx, heightPx, channels } = wide;
  const spill = await PictureSpill.begin({ widthPx, heightPx, channels, bytesPerSample: 1 });
  try {
    const rows = Math.max(1, Math.floor(bandSamples / (widthPx * channels)));
    for (let top = 0; top < heightPx; top += rows) {
      const band = await wide.samples(top, Math.min(rows, heightPx - top), signal);
      await spill.append(narrowed(band), signal);
    }
    return await spill.finish();
  } catch (failure) {
    spill.discard();
    throw failure;
  } finally {
    wide.discard();
  }
}
