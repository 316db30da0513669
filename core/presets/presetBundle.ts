import { z } from 'zod';
import { duplicatePreset, haveOneOrigin, mergePresets, type Preset, presetSchema } from './preset.ts';
import { freeName } from './presetName.ts';
import { threadFaults } from './thread.ts';

export const presetBundleSchema = z
  .looseObject({
    format: z.literal('oxgall-presets'),
    schema: z.literal(1),
    presets: z.array(presetSchema).min(1),
  })
  .meta({ title: 'Oxgall presets', description: 'Any number of presets in one file, to hand on.' });

/** Presets in one file, to hand on. */
export type PresetBundle = z.infer<typeof presetBundleSchema>;

/** Presets as one file. */
export function bundlePresets(presets: Preset[]): PresetBundle {
  return { format: 'oxgall-presets', schema: 1, presets };
}

/** What becomes of one imported preset. */
export interface Imported {
  preset: Preset;
  /** `new`; `merged` into the one of that name; `renamed` because that name is another preset's. */
  how: 'new' | 'merged' | 'renamed';
}

/**
 * Brings a preset from elsewhere among ours.
 * @param incoming not modified
 * @param known our presets, built-in ones included; none is modified or replaced by something smaller
 * @param isReadOnly whether one of ours cannot take states
 * @throws RangeError where a state of it is not what its id says
 */
export function importPreset(
  incoming: Preset,
  known: readonly Preset[],
  isReadOnly: (preset: Preset) => boolean,
): Imported {
  const [fault] = threadFaults(incoming.states);
  if (fault)
    throw new RangeError(`Expected an unaltered preset, received ${incoming.title}: ${fault.problem}`);
  const namesake = known.find((preset) => preset.name === incoming.name);
  if (!namesake) return { preset: incoming, how: 'new' };
  if (haveOneOrigin(namesake, incoming) && !isReadOnly(namesake))
    return { preset: mergePresets(namesake, incoming), how: 'merged' };
  const name = freeName(incoming.name, new Set(known.map((preset) => preset.name)));
  const title = freeTitle(incoming.title, new Set(known.map((preset) => preset.title)));
  return { preset: duplicatePreset(incoming, name, title), how: 'renamed' };
}

/** A title nobody has yet: the wanted one, or `… 2`, `… 3`. */
export function freeTitle(wanted: string, taken: ReadonlySet<string>): string {
  if (!taken.has(wanted)) return wanted;
  for (let count = 2; ; count++) if (!taken.has(`${wanted} ${count}`)) return `${wanted} ${count}`;
}
