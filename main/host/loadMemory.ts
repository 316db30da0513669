import { dirname } from 'node:path';
import type { Moment, Preset } from '../../core/presets/preset.ts';
import { outputForPhoto } from '../../core/recipes/outputSettings.ts';
import type { PhotoFingerprint, Recipe } from '../../core/recipes/recipe.ts';
import { changeParameters, createRecipe } from '../../core/recipes/recipeHistory.ts';
import { findMovedPhotos, recipeBin, reunite } from '../store/movedPhotos.ts';
import { dropOldDraft, type OldDraft, readOldDraft } from '../store/oldDrafts.ts';
import type { Stores } from '../store/openStores.ts';
import type { PresetStore } from '../store/presetStore.ts';
import { recipeBeside } from '../store/recipePlaces.ts';
import type { FileVersion } from '../store/versionedFile.ts';
import type { PhotoMemory } from './api/memoryCommands.ts';

/** What a photo that was never worked on starts from. */
export const firstPresetName = 'low-water';

/** A photo's recipe as it is when the photo is opened. */
export interface LoadedMemory {
  recipe: Recipe;
  recipePath: string;
  version: FileVersion;
  access: PhotoMemory['access'];
  photo: PhotoMemory['photo'];
  isKept: boolean;
  remarks: string[];
  /** Holds work that is saved nowhere as a recipe: call it once that is done. Null where there is nothing. */
  whenSaved: (() => Promise<void>) | null;
}

/**
 * Finds the recipe of a photo: beside it, in the mirror, where the photo was before it was moved, or as a draft of an
 * earlier version; else makes one that is not written before something is changed.
 * @param depth bits a sample of the photo, which a new recipe saves with
 */
export async function loadMemory(
  stores: Stores,
  path: string,
  fingerprint: PhotoFingerprint,
  moment: Moment,
  depth: 8 | 16 = 8,
): Promise<LoadedMemory> {
  const { recipes, presets, dataFolder } = stores;
  let loaded = await recipes.load(path, fingerprint);
  const remarks: string[] = [];
  if (loaded.kind === 'none') {
    const remark = (await takeRecipesAlong(stores, [path])).get(path);
    if (remark) {
      loaded = await recipes.load(path, fingerprint);
      remarks.push(remark);
    }
  }
  const fresh = async () =>
    createRecipe(fingerprint, await firstPreset(presets), moment, outputForPhoto(depth));
  const isBeside = dirname(loaded.path) === dirname(recipeBeside(path));
  const common = {
    recipePath: loaded.path,
    version: null,
    access: isBeside ? 'writable' : 'mirrored',
    photo: 'same',
    isKept: true,
    whenSaved: null,
  } as const;
  switch (loaded.kind) {
    case 'open': {
      const { recipe, version, photo } = loaded;
      return { ...common, recipe, version, photo, remarks: [...remarks, ...loaded.remarks] };
    }
    case 'newer': {
      const recipe = loaded.recipe ?? (await fresh());
      return { ...common, recipe, access: 'readOnly', remarks: [loaded.message] };
    }
    case 'damaged': {
      const { version, message } = loaded;
      return { ...common, recipe: await fresh(), version, remarks: [message] };
    }
    case 'none': {
      const draft = await readOldDraft(dataFolder, path);
      if (!draft) return { ...common, recipe: await fresh(), isKept: false, remarks };
      return {
        ...common,
        recipe: await recipeOfDraft(draft, fingerprint, presets, moment),
        isKept: false,
        remarks: ['Unsaved work of an earlier version was brought back.'],
        whenSaved: () => dropOldDraft(dataFolder, path),
      };
    }
  }
}

/**
 * Gives photos that were moved or renamed their recipes back. A copy of a photo that is still where it was starts a
 * life of its own.
 * @returns what to tell, by photo
 */
export async function takeRecipesAlong(
  { recipes, dataFolder }: Stores,
  paths: readonly string[],
  signal?: AbortSignal,
): Promise<Map<string, string>> {
  const remarks = new Map<string, string>();
  // A folder that cannot be searched is no reason not to open what is in it.
  for (const found of await findMovedPhotos(recipes, paths, signal).catch(() => [])) {
    if (found.kind !== 'moved') continue;
    signal?.throwIfAborted();
    await reunite(recipes, found, recipeBin(dataFolder));
    const remark = `This photo was moved here from ${found.oldPhotoPath}: its recipe came along.`;
    remarks.set(found.photoPath, remark);
  }
  return remarks;
}

async function firstPreset(presets: PresetStore, name: string = firstPresetName): Promise<Preset> {
  const shelf = await presets.list();
  const found = shelf.presets.find(({ preset }) => preset.name === name) ?? shelf.presets[0];
  return found.preset;
}

async function recipeOfDraft(
  { presetName, parameters }: OldDraft,
  fingerprint: PhotoFingerprint,
  presets: PresetStore,
  moment: Moment,
): Promise<Recipe> {
  let recipe = createRecipe(fingerprint, await firstPreset(presets, presetName ?? undefined), moment);
  for (const [key, value] of Object.entries(parameters))
    try {
      recipe = changeParameters(recipe, { [key]: value });
    } catch {
      // A parameter of that day that is none any more.
    }
  return recipe;
}
