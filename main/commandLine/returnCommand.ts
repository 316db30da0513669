import { toRoman } from '../../core/presets/roman.ts';
import { currentState, returnToState } from '../../core/recipes/recipeHistory.ts';
import {
  commandStores,
  historyFor,
  now,
  readRecipe,
  requireRecipe,
  saveRecipe,
  stateOf,
} from './photoRecipe.ts';
import { readWords } from './readWords.ts';
import { type Command, exitCode, UsageError } from './usage.ts';

const options = {
  state: { type: 'string' },
  preset: { type: 'string' },
  json: { type: 'boolean' },
} as const;

export const returnCommand: Command = {
  name: 'return',
  usage: 'return PHOTO --state N [--preset NAME]',
  summary: 'Goes back to a state of a photo by adding one equal to it; nothing is lost.',
  options: [
    ['--state N', 'Its number, such as 3 or III; oxgall states lists them.'],
    ['--preset NAME', 'Of another preset used on this photo; the one on the easel unless given.'],
    ['--json', 'Prints one JSON object.'],
  ],
  run: goBack,
};

async function goBack(words: string[]): Promise<number> {
  const { values, positionals } = readWords(words, options, { least: 1, most: 1, what: 'one photo' });
  const [photoPath] = positionals;
  if (values.state === undefined) throw new UsageError('Expected --state with a number such as 3 or III');
  const stores = commandStores();
  const read = await readRecipe(stores, photoPath);
  const recipe = requireRecipe(photoPath, read);
  const history = historyFor(recipe, values.preset);
  const state = stateOf(history, values.state, '--state');
  const returned = returnToState(recipe, state.id, now(), history.preset);
  const saved = await saveRecipe(stores, photoPath, read, returned);
  const remarks = [...read.remarks, ...saved.remarks];
  const present = currentState(returned);
  if (values.json) {
    const report = {
      photo: photoPath,
      recipe: saved.path,
      preset: history.preset,
      returnedTo: state.number,
      state: present.number,
      stateId: present.id,
      remarks,
    };
    process.stdout.write(`${JSON.stringify(report, null, 2)}\n`);
    return exitCode.done;
  }
  for (const remark of remarks) process.stderr.write(`${remark}\n`);
  const numerals = [present.number, state.number].map(toRoman);
  process.stdout.write(
    `${photoPath}: State ${numerals[0]} of ${history.title} is State ${numerals[1]} again\n`,
  );
  return exitCode.done;
}
