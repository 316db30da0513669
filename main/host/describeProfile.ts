import { srgbProfile } from '../../core/colour/matrixProfile.ts';
import { profileName } from '../../core/colour/profileName.ts';
import { type PrintOrder, readPrintProfile } from '../painting/printOrder.ts';
import type { ProfileFacts } from './api/hostCommands.ts';
import { profileOfPainting } from './readScreenTable.ts';

/**
 * What a file for a profile would be: its inks, and whether a photo's painting has to be converted for it.
 * @throws FileError where the profile cannot be read or is none for printing
 */
export async function describeProfile(
  photoPath: string,
  profile: NonNullable<PrintOrder['profile']>,
): Promise<ProfileFacts> {
  const own = (await profileOfPainting(photoPath)) ?? srgbProfile();
  const print = await readPrintProfile(profile, own);
  return {
    name: profileName(print.profile),
    inks: print.space,
    isConverted: Buffer.compare(own, print.profile) !== 0,
  };
}
