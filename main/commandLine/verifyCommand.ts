import { stat } from 'node:fs/promises';
import { dirname, isAbsolute, join } from 'node:path';
import { toRoman } from '../../core/presets/roman.ts';
import { stateById } from '../../core/presets/thread.ts';
import type { Recipe } from '../../core/recipes/recipe.ts';
import { createEngine } from '../engine/paintEngine.ts';
import { FileError } from '../files/fileError.ts';
import type { VerifiedDelivery } from '../painting/verifyDelivery.ts';
import { photosWithRecipes } from '../store/movedPhotos.ts';
import type { Stores } from '../store/openStores.ts';
import { commandStores, readRecipe, requireRecipe } from './photoRecipe.ts';
import { ProgressLine } from './progressLine.ts';
import { readWhole, readWords } from './readWords.ts';
import { type Command, exitCode } from './usage.ts';

const options = { workers: { type: 'string' }, json: { type: 'boolean' } } as const;

export const verifyCommand: Command = {
  name: 'verify',
  usage: 'verify PHOTO…|FOLDER [--workers N] [--json]',
  summary:
    'Paints what was delivered again from the recipes and says whether it is the same to the pixel; exit code 1 where anything is not.',
  options: [
    ['--workers N', 'Worker threads; one for each processor unless given.'],
    ['--json', 'Prints one JSON object with everything that was found.'],
  ],
  run: verify,
};

interface VerifiedPhoto {
  photo: string;
  deliveries: (VerifiedDelivery & { state: number | null; preset: string })[];
  /** Why it could not be verified; null where it could. */
  problem: string | null;
  remarks: string[];
}

async function verify(words: string[]): Promise<number> {
  const { values, positionals } = readWords(words, options, {
    least: 1,
    most: 10_000,
    what: 'photos or a folder',
  });
  const workers = values.workers === undefined ? undefined : readWhole(values.workers, '--workers', 1, 64);
  const stores = commandStores();
  const named = await Promise.all(positionals.map((path) => photosOf(stores, path)));
  const photos = [...new Set(named.flat())];
  const { verifyDeliveries } = await import('../painting/verifyDelivery.ts');
  const progress = new ProgressLine();
  const engine = await createEngine({ workers });
  const found: VerifiedPhoto[] = [];
  try {
    for (const [index, photo] of photos.entries()) {
      progress.update(index / photos.length, 'body');
      try {
        const read = await readRecipe(stores, photo);
        const recipe = requireRecipe(photo, read);
        const verified = await verifyDeliveries(engine, photo, read.photo.sha256, recipe);
        const deliveries = verified.map((delivery) => ({ ...delivery, ...placeOf(recipe, delivery) }));
        found.push({ photo, deliveries, problem: null, remarks: read.remarks });
      } catch (failure) {
        if (!(failure instanceof FileError)) throw failure;
        found.push({ photo, deliveries: [], problem: failure.message, remarks: [] });
      }
      if (values.json !== true) {
        progress.clear();
        print(found.at(-1)!);
      }
    }
  } finally {
    progress.clear();
    await engine.close();
  }
  const all = found.flatMap(({ deliveries }) => deliveries);
  const summary = {
    deliveries: all.length,
    identical: all.filter(({ verdict }) => verdict === 'identical').length,
    changedFiles: all.filter(({ file }) => file === 'changed').length,
    missingFiles: all.filter(({ file }) => file === 'missing').length,
    problems: found.filter(({ problem }) => problem).length,
  };
  if (values.json) process.stdout.write(`${JSON.stringify({ photos: found, ...summary }, null, 2)}\n`);
  else process.stdout.write(`${sentenceOf(summary)}\n`);
  // A file that is elsewhere by now takes nothing from the proof: its painting is the same to the pixel.
  const isProven = summary.identical === all.length && summary.changedFiles + summary.problems === 0;
  return isProven ? exitCode.done : exitCode.failed;
}

function sentenceOf(summary: Record<'deliveries' | 'identical' | 'changedFiles' | 'missingFiles', number>) {
  const { deliveries, identical, changedFiles, missingFiles } = summary;
  const files = [
    changedFiles > 0 && `${changedFiles} of the files changed since`,
    missingFiles > 0 && `${missingFiles} of the files not there`,
  ].filter(Boolean);
  return [`${identical} of ${deliveries} deliveries identical`, ...files].join(', ');
}

/** A photo itself, or every photo of a folder that has a recipe. */
async function photosOf(stores: Stores, path: string): Promise<string[]> {
  const facts = await stat(path).catch(() => null);
  if (!facts?.isDirectory()) return [path];
  const photos = await photosWithRecipes(stores.recipes, path);
  if (photos.length === 0)
    throw new FileError(path, 'holds no recipes', 'Name a folder of photos that were painted with --keep.');
  return photos;
}

function placeOf(recipe: Recipe, { stateId }: VerifiedDelivery): { state: number | null; preset: string } {
  for (const { states, preset } of recipe.histories) {
    const state = stateById(states, stateId);
    if (state) return { state: state.number, preset };
  }
  return { state: null, preset: '' };
}

const verdictWords: Record<VerifiedDelivery['verdict'], string> = {
  identical: 'identical',
  differs: 'DIFFERS',
  'engine-differs': 'differs: painted by another engine',
  'photo-changed': 'the photo has changed since',
  'not-recorded': 'no hash of its pixels was recorded',
};

function print({ photo, deliveries, problem, remarks }: VerifiedPhoto): void {
  for (const remark of remarks) process.stderr.write(`${remark}\n`);
  if (problem) {
    process.stdout.write(`${problem}\n`);
    return;
  }
  if (deliveries.length === 0) process.stdout.write(`${photo}: nothing was delivered\n`);
  for (const { path, state, verdict, file, difference, engineVersion } of deliveries) {
    const facts = [
      verdictWords[verdict],
      verdict === 'engine-differs' && `engine ${engineVersion}`,
      difference &&
        `by ${difference.largest.toFixed(1)} at most, ${difference.mean.toFixed(3)} on average, in ${(100 * difference.share01).toFixed(2)} % of the samples${difference.isLossyFile ? ', the losses of its format among them' : ''}`,
      file !== 'untouched' && `the file is ${file === 'missing' ? 'not there' : 'changed'}`,
    ].filter(Boolean);
    const name = isAbsolute(path) ? path : join(dirname(photo), path);
    process.stdout.write(`${name}, State ${state === null ? '?' : toRoman(state)}: ${facts.join('; ')}\n`);
  }
}
