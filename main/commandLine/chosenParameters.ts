import { parseParameters } from '../../core/parameters/parse.ts';
import type { Parameters } from '../../core/parameters/table.ts';
import { loadBuiltInPresets } from '../store/builtInPresets.ts';
import { UsageError } from './usage.ts';

/** The preset that is used where none is named. */
export const defaultPresetName = 'low-water';

/**
 * The parameters that `--preset` and `--set` ask for.
 * @param settings `KEY=VALUE` texts, later ones winning
 * @throws UsageError for an unknown preset or a setting without `=`; ParameterError for a key or value
 */
export async function chosenParameters(
  presetName: string | undefined,
  settings: readonly string[],
): Promise<{ preset: string; parameters: Parameters }> {
  const presets = await loadBuiltInPresets();
  const name = presetName ?? defaultPresetName;
  const preset = presets.find((candidate) => candidate.name === name || candidate.title === name);
  if (!preset) {
    const names = presets.map((candidate) => candidate.name).join(', ');
    throw new UsageError(`Expected one of the presets ${names} for --preset, received ${name}`);
  }
  const values: Record<string, string> = {};
  for (const setting of settings) {
    const at = setting.indexOf('=');
    if (at < 1) throw new UsageError(`Expected KEY=VALUE for --set, received ${setting}`);
    values[setting.slice(0, at)] = setting.slice(at + 1);
  }
  return { preset: preset.name, parameters: parseParameters(values, preset.parameters) };
}
