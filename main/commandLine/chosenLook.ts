import { parseParameters } from '../../core/parameters/parse.ts';
import type { Parameters } from '../../core/parameters/table.ts';
import { fullParameters } from '../../core/presets/parametersSchema.ts';
import { latestState, type Preset } from '../../core/presets/preset.ts';
import type { State } from '../../core/presets/state.ts';
import { FileError } from '../files/fileError.ts';
import type { PresetStore } from '../store/presetStore.ts';
import { stateOf } from './photoRecipe.ts';
import { UsageError } from './usage.ts';

/** The preset that is used where none is named. */
export const defaultPresetName = 'low-water';

/** A preset at one of its states, with what `--set` changes of it. */
export interface ChosenLook {
  preset: Preset;
  state: State;
  parameters: Parameters;
}

/**
 * What `--preset NAME[@STATE]` and `--set` ask for.
 * @param named built-in or of one's own, by name or title; the newest state unless `@N` or `@III` follows
 * @param settings `KEY=VALUE` texts, later ones winning
 * @throws UsageError for an unknown preset or state, or a setting without `=`; ParameterError for a key or value
 */
export async function chosenLook(
  presets: PresetStore,
  named: string | undefined,
  settings: readonly string[],
): Promise<ChosenLook> {
  const text = named ?? defaultPresetName;
  const at = text.lastIndexOf('@');
  const name = at > 0 ? text.slice(0, at) : text;
  const preset = await findPreset(presets, name);
  const state = at > 0 ? stateOf(preset, text.slice(at + 1), '--preset') : latestState(preset);
  const parameters = parseParameters(readSettings(settings), fullParameters(state.parameters));
  return { preset, state, parameters };
}

async function findPreset(presets: PresetStore, name: string): Promise<Preset> {
  const shelf = await presets.list();
  const byTitle = shelf.presets.find(({ preset }) => preset.title === name);
  try {
    return (byTitle ?? (await presets.get(name))).preset;
  } catch (failure) {
    if (!(failure instanceof FileError)) throw failure;
    const names = shelf.presets.map(({ preset }) => preset.name).join(', ');
    throw new UsageError(`Expected one of the presets ${names} for --preset, received ${name}`);
  }
}

/**
 * @param settings `KEY=VALUE` texts, later ones winning
 * @throws UsageError for a text without `=`
 */
export function readSettings(settings: readonly string[]): Record<string, string> {
  const values: Record<string, string> = {};
  for (const setting of settings) {
    const at = setting.indexOf('=');
    if (at < 1) throw new UsageError(`Expected KEY=VALUE for --set, received ${setting}`);
    values[setting.slice(0, at)] = setting.slice(at + 1);
  }
  return values;
}
