import { differences } from '../../core/presets/differences.ts';
import { fullParameters } from '../../core/presets/parametersSchema.ts';
import { toRoman } from '../../core/presets/roman.ts';
import type { State } from '../../core/presets/state.ts';
import { createEngine } from '../engine/paintEngine.ts';
import { commandStores, historyFor, readRecipe, requireRecipe, stateOf } from './photoRecipe.ts';
import { readWhole, readWords } from './readWords.ts';
import { type Command, exitCode, UsageError } from './usage.ts';

const options = {
  states: { type: 'string' },
  preset: { type: 'string' },
  out: { type: 'string' },
  workers: { type: 'string' },
  json: { type: 'boolean' },
} as const;

export const compareCommand: Command = {
  name: 'compare',
  usage: 'compare PHOTO --states A,B [--preset NAME] [--out FILE]',
  summary: 'Shows what differs between two states of a photo, as a table and as a picture.',
  options: [
    ['--states A,B', 'Their numbers, such as 1,3 or I,III.'],
    ['--preset NAME', 'Of another preset used on this photo; the one on the easel unless given.'],
    ['--out FILE', 'Paints both beside one another into this file: .png, .jpg, .tif or .webp.'],
    ['--workers N', 'Worker threads; one for each processor unless given.'],
    ['--json', 'Prints one JSON object.'],
  ],
  run: compare,
};

async function compare(words: string[]): Promise<number> {
  const { values, positionals } = readWords(words, options, { least: 1, most: 1, what: 'one photo' });
  const [photoPath] = positionals;
  const numbers = (values.states ?? '').split(',').filter((text) => text.trim() !== '');
  if (numbers.length !== 2)
    throw new UsageError(`Expected two states such as 1,3 for --states, received ${values.states ?? 'none'}`);
  const read = await readRecipe(commandStores(), photoPath);
  const recipe = requireRecipe(photoPath, read);
  const history = historyFor(recipe, values.preset);
  const pair = numbers.map((text) => stateOf(history, text, '--states')) as [State, State];
  const [before, after] = pair.map((state) => fullParameters(state.parameters));
  const rows = differences(before, after);
  const picture = values.out === undefined ? null : await paintBoth(values.out);
  if (values.json) {
    const report = {
      photo: photoPath,
      recipe: read.path,
      preset: history.preset,
      states: pair.map(({ number, id }) => ({ number, id })),
      differences: rows.map(({ key, label, before: from, after: to }) => ({
        key,
        label,
        before: from,
        after: to,
      })),
      picture,
      remarks: read.remarks,
    };
    process.stdout.write(`${JSON.stringify(report, null, 2)}\n`);
    return exitCode.done;
  }
  for (const remark of read.remarks) process.stderr.write(`${remark}\n`);
  printTable(pair, rows);
  if (picture) process.stdout.write(`${picture.path}  ${picture.widthPx} × ${picture.heightPx} px\n`);
  return exitCode.done;

  async function paintBoth(out: string) {
    const { paintSideBySide } = await import('../painting/paintSideBySide.ts');
    const workers = values.workers === undefined ? undefined : readWhole(values.workers, '--workers', 1, 64);
    const engine = await createEngine({ workers });
    try {
      const { printLongEdgeMm } = recipe.work.output;
      return await paintSideBySide(engine, photoPath, [before, after], { out, printLongEdgeMm });
    } finally {
      await engine.close();
    }
  }
}

function printTable([one, other]: [State, State], rows: ReturnType<typeof differences>): void {
  const [left, right] = [one, other].map(({ number }) => `State ${toRoman(number)}`);
  if (rows.length === 0) {
    process.stdout.write(`${left} and ${right} are painted alike\n`);
    return;
  }
  const table = [
    ['', left, right],
    ...rows.map(({ label, beforeText, afterText }) => [label, beforeText, afterText]),
  ];
  const widths = [0, 1].map((column) => Math.max(...table.map((row) => row[column].length)));
  for (const [label, from, to] of table)
    process.stdout.write(`${label.padEnd(widths[0])}  ${from.padEnd(widths[1])}  ${to}\n`);
}
