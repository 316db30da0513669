import { wideProfile } from '../../core/colour/matrixProfile.ts';
import type { ColourPlan } from './colourPlan.ts';
import { FileError } from './fileError.ts';

/**
 * Brings stored pixels through a profile to wide RGB of 16 bits.
 * @param stored interleaved: four inks, or RGB with or without alpha
 * @throws FileError naming the photo where its profile cannot be used
 */
export async function throughProfile(
  path: string,
  stored: { pixels: Uint8Array | Uint16Array; widthPx: number; heightPx: number; channels: 3 | 4 },
  { profile, space }: NonNullable<ColourPlan['through']>,
  signal?: AbortSignal,
): Promise<{ pixels: Uint16Array; widthPx: number; heightPx: number; channels: 3 | 4 }> {
  const { pixels, widthPx, heightPx, channels } = stored;
  const hasAlpha = space === 'RGB' && channels === 4;
  // Few photos need it: the thread and its engine are not loaded before.
  const { finishOnThread } = await import('../colour/colourThread.ts');
  const conversion = {
    from: profile,
    to: wideProfile(),
    intent: 'relative',
    blackPointCompensation: false,
  } as const;
  const place = { widthPx, heightPx, bleedPx: 0, trimMarks: null };
  try {
    const made = await finishOnThread({ ...place, pixels, hasAlpha, space, conversion, depth: 16 }, signal);
    return { pixels: made.pixels as Uint16Array, widthPx, heightPx, channels: hasAlpha ? 4 : 3 };
  } catch (failure) {
    if (!(failure instanceof RangeError)) throw failure;
    throw new FileError(
      path,
      `its colour profile cannot be used (${failure.message})`,
      'Export it as sRGB.',
      {
        cause: failure,
      },
    );
  }
}
