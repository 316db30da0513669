import { execFileSync } from 'node:child_process';
import { mkdir, mkdtemp, rm, writeFile } from 'node:fs/promises';
import { tmpdir } from 'node:os';
import { join } from 'node:path';
import { onTestFinished } from 'vitest';
import { createRecipe } from '../../core/recipes/recipeHistory.ts';
import { fingerprintPhoto } from '../../main/store/photoFingerprint.ts';
import { RecipeStore, type RecipeStoreOptions } from '../../main/store/recipeStore.ts';
import { moment, samplePreset } from '../recipes/sampleRecipes.ts';

/** A folder that is gone after the test. */
export async function temporaryFolder(parent = tmpdir()): Promise<string> {
  const folder = await mkdtemp(join(parent, 'oxgall-store-'));
  onTestFinished(() => rm(folder, { recursive: true, force: true }));
  return folder;
}

/** A folder with one photo, a data folder beside it, and a store. */
export async function storeWithPhoto(options: Partial<RecipeStoreOptions> = {}, parent?: string) {
  const root = await temporaryFolder(parent);
  const photos = join(root, 'photos');
  await mkdir(photos);
  const photoPath = join(photos, 'heron.jpg');
  // The store never decodes a photo: any bytes will do.
  await writeFile(photoPath, 'the heron stands in the shallows');
  const dataFolder = options.dataFolder ?? join(root, 'data');
  const store = newStore({ ...options, dataFolder });
  const photo = await fingerprintPhoto(photoPath);
  const recipe = createRecipe(photo, samplePreset(), moment(0));
  return {
    root,
    photos,
    photoPath,
    dataFolder,
    store,
    photo,
    recipe,
    recipePath: `${photoPath}.oxgall.json`,
  };
}

/** Another window on the same data folder. */
export function newStore(options: Partial<RecipeStoreOptions> & { dataFolder: string }): RecipeStore {
  return new RecipeStore({ engineVersion: '1', now: () => new Date(Date.UTC(2031, 4, 1)), ...options });
}

/**
 * Mounts a disk of its own at a folder for the time of a test.
 * @returns why that cannot be done here, or null where it was
 */
export function mountDisk(folder: string, options: string): string | null {
  if (process.platform !== 'linux') return 'mounting a small disk needs Linux';
  try {
    execFileSync('mount', ['-t', 'tmpfs', '-o', options, 'tmpfs', folder], { stdio: 'pipe' });
  } catch {
    return 'mounting a small disk needs the rights to do so';
  }
  onTestFinished(() => {
    execFileSync('umount', ['-l', folder]);
  });
  return null;
}

/** Makes a mounted disk read-only; works for the superuser too, whom permissions do not stop. */
export function makeReadOnly(folder: string): void {
  execFileSync('mount', ['-o', 'remount,ro', folder]);
}
