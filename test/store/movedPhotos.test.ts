import { copyFile, mkdir, readdir, rename, writeFile } from 'node:fs/promises';
import { join } from 'node:path';
import { describe, expect, it } from 'vitest';
import { findMovedPhotos, reunite } from '../../main/store/movedPhotos.ts';
import { fingerprintPhoto } from '../../main/store/photoFingerprint.ts';
import { photoOfRecipe, recipeInMirror } from '../../main/store/recipePlaces.ts';
import { newStore, storeWithPhoto } from './storeFolders.ts';

async function savedPhoto() {
  const made = await storeWithPhoto();
  await made.store.save(made.photoPath, made.recipe, { version: null });
  await writeFile(join(made.photos, 'ferry.jpg'), 'another photo');
  return { ...made, bin: join(made.dataFolder, 'bin', 'recipes'), ferry: join(made.photos, 'ferry.jpg') };
}

describe('a photo and its recipe find each other', () => {
  it('after the photo was renamed', async () => {
    const { store, photos, photoPath, recipe, bin, ferry } = await savedPhoto();
    const renamed = join(photos, 'plate 7.jpg');
    await rename(photoPath, renamed);
    const found = await findMovedPhotos(store, [renamed, ferry]);
    expect(found).toMatchObject([{ photoPath: renamed, recipe, kind: 'moved', oldPhotoPath: photoPath }]);
    const { saved } = await reunite(store, found[0], bin);
    expect(saved.kind).toBe('saved');
    const loaded = await store.load(renamed, await fingerprintPhoto(renamed));
    expect(loaded).toMatchObject({ kind: 'open', photo: 'same', recipe: { histories: recipe.histories } });
    expect(loaded.kind === 'open' && loaded.recipe.photo.fileName).toBe('plate 7.jpg');
    expect(await readdir(bin)).toEqual(['heron.jpg.oxgall.json']);
    expect(await findMovedPhotos(store, [renamed, ferry])).toEqual([]);
  });

  it('after the photo was moved to another folder without it', async () => {
    const { store, root, photoPath, recipe, bin, recipePath } = await savedPhoto();
    const moved = join(root, 'heron.jpg');
    await rename(photoPath, moved);
    const found = await findMovedPhotos(store, [moved]);
    expect(found).toMatchObject([{ kind: 'moved', recipe, oldPhotoPath: photoPath, orphanPath: null }]);
    await reunite(store, found[0], bin);
    expect((await store.load(moved, await fingerprintPhoto(moved))).kind).toBe('open');
    // Folders that were not opened are left alone.
    expect(await readdir(join(recipePath, '..'))).toContain('heron.jpg.oxgall.json');
  });

  it('but a second copy of the photo is told from a moved one', async () => {
    const { store, photos, photoPath } = await savedPhoto();
    const twin = join(photos, 'heron copy.jpg');
    await copyFile(photoPath, twin);
    expect(await findMovedPhotos(store, [twin, photoPath])).toMatchObject([
      { photoPath: twin, kind: 'twin' },
    ]);
  });

  it('and a photo of the same size but other bytes finds nothing', async () => {
    const { store, photos } = await savedPhoto();
    const other = join(photos, 'other.jpg');
    await writeFile(other, 'the heron stands in the SHALLOWS');
    expect(await findMovedPhotos(store, [other])).toEqual([]);
  });

  it('and one whose recipe is in the mirror needs no other', async () => {
    const { store, root, dataFolder, photoPath, recipePath } = await savedPhoto();
    const mirrorFolder = join(root, 'mirror');
    const mirror = recipeInMirror(photoPath, mirrorFolder);
    await mkdir(join(mirror, '..'), { recursive: true });
    await rename(recipePath, mirror);
    for (const mirrors of [{ mirrorFolder }, { mirrorFolder: null, earlierMirrorFolders: [mirrorFolder] }])
      expect(await findMovedPhotos(newStore({ dataFolder, ...mirrors }), [photoPath])).toEqual([]);
    expect(await findMovedPhotos(store, [photoPath])).toHaveLength(1);
  });
});

describe('names of recipes', () => {
  it('lead back to the photo', () => {
    expect(photoOfRecipe('/plates/heron.jpg.oxgall.json')).toBe('/plates/heron.jpg');
  });

  it('in the mirror never meet', () => {
    const places = ['/a/heron.jpg', '/b/heron.jpg', '/heron.jpg'].map((path) =>
      recipeInMirror(path, '/mirror'),
    );
    expect(places).toEqual([
      '/mirror/a/heron.jpg.oxgall.json',
      '/mirror/b/heron.jpg.oxgall.json',
      '/mirror/heron.jpg.oxgall.json',
    ]);
  });
});

describe('fingerprints', () => {
  it('are the size and the SHA-256 of the bytes', async () => {
    const { root } = await storeWithPhoto();
    const path = join(root, 'abc.jpg');
    await writeFile(path, 'abc');
    // SHA-256 of "abc": FIPS 180-4 example.
    expect(await fingerprintPhoto(path)).toEqual({
      fileName: 'abc.jpg',
      sizeBytes: 3,
      sha256: 'ba7816bf8f01cfea414140de5dae2223b00361a396177a9cb410ff61f20015ad',
    });
    await expect(fingerprintPhoto(join(root, 'gone.jpg'))).rejects.toThrow(
      /gone\.jpg: there is no such file/,
    );
  });
});
