import { srgbProfile } from '../../core/colour/matrixProfile.ts';
import { tableOfGamut } from '../colour/colourThread.ts';
import { FileError } from '../files/fileError.ts';
import { type PrintOrder, readPrintProfile } from '../painting/printOrder.ts';
import { profileOfPainting } from './readScreenTable.ts';

/**
 * What a printing condition makes of a photo's colours.
 * @returns a table for `markOutside`; null where the file keeps the photo's own colours
 * @throws FileError where the profile cannot be read or used
 */
export async function readGamutTable(
  photoPath: string,
  profile: NonNullable<PrintOrder['profile']>,
): Promise<Uint16Array | null> {
  if (profile === 'keep') return null;
  const own = (await profileOfPainting(photoPath)) ?? srgbProfile();
  const print = await readPrintProfile(profile, own);
  if (Buffer.compare(own, print.profile) === 0) return null;
  return tableOfGamut(own, print.profile).catch((failure) => {
    if (!(failure instanceof RangeError) || typeof profile !== 'object') throw failure;
    throw new FileError(profile.file, 'cannot be printed for', 'Choose another ICC profile for RGB or CMYK.');
  });
}
