import { readFile, stat } from 'node:fs/promises';
import { fullParameters } from '../../core/presets/parametersSchema.ts';
import { latestState } from '../../core/presets/preset.ts';
import { FileError } from '../files/fileError.ts';
import { assertWritable } from '../files/outputPath.ts';
import { fileErrorFrom } from '../files/systemErrors.ts';
import { replaceText } from '../store/versionedFile.ts';
import { commandStores } from './photoRecipe.ts';
import { readWords } from './readWords.ts';
import { type Command, exitCode, UsageError } from './usage.ts';

const options = { out: { type: 'string' }, json: { type: 'boolean' } } as const;

export const presetsCommand: Command = {
  name: 'presets',
  usage: 'presets [export NAME… --out FILE | import FILE] [--json]',
  summary: 'Lists the presets; writes some into one file to hand on, or takes in such a file.',
  options: [
    ['--out FILE', 'Where the exported presets go, with all their states.'],
    ['--json', 'Prints the list as JSON.'],
  ],
  async run(words) {
    const { values, positionals } = readWords(words, options, {
      least: 0,
      most: 500,
      what: 'export with names, import with a file, or no further words',
    });
    const [action, ...names] = positionals;
    const isJson = values.json === true;
    if (values.out !== undefined && action !== 'export')
      throw new UsageError('Expected --out only together with presets export');
    if (action === undefined) return list(isJson);
    if (action === 'export') return exportPresets(names, values.out, isJson);
    if (action === 'import') return importPresets(names, isJson);
    throw new UsageError(`Expected export or import after presets, received ${action}`);
  },
};

async function list(isJson: boolean): Promise<number> {
  const { presets, problems } = await readPresets();
  for (const problem of problems) process.stderr.write(`${problem}\n`);
  if (isJson) {
    process.stdout.write(`${JSON.stringify(presets, null, 2)}\n`);
    return exitCode.done;
  }
  const width = Math.max(...presets.map((preset) => preset.name.length));
  for (const { name, title, summary, isBuiltIn, states } of presets) {
    const own = `your own, ${states} ${states === 1 ? 'state' : 'states'}`;
    const words = isBuiltIn ? summary : [title, summary].filter(Boolean).join(': ');
    process.stdout.write(`${name.padEnd(width)}  ${words}${isBuiltIn ? '' : ` (${own})`}\n`);
  }
  return exitCode.done;
}

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

async function exportPresets(names: string[], out: string | undefined, isJson: boolean): Promise<number> {
  if (names.length === 0) throw new UsageError('Expected the names of presets to export, received none');
  if (out === undefined) throw new UsageError('Expected --out with a file for the exported presets');
  const text = await commandStores().presets.exportText(names);
  if (await stat(out).catch(() => null))
    throw new FileError(out, 'is there already', 'Choose another name, or move it away.');
  await assertWritable(out);
  await replaceText(out, text);
  if (isJson) process.stdout.write(`${JSON.stringify({ file: out, presets: names }, null, 2)}\n`);
  else process.stdout.write(`${out}  ${names.join(', ')}\n`);
  return exitCode.done;
}

async function importPresets(files: string[], isJson: boolean): Promise<number> {
  if (files.length !== 1) throw new UsageError(`Expected one file to import, received ${files.length}`);
  const [file] = files;
  const text = await readFile(file, 'utf8').catch((failure) => {
    throw fileErrorFrom(file, failure);
  });
  const imported = await commandStores().presets.importText(text, file);
  const presets = imported.map(({ preset: { name, title, states } }) => ({
    name,
    title,
    states: states.length,
  }));
  if (isJson) process.stdout.write(`${JSON.stringify({ file, presets }, null, 2)}\n`);
  else
    for (const { name, title, states } of presets)
      process.stdout.write(`${name}  ${title}, ${states} ${states === 1 ? 'state' : 'states'}\n`);
  return exitCode.done;
}
