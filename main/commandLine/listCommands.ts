import { describeRange } from '../../core/parameters/parse.ts';
import { type Parameter, parameterKeys, parameterTable } from '../../core/parameters/table.ts';
import { fullParameters } from '../../core/presets/parametersSchema.ts';
import { latestState } from '../../core/presets/preset.ts';
import { commandStores } from './photoRecipe.ts';
import { readWords } from './readWords.ts';
import { type Command, exitCode } from './usage.ts';

const options = { json: { type: 'boolean' } } as const;
const jsonOption = ['--json', 'Prints the list as JSON.'] as const;
const nothing = { least: 0, most: 0, what: 'no further words' };

export const presetsCommand: Command = {
  name: 'presets',
  usage: 'presets [--json]',
  summary: 'Lists the presets.',
  options: [jsonOption],
  async run(words) {
    const { values } = readWords(words, options, nothing);
    const { presets, problems } = await readPresets();
    if (values.json) {
      process.stdout.write(`${JSON.stringify(presets, null, 2)}\n`);
      return exitCode.done;
    }
    const width = Math.max(...presets.map((preset) => preset.name.length));
    for (const preset of presets)
      process.stdout.write(
        `${preset.name.padEnd(width)}  ${preset.summary}${preset.isBuiltIn ? '' : ` (your own, ${preset.states} states)`}\n`,
      );
    for (const problem of problems) process.stderr.write(`${problem}\n`);
    return exitCode.done;
  },
};

/** Built-in presets first, then one's own, each at its newest state. */
async function readPresets() {
  const { presets, problems } = await commandStores().presets.list();
  return {
    presets: presets.map(({ preset, isBuiltIn }) => ({
      name: preset.name,
      title: preset.title,
      summary: preset.summary,
      isBuiltIn,
      states: preset.states.length,
      parameters: fullParameters(latestState(preset).parameters),
    })),
    problems,
  };
}

export const paramsCommand: Command = {
  name: 'params',
  usage: 'params [--json]',
  summary: 'Lists the parameters with their meaning, range and default.',
  options: [jsonOption],
  async run(words) {
    const { values } = readWords(words, options, nothing);
    if (values.json) {
      process.stdout.write(`${JSON.stringify(parameterTable, null, 2)}\n`);
      return exitCode.done;
    }
    for (const key of parameterKeys) {
      const parameter: Parameter = parameterTable[key];
      process.stdout.write(
        `${key} (${parameter.default})\n  ${parameter.help}\n  ${describeRange(parameter)}\n`,
      );
    }
    return exitCode.done;
  },
};
