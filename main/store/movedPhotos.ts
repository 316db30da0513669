import { mkdir, readdir, rename, stat } from 'node:fs/promises';
import { basename, dirname, join, resolve } from 'node:path';
import { recipeFormat } from '../../core/recipes/documentFormats.ts';
import { openDocument } from '../../core/recipes/openDocument.ts';
import type { PhotoFingerprint, Recipe } from '../../core/recipes/recipe.ts';
import { fileErrorFrom } from '../files/systemErrors.ts';
import { freePath } from './freePath.ts';
import { fingerprintPhoto } from './photoFingerprint.ts';
import { isRecipeName, photoOfRecipe } from './recipePlaces.ts';
import type { RecipeStore } from './recipeStore.ts';
import type { SavedRecipe } from './storeResults.ts';
import { readVersioned } from './versionedFile.ts';

/** A photo without a recipe, and a recipe that was made for a photo of the same bytes. */
export interface Reunion {
  photoPath: string;
  photo: PhotoFingerprint;
  recipe: Recipe;
  /** Where the photo was when the recipe was saved. */
  oldPhotoPath: string;
  /** `moved`: the photo is not at the old place any more. `twin`: it is still there too. */
  kind: 'moved' | 'twin';
  /** The sidecar that lost its photo, where it lies in the photo's own folder. */
  orphanPath: string | null;
}

interface Candidate {
  recipe: Recipe;
  photoPath: string;
  orphanPath: string | null;
}

/**
 * Looks for the recipes of photos that have none: among sidecars in their folders that lost their photo, and among
 * the copies in the data folder.
 * @param photoPaths photos, such as those of a folder just opened
 * @returns at most one for each photo; a moved photo's before a twin's
 * Cost: reads a photo's bytes only where a recipe was made for one of the same size.
 */
export async function findMovedPhotos(
  store: RecipeStore,
  photoPaths: readonly string[],
  signal?: AbortSignal,
): Promise<Reunion[]> {
  const bare: string[] = [];
  for (const path of photoPaths) if (!(await hasRecipe(store, path))) bare.push(path);
  if (bare.length === 0) return [];
  const orphans = await findOrphans(new Set(bare.map((path) => dirname(path))));
  const knownSizes = await store.copies.knownSizes();
  const reunions: Reunion[] = [];
  for (const photoPath of bare) {
    signal?.throwIfAborted();
    const sizeBytes = (await stat(photoPath).catch(() => null))?.size ?? -1;
    const isKnown =
      knownSizes.has(sizeBytes) || orphans.some(({ recipe }) => recipe.photo.sizeBytes === sizeBytes);
    if (!isKnown) continue;
    const photo = await fingerprintPhoto(photoPath, signal);
    const found = await findFor(photoPath, photo, orphans, store);
    if (found) reunions.push(found);
  }
  return reunions;
}

async function findFor(
  photoPath: string,
  photo: PhotoFingerprint,
  orphans: readonly Candidate[],
  store: RecipeStore,
): Promise<Reunion | null> {
  const ours = orphans.filter(
    ({ recipe, orphanPath }) =>
      recipe.photo.sha256 === photo.sha256 &&
      orphanPath !== null &&
      dirname(orphanPath) === dirname(photoPath),
  );
  const copies = (await store.copies.forPhoto(photo.sizeBytes, photo.sha256)).map((copy) => ({
    recipe: copy.recipe,
    photoPath: copy.photoPath,
    orphanPath: null,
  }));
  const reunions = await Promise.all(
    [...ours, ...copies].map(async (candidate): Promise<Reunion> => {
      const { recipe, orphanPath, photoPath: oldPhotoPath } = candidate;
      // Another photo may have taken its name since: cameras count anew.
      const kind = (await hasBytesOf(oldPhotoPath, photo)) ? 'twin' : 'moved';
      return { photoPath, photo, recipe, oldPhotoPath, kind, orphanPath };
    }),
  );
  return reunions.find(({ kind }) => kind === 'moved') ?? reunions[0] ?? null;
}

/** Whether a recipe lies in one of the places a photo's may lie. */
export async function hasRecipe(store: RecipeStore, photoPath: string): Promise<boolean> {
  const found = await Promise.all(store.placesOf(photoPath).map(exists));
  return found.includes(true);
}

/**
 * The photos of a folder that have a recipe: beside them, in a mirror, or under the name they had before. A recipe
 * whose photo is nowhere counts too, by the photo it is missing.
 * @throws FileError where the folder cannot be read
 */
export async function photosWithRecipes(store: RecipeStore, folder: string): Promise<string[]> {
  const names = await readdir(folder).catch((failure) => {
    throw fileErrorFrom(folder, failure);
  });
  const [, ...mirrors] = store.placesOf(join(folder, 'photo')).map((place) => dirname(place));
  const mirrored = (await Promise.all(mirrors.map((mirror) => readdir(mirror).catch(() => [])))).flat();
  const found = [...names, ...mirrored].filter(isRecipeName).map((name) => photoOfRecipe(join(folder, name)));
  const bare = names.filter((name) => !isRecipeName(name)).map((name) => join(folder, name));
  const moved = (await findMovedPhotos(store, bare)).filter(({ kind }) => kind === 'moved');
  const left = new Set(moved.map(({ oldPhotoPath }) => resolve(oldPhotoPath)));
  const photos = [
    ...found.filter((path) => !left.has(resolve(path))),
    ...moved.map(({ photoPath }) => photoPath),
  ];
  const collator = new Intl.Collator('en', { numeric: true });
  return [...new Set(photos)].sort(collator.compare);
}

async function findOrphans(folders: ReadonlySet<string>): Promise<Candidate[]> {
  const orphans: Candidate[] = [];
  for (const folder of folders) {
    const names = await readdir(folder).catch(() => []);
    const present = new Set(names);
    for (const name of names.filter(isRecipeName)) {
      const orphanPath = join(folder, name);
      const photoPath = photoOfRecipe(orphanPath);
      if (present.has(basename(photoPath))) continue;
      const read = await readVersioned(orphanPath).catch(() => null);
      const opened = read && openDocument(read.text, recipeFormat);
      if (opened?.kind === 'usable') orphans.push({ recipe: opened.document, photoPath, orphanPath });
    }
  }
  return orphans;
}

/**
 * Gives a photo the recipe that was found for it. A sidecar left behind in the same folder goes to the bin, from
 * where it can be taken back by hand.
 * @param binFolder of the data folder
 */
export async function reunite(
  store: RecipeStore,
  reunion: Reunion,
  binFolder: string,
): Promise<{ recipe: Recipe; saved: SavedRecipe }> {
  const recipe = { ...reunion.recipe, photo: { ...reunion.recipe.photo, ...reunion.photo } };
  const result = await store.saveKeepingBoth(reunion.photoPath, recipe, { version: null });
  if (result.saved.kind === 'saved') await putOrphanAside(reunion, binFolder);
  return result;
}

/** Puts the sidecar that a renamed photo left behind into the bin, once its recipe is saved beside the photo. */
export async function putOrphanAside({ orphanPath, kind }: Reunion, binFolder: string): Promise<void> {
  if (!orphanPath || kind !== 'moved') return;
  await mkdir(binFolder, { recursive: true });
  const inBin = await freePath(join(binFolder, basename(orphanPath)));
  // Another disk refuses the rename; then the sidecar simply stays where it is.
  await rename(orphanPath, inBin).catch(() => {});
}

/** Where sidecars go that lost their photo. */
export function recipeBin(dataFolder: string): string {
  return join(dataFolder, 'bin', 'recipes');
}

async function hasBytesOf(path: string, { sizeBytes, sha256 }: PhotoFingerprint): Promise<boolean> {
  const facts = await stat(path).catch(() => null);
  if (!facts?.isFile() || facts.size !== sizeBytes) return false;
  return fingerprintPhoto(path).then(
    (found) => found.sha256 === sha256,
    // It is there and cannot be read: it may well be the same.
    () => true,
  );
}

async function exists(path: string): Promise<boolean> {
  return stat(path).then(
    () => true,
    () => false,
  );
}
