import { engineVersion } from '../../core/engineVersion.ts';
import type { Moment, Preset } from '../../core/presets/preset.ts';
import { readStateNumber, toRoman } from '../../core/presets/roman.ts';
import type { State } from '../../core/presets/state.ts';
import { stateByNumber } from '../../core/presets/thread.ts';
import type { PhotoFingerprint, PresetHistory, Recipe } from '../../core/recipes/recipe.ts';
import { currentHistory } from '../../core/recipes/recipeHistory.ts';
import { FileError } from '../files/fileError.ts';
import { dataFolder } from '../store/dataFolder.ts';
import { openStores, type Stores } from '../store/openStores.ts';
import { fingerprintPhoto } from '../store/photoFingerprint.ts';
import { recipeBeside } from '../store/recipePlaces.ts';
import type { SavedRecipe } from '../store/storeResults.ts';
import type { FileVersion } from '../store/versionedFile.ts';
import { UsageError } from './usage.ts';

/** A photo's recipe as the command line has it. */
export interface PhotoRecipe {
  photo: PhotoFingerprint;
  /** Null where the photo has none. */
  recipe: Recipe | null;
  path: string;
  version: FileVersion;
  /** A newer version wrote it: nothing may be saved. */
  isReadOnly: boolean;
  remarks: string[];
}

export function commandStores(): Stores {
  return openStores(dataFolder());
}

export function now(): Moment {
  return { time: new Date().toISOString(), engineVersion };
}

/**
 * Reads the recipe of a photo.
 * @throws FileError where the photo cannot be read
 */
export async function readRecipe(stores: Stores, photoPath: string): Promise<PhotoRecipe> {
  const photo = await fingerprintPhoto(photoPath);
  const loaded = await stores.recipes.load(photoPath, photo);
  const common = { photo, path: recipeBeside(photoPath), version: null, isReadOnly: false };
  switch (loaded.kind) {
    case 'none':
      return { ...common, recipe: null, remarks: [] };
    case 'open':
      return {
        ...common,
        recipe: loaded.recipe,
        path: loaded.path,
        version: loaded.version,
        remarks: loaded.remarks,
      };
    case 'newer':
      return {
        ...common,
        recipe: loaded.recipe,
        path: loaded.path,
        isReadOnly: true,
        remarks: [loaded.message],
      };
    case 'damaged':
      return { ...common, recipe: null, version: loaded.version, remarks: [loaded.message] };
  }
}

/**
 * The recipe of a photo that must have one.
 * @throws FileError with what to do where it has none
 */
export function requireRecipe(photoPath: string, { recipe }: PhotoRecipe): Recipe {
  if (recipe) return recipe;
  throw new FileError(photoPath, 'has no recipe', 'Paint it with --keep, or work on it in the window.');
}

/**
 * Saves a recipe; what somebody else saved meanwhile is taken in.
 * @returns what to tell: where it went instead, or that it is rescued; usually empty
 * @throws FileError where it could not be saved; it is rescued then, and says so
 */
export async function saveRecipe(
  stores: Stores,
  photoPath: string,
  read: PhotoRecipe,
  recipe: Recipe,
): Promise<string[]> {
  if (read.isReadOnly)
    throw new FileError(read.path, 'was written by a newer version', 'Update Oxgall to go on with it.');
  const at = { path: read.path, version: read.version };
  const { saved } = await stores.recipes.saveKeepingBoth(photoPath, recipe, at);
  return remarksOf(saved);
}

function remarksOf(saved: SavedRecipe): string[] {
  if (saved.kind === 'saved') return saved.remarks;
  if (saved.kind === 'failed') throw saved.error;
  throw new FileError(saved.path, saved.message, 'Close the other program and try again.');
}

/**
 * A state of a thread by its number, Roman or Arabic.
 * @throws UsageError with the numbers there are
 */
export function stateOf(
  thread: Pick<Preset | PresetHistory, 'title' | 'states'>,
  text: string,
  option: string,
): State {
  const number = readStateNumber(text);
  const state = number === null ? undefined : stateByNumber(thread.states, number);
  if (state) return state;
  const last = Math.max(...thread.states.map((each) => each.number));
  throw new UsageError(
    `Expected a state from I to ${toRoman(last)} of ${thread.title} for ${option}, received ${text}`,
  );
}

/**
 * The history of one preset on a photo; the one on the easel unless named.
 * @throws UsageError with the presets there are
 */
export function historyFor(recipe: Recipe, preset: string | undefined): PresetHistory {
  if (preset === undefined) return currentHistory(recipe);
  const found = recipe.histories.find(({ preset: name, title }) => name === preset || title === preset);
  if (found) return found;
  const names = recipe.histories.map((history) => history.preset).join(', ');
  throw new UsageError(
    `Expected one of the presets ${names} used on this photo for --preset, received ${preset}`,
  );
}
