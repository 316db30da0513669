import { engineVersion } from '../../core/engineVersion.ts';
import { toRoman } from '../../core/presets/roman.ts';

/** What a file says it was painted with, whatever it was painted by. */
export const paintedWith = `Oxgall, engine ${engineVersion}`;

/** What a file says it was painted by, in the fields that EXIF has for it. */
export function describePainting(
  presetTitle: string,
  stateNumber: number,
): { description: string; software: string } {
  return {
    description: `Painted by Oxgall: ${presetTitle}, State ${toRoman(stateNumber)}`,
    software: paintedWith,
  };
}
