import { engineVersion } from '../../core/engineVersion.ts';
import type { Moment, Preset } from '../../core/presets/preset.ts';
import { readStateNumber, toRoman } from '../../core/presets/roman.ts';
import type { State } from '../../core/presets/state.ts';
import { stateByNumber } from '../../core/presets/thread.ts';
import type { PhotoFingerprint, PresetHistory, Recipe } from '../../core/recipes/recipe.ts';
import { currentHistory } from '../../core/recipes/recipeHistory.ts';
import { FileError } from '../files/fileError.ts';
import { dataFolder } from '../store/dataFolder.ts';
import { findMovedPhotos, putOrphanAside, type Reunion, recipeBin } from '../store/movedPhotos.ts';
import { openStores, type Stores } from '../store/openStores.ts';
import { fingerprintPhoto } from '../store/photoFingerprint.ts';
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
  /** The recipe was found by the photo's bytes, where the photo was before it was moved or renamed. */
  reunion: Reunion | null;
}

export function commandStores(): Stores {
  return openStores(dataFolder());
}

export function now(): Moment {
  return { time: new Date().toISOString(), engineVersion };
}

/**
 * Reads the recipe of a photo; one that was moved or renamed is known by its bytes. Nothing is written.
 * @throws FileError where the photo cannot be read
 */
export async function readRecipe(stores: Stores, photoPath: string): Promise<PhotoRecipe> {
  const photo = await fingerprintPhoto(photoPath);
  const loaded = await stores.recipes.load(photoPath, photo);
  const common = { photo, path: loaded.path, version: null, isReadOnly: false, reunion: null };
  switch (loaded.kind) {
    case 'none':
      return { ...common, ...(await fromBefore(stores, photoPath)) };
    case 'open':
      return { ...common, recipe: loaded.recipe, version: loaded.version, remarks: loaded.remarks };
    case 'newer':
      return { ...common, recipe: loaded.recipe, isReadOnly: true, remarks: [loaded.message] };
    case 'damaged':
      return { ...common, recipe: null, version: loaded.version, remarks: [loaded.message] };
  }
}

async function fromBefore(
  { recipes }: Stores,
  photoPath: string,
): Promise<Pick<PhotoRecipe, 'recipe' | 'remarks' | 'reunion'>> {
  const [reunion] = await findMovedPhotos(recipes, [photoPath]).catch(() => []);
  // A copy of a photo that is still where it was has a life of its own.
  if (reunion?.kind !== 'moved') return { recipe: null, remarks: [], reunion: null };
  const recipe = { ...reunion.recipe, photo: { ...reunion.recipe.photo, ...reunion.photo } };
  const remark = `This photo was moved here from ${reunion.oldPhotoPath}: its recipe is used.`;
  return { recipe, remarks: [remark], reunion };
}

/**
 * The recipe of a photo that must have one.
 * @throws FileError with what to do where it has none
 */
export function requireRecipe(photoPath: string, { recipe }: PhotoRecipe): Recipe {
  if (recipe) return recipe;
  throw new FileError(photoPath, 'has no recipe', 'Paint it with --keep, or work on it in the window.');
}

/** @throws FileError where a newer version wrote the recipe */
export function refuseReadOnly({ isReadOnly, path }: PhotoRecipe): void {
  if (isReadOnly)
    throw new FileError(path, 'was written by a newer version', 'Update Oxgall to go on with it.');
}

/**
 * Saves a recipe; what somebody else saved meanwhile is taken in.
 * @returns where it is now, and what to tell: usually nothing
 * @throws FileError where it could not be saved; it is rescued then, and says so
 */
export async function saveRecipe(
  stores: Stores,
  photoPath: string,
  read: PhotoRecipe,
  recipe: Recipe,
): Promise<{ path: string; remarks: string[] }> {
  refuseReadOnly(read);
  const at = { path: read.path, version: read.version };
  // Whoever saves means this photo, though its bytes may have been others when the recipe was begun.
  const ours = { ...recipe, photo: { ...recipe.photo, ...read.photo } };
  const { saved } = await stores.recipes.saveKeepingBoth(photoPath, ours, at);
  if (saved.kind === 'failed') {
    const { problem, remedy } = saved.error;
    const safe = saved.rescuedTo
      ? ` The work is safe in ${saved.rescuedTo} and comes back with the photo.`
      : '';
    throw new FileError(saved.path, problem, `${remedy}${safe}`, { cause: saved.error });
  }
  if (saved.kind === 'conflict')
    throw new FileError(saved.path, saved.message, 'Close the other program and try again.');
  if (read.reunion) await putOrphanAside(read.reunion, recipeBin(stores.dataFolder));
  return { path: saved.path, remarks: saved.remarks };
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
