import { describeRange } from '../../core/parameters/parse.ts';
import { type Parameter, parameterKeys, parameterTable } from '../../core/parameters/table.ts';
import { readWords } from './readWords.ts';
import { type Command, exitCode } from './usage.ts';

const options = { json: { type: 'boolean' } } as const;
const jsonOption = ['--json', 'Prints the list as JSON.'] as const;
const nothing = { least: 0, most: 0, what: 'no further words' };

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
