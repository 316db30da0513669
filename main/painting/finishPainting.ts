import { finishOnThread } from '../colour/colourThread.ts';
import { FileError } from '../files/fileError.ts';
import { isOpaque } from '../files/opaque.ts';
import { SpilledPixels } from '../files/spilledPixels.ts';
import type { FinishPlan } from './printOrder.ts';

/** Pixels that are ready to be encoded, with what describes them. */
export interface FinishedPicture {
  widthPx: number;
  heightPx: number;
  channels: 3 | 4;
  space: 'RGB' | 'CMYK';
  pixels: Uint8Array | Uint16Array | SpilledPixels;
}

/**
 * Brings painted pixels into the colours, size and depth of the file.
 * @throws FileError where transparency meets CMYK, or the profile cannot be used
 */
export async function finishPainting(
  out: string,
  painted: Omit<FinishedPicture, 'space'>,
  plan: FinishPlan,
  signal?: AbortSignal,
): Promise<FinishedPicture> {
  if (!plan.isNeeded) return { ...painted, space: 'RGB' };
  const { widthPx, heightPx, channels } = painted;
  // Conversions want the whole picture; of a very large one that is the price of asking for them.
  const whole =
    painted.pixels instanceof SpilledPixels
      ? await painted.pixels.samples(0, heightPx, signal)
      : painted.pixels;
  const isInked = plan.space === 'CMYK';
  if (isInked && !(await isOpaque({ ...painted, pixels: whole }, signal)))
    throw new FileError(
      out,
      'the picture is partly transparent, which CMYK cannot hold',
      'Choose an RGB profile.',
    );
  const hasAlpha = channels === 4 && !isInked;
  const pixels = channels === 4 && isInked ? withoutAlpha(whole) : whole;
  const { conversion, bleedPx, trimMarks, depth } = plan;
  try {
    const finished = await finishOnThread(
      { widthPx, heightPx, pixels, hasAlpha, space: 'RGB', conversion, bleedPx, trimMarks, depth },
      signal,
    );
    return {
      widthPx: finished.widthPx,
      heightPx: finished.heightPx,
      channels: isInked || finished.hasAlpha ? 4 : 3,
      space: isInked ? 'CMYK' : 'RGB',
      pixels: finished.pixels,
    };
  } catch (failure) {
    if (!(failure instanceof RangeError)) throw failure;
    throw new FileError(
      out,
      `the colour profile cannot be used (${failure.message})`,
      'Choose another profile.',
      {
        cause: failure,
      },
    );
  }
}

function withoutAlpha(pixels: Uint8Array | Uint16Array): Uint8Array | Uint16Array {
  const count = pixels.length / 4;
  const bare = new (pixels.constructor as Uint16ArrayConstructor)(count * 3);
  for (let i = 0; i < count; i++) for (let c = 0; c < 3; c++) bare[i * 3 + c] = pixels[i * 4 + c];
  return bare;
}
