import { dataFolder } from '../store/dataFolder.ts';
import { chooseMirrorFolder, readSettings } from '../store/settings.ts';
import { readWords } from './readWords.ts';
import { type Command, exitCode, UsageError } from './usage.ts';

const options = { 'recipes-elsewhere': { type: 'string' }, json: { type: 'boolean' } } as const;

/** What stands for the folder that is used unless another is chosen. */
const usual = 'usual';

export const settingsCommand: Command = {
  name: 'settings',
  usage: 'settings [--recipes-elsewhere FOLDER]',
  summary: 'Shows what is set for all photos, or changes it.',
  options: [
    [
      '--recipes-elsewhere FOLDER',
      `Where recipes go whose photos lie in folders that cannot be written; ${usual} for the program's own.`,
    ],
    ['--json', 'Prints one JSON object.'],
  ],
  async run(words) {
    const { values } = readWords(words, options, { least: 0, most: 0, what: 'no further words' });
    const chosen = values['recipes-elsewhere'];
    if (chosen === '') throw new UsageError('Expected a folder for --recipes-elsewhere, received nothing');
    const folder = dataFolder();
    const settings =
      chosen === undefined
        ? readSettings(folder)
        : await chooseMirrorFolder(folder, chosen === usual ? null : chosen);
    const told = { dataFolder: folder, recipesElsewhere: settings.mirrorFolder };
    if (values.json) process.stdout.write(`${JSON.stringify(told, null, 2)}\n`);
    else
      process.stdout.write(
        `Recipes of folders that cannot be written: ${told.recipesElsewhere}\nAll else of the program's own: ${folder}\n`,
      );
    return exitCode.done;
  },
};
