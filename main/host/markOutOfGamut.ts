import { srgbProfile } from '../../core/colour/matrixProfile.ts';
import { maskOutOfGamut } from '../colour/colourThread.ts';
import { type PrintOrder, readPrintProfile } from '../painting/printOrder.ts';
import { profileOfPainting } from './readScreenTable.ts';

/**
 * Marks what a printing condition cannot show of a small painted picture.
 * @param rgba as composed, in the photo's own colours; not modified
 * @returns one byte a pixel: 1 outside, 0 inside; all inside where the file keeps the photo's colours
 * @throws FileError where the profile cannot be read
 */
export async function markOutOfGamut(
  photoPath: string,
  rgba: Uint8Array,
  profile: NonNullable<PrintOrder['profile']>,
): Promise<Uint8Array> {
  const count = rgba.length / 4;
  if (profile === 'keep') return new Uint8Array(count);
  const own = (await profileOfPainting(photoPath)) ?? srgbProfile();
  const print = await readPrintProfile(profile, own);
  const rgb = new Uint16Array(count * 3);
  for (let i = 0; i < count; i++) for (let c = 0; c < 3; c++) rgb[i * 3 + c] = rgba[i * 4 + c] * 257;
  return maskOutOfGamut(rgb, own, print.profile);
}
