import { engineVersion } from '../../core/engineVersion.ts';
import type { LookName } from '../../core/presets/lookName.ts';
import { toRoman } from '../../core/presets/roman.ts';

/** What a file says it was painted with, whatever it was painted by. */
export const paintedWith = `Oxgall, engine ${engineVersion}`;

/** What a file says it was painted by, in the fields that EXIF has for it. */
export function describePainting({ title, stateNumber }: Pick<LookName, 'title' | 'stateNumber'>): {
  description: string;
  software: string;
} {
  const state = stateNumber === null ? '' : `, State ${toRoman(stateNumber)}`;
  return { description: `Painted by Oxgall: ${title}${state}`, software: paintedWith };
}
