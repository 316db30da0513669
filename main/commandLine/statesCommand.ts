import { stat } from 'node:fs/promises';
import { differences, sentenceOfDifferences } from '../../core/presets/differences.ts';
import { fullParameters } from '../../core/presets/parametersSchema.ts';
import { toRoman } from '../../core/presets/roman.ts';
import type { State } from '../../core/presets/state.ts';
import type { Margin } from '../../core/presets/thread.ts';
import type { Delivery } from '../../core/recipes/recipe.ts';
import { hasUnkeptChanges } from '../../core/recipes/recipeHistory.ts';
import { commandStores, readRecipe, requireRecipe } from './photoRecipe.ts';
import { readWords } from './readWords.ts';
import { type Command, exitCode } from './usage.ts';

const options = { json: { type: 'boolean' } } as const;

export const statesCommand: Command = {
  name: 'states',
  usage: 'states PHOTO|PRESET [--json]',
  summary: 'Lists the states of a photo, or those of a preset.',
  options: [['--json', 'Prints one JSON object.']],
  run: states,
};

/** One preset's thread, as it is listed. */
interface ListedThread {
  preset: string;
  title: string;
  states: ListedState[];
}

interface ListedState {
  number: number;
  numeral: string;
  id: string;
  /** On the easel of the photo now. */
  isPresent: boolean;
  note: string;
  /** Name of the branch that begins here; usually empty. */
  branch: string;
  time: string;
  engineVersion: string;
  follows: string | null;
  changed: string;
  deliveries: { path: string; sha256: string; time: string }[];
}

async function states(words: string[]): Promise<number> {
  const { values, positionals } = readWords(words, options, {
    least: 1,
    most: 1,
    what: 'one photo or the name of a preset',
  });
  const [named] = positionals;
  const isFile = await stat(named).then(
    (facts) => facts.isFile(),
    () => false,
  );
  const listed = isFile || /[\\/]|\.\w+$/.test(named) ? await ofPhoto(named) : await ofPreset(named);
  if (values.json) process.stdout.write(`${JSON.stringify(listed, null, 2)}\n`);
  else print(listed);
  return exitCode.done;
}

interface Listed {
  photo: string | null;
  recipe: string | null;
  /** The easel holds changes that no state holds. */
  hasUnkeptChanges: boolean;
  threads: ListedThread[];
  remarks: string[];
}

async function ofPhoto(photoPath: string): Promise<Listed> {
  const read = await readRecipe(commandStores(), photoPath);
  const recipe = requireRecipe(photoPath, read);
  const threads = recipe.histories.map((history) => ({
    preset: history.preset,
    title: history.title,
    states: listStates(history.states, {
      presentId: history.preset === recipe.work.preset ? recipe.work.stateId : null,
      margins: history.margins,
      deliveries: history.deliveries,
    }),
  }));
  return {
    photo: photoPath,
    recipe: read.path,
    hasUnkeptChanges: hasUnkeptChanges(recipe),
    threads,
    remarks: read.remarks,
  };
}

async function ofPreset(name: string): Promise<Listed> {
  const { preset, remarks } = await commandStores().presets.get(name);
  const listed = listStates(preset.states, { presentId: null, margins: preset.margins, deliveries: [] });
  const threads = [{ preset: preset.name, title: preset.title, states: listed }];
  return { photo: null, recipe: null, hasUnkeptChanges: false, threads, remarks };
}

function listStates(
  thread: readonly State[],
  of: { presentId: string | null; margins: Record<string, Margin>; deliveries: readonly Delivery[] },
): ListedState[] {
  const byId = new Map(thread.map((state) => [state.id, state]));
  return thread.map((state) => {
    const parent = state.parent === null ? undefined : byId.get(state.parent);
    return {
      number: state.number,
      numeral: toRoman(state.number),
      id: state.id,
      isPresent: state.id === of.presentId,
      note: of.margins[state.id]?.note ?? state.note,
      branch: of.margins[state.id]?.branch ?? '',
      time: state.time,
      engineVersion: state.engineVersion,
      follows: parent ? toRoman(parent.number) : null,
      changed: parent ? changeFrom(parent, state) : '',
      deliveries: of.deliveries
        .filter(({ stateId }) => stateId === state.id)
        .map(({ path, sha256, time }) => ({ path, sha256, time })),
    };
  });
}

/** A state that was returned to is a new one, equal to the old. */
function changeFrom(parent: State, state: State): string {
  const [before, after] = [parent, state].map(({ parameters }) => fullParameters(parameters));
  if (differences(before, after).length === 0) return `As State ${toRoman(parent.number)}.`;
  return sentenceOfDifferences(before, after);
}

function print({ threads, remarks, hasUnkeptChanges: isUnkept }: Listed): void {
  for (const remark of remarks) process.stderr.write(`${remark}\n`);
  for (const { title, states: listed } of threads) {
    process.stdout.write(`${title}\n`);
    const width = Math.max(...listed.map(({ numeral }) => numeral.length));
    for (const state of listed) {
      const mark = state.isPresent ? (isUnkept ? '*' : '•') : ' ';
      const time = state.time === '' ? 'as it comes' : state.time.replace('T', ' ').slice(0, 16);
      const branch = state.branch && `Branch ${state.branch}`;
      const words = [branch, state.note, state.changed].filter(Boolean).join('. ');
      process.stdout.write(`${mark} ${state.numeral.padEnd(width)}  ${time}  ${words}`.trimEnd());
      process.stdout.write('\n');
      for (const { path } of state.deliveries) process.stdout.write(`    delivered: ${path}\n`);
    }
  }
  if (isUnkept) process.stdout.write('* with changes that no state holds\n');
}
