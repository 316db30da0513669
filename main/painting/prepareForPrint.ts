import type { Sharp } from 'sharp';
import { type CropFrame, keepsPixels, type PrintPlan, planPrint } from '../../core/print/printPlan.ts';
import { FileError } from '../files/fileError.ts';
import { sharp } from '../files/imageLibrary.ts';
import { unlessAborted } from '../files/interruption.ts';
import type { PhotoFile } from '../files/photoFile.ts';
import { pixelLimit } from '../files/photoHeader.ts';
import { SpilledPixels } from '../files/spilledPixels.ts';
import type { SpilledPhoto } from '../files/spillPhoto.ts';
import { heldInMemoryPixels, letGo } from './holdPhoto.ts';
import { prepareSpilled } from './prepareSpilled.ts';
import { assertRoomToUnpack } from './room.ts';
import { narrowed, widened } from './sampleWidths.ts';

/**
 * Crops a photo and brings it to the print's own pixels, before it is painted.
 * @param order `ppi` null leaves its pixels as they are
 * @returns the photo itself where there is nothing to do
 * @param inMemoryPixels prints of more pixels go to a file, whatever the photo is in; smaller ones to memory
 * @throws FileError where there is no room for the print, or it would have too many pixels
 */
export async function prepareForPrint(
  photo: PhotoFile | SpilledPhoto,
  order: { printLongEdgeMm: number; ppi?: number; crop?: CropFrame },
  signal?: AbortSignal,
  inMemoryPixels = heldInMemoryPixels,
): Promise<PhotoFile | SpilledPhoto> {
  const { printLongEdgeMm, ppi = null, crop: frame = null } = order;
  const plan = planPrint(photo, { printLongEdgeMm, ppi, crop: frame });
  const { widthPx, heightPx } = plan;
  if (keepsPixels(photo, plan)) return photo;
  if (widthPx * heightPx > pixelLimit)
    throw new FileError(
      photo.path,
      `would have ${Math.round((widthPx * heightPx) / 1e6)} megapixels on paper, more than the ${pixelLimit / 1e6} that can be painted`,
      'Choose a smaller print or fewer pixels per inch.',
    );
  const { pixels } = photo;
  const isHeld = widthPx * heightPx <= inMemoryPixels;
  if (isHeld && !(pixels instanceof SpilledPixels)) return prepareHeld({ ...photo, pixels }, plan, signal);
  const hasAlpha = photo.channels === 4;
  if (!isHeld)
    await assertRoomToUnpack(photo.path, { ...photo, widthPx, heightPx, hasAlpha, isTurned: false });
  const prepared = await prepareSpilled(photo, plan, signal);
  letGo(photo);
  return isHeld ? heldAgain(photo, prepared, signal) : { ...photo, widthPx, heightPx, pixels: prepared };
}

async function prepareHeld(
  photo: PhotoFile,
  { crop, widthPx, heightPx }: PrintPlan,
  signal?: AbortSignal,
): Promise<PhotoFile> {
  const { pixels, channels } = photo;
  const cut = sharp(pixels, {
    raw: { width: photo.widthPx, height: photo.heightPx, channels },
    limitInputPixels: false,
  }).extract({ left: crop.xPx, top: crop.yPx, width: crop.widthPx, height: crop.heightPx });
  const isResampled = widthPx !== crop.widthPx || heightPx !== crop.heightPx;
  // Alpha is multiplied in while resampling and taken out again by the library: no fringes at edges. In 8 bits that
  // darkens faint colours by up to a tenth, so it is done in 16.
  const isWidened = isResampled && channels === 4 && pixels instanceof Uint8Array;
  const source = isWidened ? await widenedCut(cut, crop, signal) : cut;
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

/** A print that is small enough, read back from its file. */
async function heldAgain(
  photo: PhotoFile | SpilledPhoto,
  prepared: SpilledPixels,
  signal?: AbortSignal,
): Promise<PhotoFile> {
  const { widthPx, heightPx } = prepared;
  try {
    return { ...photo, widthPx, heightPx, pixels: await prepared.samples(0, heightPx, signal) };
  } finally {
    prepared.discard();
  }
}

/** The same picture with 16 bits a sample. */
async function widenedCut(
  cut: Sharp,
  { widthPx, heightPx }: { widthPx: number; heightPx: number },
  signal?: AbortSignal,
): Promise<Sharp> {
  const data = await unlessAborted(cut.raw().toBuffer(), signal);
  return sharp(widened(data), {
    raw: { width: widthPx, height: heightPx, channels: 4 },
    limitInputPixels: false,
  });
}
