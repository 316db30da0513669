import type { Sharp } from 'sharp';
import { type CropFrame, planPrint } from '../../core/print/printPlan.ts';
import { FileError } from '../files/fileError.ts';
import { sharp } from '../files/imageLibrary.ts';
import { unlessAborted } from '../files/interruption.ts';
import type { PhotoFile } from '../files/photoFile.ts';
import { SpilledPixels } from '../files/spilledPixels.ts';
import type { SpilledPhoto } from '../files/spillPhoto.ts';

/**
 * Crops a photo and brings it to the print's own pixels, before it is painted.
 * @param order `ppi` null leaves its pixels as they are
 * @returns the photo itself where there is nothing to do
 * @throws FileError for a very large photo, whose pixels are in a file
 */
export async function prepareForPrint(
  photo: PhotoFile | SpilledPhoto,
  order: { printLongEdgeMm: number; ppi?: number; crop?: CropFrame },
  signal?: AbortSignal,
): Promise<PhotoFile | SpilledPhoto> {
  const { printLongEdgeMm, ppi = null, crop: frame = null } = order;
  const plan = planPrint(photo, { printLongEdgeMm, ppi, crop: frame });
  const { crop, widthPx, heightPx } = plan;
  if (widthPx === photo.widthPx && heightPx === photo.heightPx && crop.widthPx === photo.widthPx)
    return photo;
  const { pixels, channels } = photo;
  if (pixels instanceof SpilledPixels)
    throw new FileError(
      photo.path,
      'is too large to be cropped or resampled on the way',
      'Leave out the crop and the pixels per inch, or resample it beforehand.',
    );
  const cut = sharp(pixels, {
    raw: { width: photo.widthPx, height: photo.heightPx, channels },
    limitInputPixels: false,
  }).extract({ left: crop.xPx, top: crop.yPx, width: crop.widthPx, height: crop.heightPx });
  const isResampled = widthPx !== crop.widthPx || heightPx !== crop.heightPx;
  // Alpha is multiplied in while resampling and taken out again by the library: no fringes at edges. In 8 bits that
  // darkens faint colours by up to a tenth, so it is done in 16.
  const isWidened = isResampled && channels === 4 && pixels instanceof Uint8Array;
  const source = isWidened ? await widened(cut, crop, signal) : cut;
  const is16Bit = isWidened || pixels instanceof Uint16Array;
  const sized = isResampled ? source.resize(widthPx, heightPx, { fit: 'fill', kernel: 'lanczos3' }) : source;
  const image = is16Bit ? sized.toColourspace('rgb16') : sized;
  const raw = is16Bit ? image.raw({ depth: 'ushort' }) : image.raw();
  const data = await unlessAborted(raw.toBuffer(), signal);
  // A buffer may begin at an odd byte of its memory.
  const bytes = data.byteOffset % 2 === 0 ? data : Buffer.from(data);
  const made = is16Bit
    ? new Uint16Array(bytes.buffer, bytes.byteOffset, bytes.byteLength / 2)
    : new Uint8Array(bytes.buffer, bytes.byteOffset, bytes.byteLength);
  return { ...photo, widthPx, heightPx, pixels: isWidened ? narrowed(made) : made };
}

/** The same picture with 16 bits a sample. */
async function widened(
  cut: Sharp,
  { widthPx, heightPx }: { widthPx: number; heightPx: number },
  signal?: AbortSignal,
): Promise<Sharp> {
  const data = await unlessAborted(cut.raw().toBuffer(), signal);
  const wide = new Uint16Array(data.length);
  for (let i = 0; i < data.length; i++) wide[i] = data[i] * 257;
  return sharp(wide, { raw: { width: widthPx, height: heightPx, channels: 4 }, limitInputPixels: false });
}

function narrowed(wide: Uint8Array | Uint16Array): Uint8Array {
  const narrow = new Uint8Array(wide.length);
  for (let i = 0; i < wide.length; i++) narrow[i] = Math.round(wide[i] / 257);
  return narrow;
}
