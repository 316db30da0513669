import { createHash } from 'node:crypto';
import { chmod, mkdir, readdir, readFile, rename, rm, utimes, writeFile } from 'node:fs/promises';
import { hostname } from 'node:os';
import { join } from 'node:path';
import { describe, expect, it } from 'vitest';
import { holdsEveryState } from '../../core/recipes/mergeRecipes.ts';
import { documentText } from '../../core/recipes/openDocument.ts';
import type { Recipe } from '../../core/recipes/recipe.ts';
import {
  changeParameters,
  currentHistory,
  currentParameters,
  keepState,
} from '../../core/recipes/recipeHistory.ts';
import { fingerprintPhoto } from '../../main/store/photoFingerprint.ts';
import { placeOf } from '../../main/store/recipeCopies.ts';
import { recipeInMirror } from '../../main/store/recipePlaces.ts';
import type { LoadedRecipe, SavedRecipe } from '../../main/store/storeResults.ts';
import { moment } from '../recipes/sampleRecipes.ts';
import { makeReadOnly, mountDisk, newStore, storeWithPhoto } from './storeFolders.ts';

function opened(loaded: LoadedRecipe): LoadedRecipe & { kind: 'open' } {
  if (loaded.kind !== 'open') throw new Error(`Expected an open recipe, received ${JSON.stringify(loaded)}`);
  return loaded;
}

function saved(result: SavedRecipe): SavedRecipe & { kind: 'saved' } {
  if (result.kind !== 'saved') throw new Error(`Expected a saved recipe, received ${JSON.stringify(result)}`);
  return result;
}

const broader = (recipe: Recipe, mm: number, second: number) =>
  keepState(changeParameters(recipe, { 'body.brush': `${mm}mm` }), `${mm} mm`, moment(second));

describe('a recipe beside its photo', () => {
  it('is none at first, and comes back as it was saved', async () => {
    const { store, photoPath, photo, recipe, recipePath, photos } = await storeWithPhoto();
    expect(await store.load(photoPath, photo)).toEqual({ kind: 'none', path: recipePath, version: null });
    const { version } = saved(await store.save(photoPath, recipe, { version: null }));
    expect(await store.load(photoPath, photo)).toEqual({
      kind: 'open',
      recipe,
      path: recipePath,
      version,
      photo: 'same',
      remarks: [],
    });
    expect((await readdir(photos)).sort()).toEqual(['heron.jpg', 'heron.jpg.oxgall.json']);
  });

  it('keeps the fields nobody here knows, value for value', async () => {
    const { store, photoPath, photo, recipePath } = await storeWithPhoto();
    const text = await readFile(
      new URL('../fixtures/recipes/recipe-schema-1-unknown-fields.json', import.meta.url),
      'utf8',
    );
    await writeFile(recipePath, text);
    const loaded = opened(await store.load(photoPath, photo));
    saved(await store.save(photoPath, loaded.recipe, loaded));
    expect(await readFile(recipePath, 'utf8')).toBe(text);
  });

  it('says when the photo is not the one it was made for', async () => {
    const { store, photoPath, photo, recipe } = await storeWithPhoto();
    saved(await store.save(photoPath, recipe, { version: null }));
    await writeFile(photoPath, 'the heron has flown');
    const loaded = opened(await store.load(photoPath, await fingerprintPhoto(photoPath)));
    expect(loaded.photo).toBe('changed');
    expect(loaded.remarks).toEqual([expect.stringContaining('bytes have changed')]);
    expect(opened(await store.load(photoPath, photo)).photo).toBe('same');
  });

  it('says when a state was edited by hand, and still opens', async () => {
    const { store, photoPath, photo, recipe, recipePath } = await storeWithPhoto();
    await writeFile(recipePath, documentText(recipe).replace('"body.coats": 2', '"body.coats": 3'));
    expect(opened(await store.load(photoPath, photo)).remarks).toEqual([
      'Low Water: State I is not what it was when it was kept: it was changed outside Oxgall.',
    ]);
  });

  it('opens for looking only when it is from the future, and is not saved over', async () => {
    const { store, photoPath, photo, recipe, recipePath } = await storeWithPhoto();
    const text = await readFile(
      new URL('../fixtures/recipes/recipe-schema-99.json', import.meta.url),
      'utf8',
    );
    await writeFile(recipePath, text);
    const loaded = await store.load(photoPath, photo);
    expect(loaded).toMatchObject({ kind: 'newer', message: expect.stringContaining(recipePath) });
    for (const version of [null, 'ab'.repeat(32)]) {
      const result = await store.saveKeepingBoth(photoPath, recipe, { version });
      expect(result.saved).toMatchObject({ kind: 'conflict', theirs: null });
    }
    expect(await readFile(recipePath, 'utf8')).toBe(text);
  });

  it('clears away what a killed program left, but not what a living one is writing', async () => {
    const { store, photoPath, photo, photos } = await storeWithPhoto();
    const leftBy = (id: number) => join(photos, `.oxgall-${machine}-${id}-abcdef.part`);
    const machine = createHash('sha256').update(hostname()).digest('hex').slice(0, 8);
    // No process has an id above the kernel's limit of 2²².
    await writeFile(leftBy(2 ** 22 + 1), 'half');
    await writeFile(leftBy(process.pid), 'half');
    await store.load(photoPath, photo);
    expect((await readdir(photos)).filter((name) => name.endsWith('.part'))).toHaveLength(1);
  });
});

describe('two windows on one photo', () => {
  it('do not save over each other, and both are kept', async () => {
    const { store, photoPath, photo, recipe, dataFolder } = await storeWithPhoto();
    const other = newStore({ dataFolder });
    const { version } = saved(await store.save(photoPath, recipe, { version: null }));
    const ours = broader(recipe, 5, 1);
    const theirs = changeParameters(broader(recipe, 6, 2), { 'body.hold': 0.4 });
    saved(await other.save(photoPath, theirs, { version }));
    const refused = await store.save(photoPath, ours, { version });
    expect(refused).toMatchObject({
      kind: 'conflict',
      theirs,
      message: expect.stringContaining('changed elsewhere'),
    });
    expect(opened(await other.load(photoPath, photo)).recipe.work).toEqual(theirs.work);
    const kept = await store.saveKeepingBoth(photoPath, ours, { version });
    expect(kept.saved.kind).toBe('saved');
    const loaded = opened(await other.load(photoPath, photo));
    expect(loaded.recipe).toEqual(kept.recipe);
    expect(holdsEveryState(loaded.recipe, ours) && holdsEveryState(loaded.recipe, theirs)).toBe(true);
    expect(loaded.recipe.work).toEqual(ours.work);
    expect(currentHistory(loaded.recipe).states.at(-1)!.parameters['body.hold']).toBe(0.4);
    expect(loaded.remarks).toEqual([]);
  });

  it('take the same text for no conflict', async () => {
    const { store, photoPath, recipe } = await storeWithPhoto();
    saved(await store.save(photoPath, recipe, { version: null }));
    saved(await store.save(photoPath, recipe, { version: null }));
  });

  it('that save at the very same time lose nothing', async () => {
    const { photoPath, photo, recipe, dataFolder } = await storeWithPhoto();
    const windows = [1, 2, 3, 4].map((window) => ({ window, store: newStore({ dataFolder }) }));
    const rounds = 6;
    await Promise.all(
      windows.map(async ({ window, store }) => {
        let mine = recipe;
        let version: string | null = null;
        for (let round = 0; round < rounds; round++) {
          mine = keepState(mine, `window ${window}, round ${round}`, moment(window * 100 + round));
          const kept = await store.saveKeepingBoth(photoPath, mine, { version });
          mine = kept.recipe;
          version = saved(kept.saved).version;
        }
      }),
    );
    const { states } = currentHistory(opened(await windows[0].store.load(photoPath, photo)).recipe);
    const notes = new Set(states.map((state) => state.note));
    for (const { window } of windows)
      for (let round = 0; round < rounds; round++)
        expect(notes).toContain(`window ${window}, round ${round}`);
  });
});

describe('a damaged recipe', () => {
  // Cut at every byte in test/soak; that each cut is told from a whole recipe is checked in test/recipes.
  it('cut off at a byte opens as the last whole copy, and is put aside on saving', async () => {
    const { store, photoPath, photo, recipe, recipePath, photos } = await storeWithPhoto();
    saved(await store.save(photoPath, recipe, { version: null }));
    const whole = await readFile(recipePath);
    const every = Array.from({ length: whole.length - 1 }, (_, length) => length);
    const lengths = every.filter((length) => length < 10 || length % 31 === 0 || length > whole.length - 10);
    for (const length of lengths) {
      await writeFile(recipePath, whole.subarray(0, length));
      const loaded = opened(await store.load(photoPath, photo));
      expect(loaded.recipe, `cut at ${length}`).toEqual(recipe);
      expect(loaded.remarks).toEqual([expect.stringMatching(/last whole copy was opened/)]);
      expect(await readFile(recipePath)).toEqual(whole.subarray(0, length));
    }
    const cut = whole.subarray(0, 100);
    await writeFile(recipePath, cut);
    const loaded = opened(await store.load(photoPath, photo));
    saved(await store.save(photoPath, broader(loaded.recipe, 5, 1), loaded));
    expect(await readFile(`${recipePath}.damaged`)).toEqual(cut);
    expect((await readdir(photos)).sort()).toEqual([
      'heron.jpg',
      'heron.jpg.oxgall.json',
      'heron.jpg.oxgall.json.damaged',
    ]);
  });

  it.each([
    ['is cut off', (text: string) => Buffer.from(text.slice(0, 200))],
    ['is no text', () => Buffer.from([0x7b, 0xff, 0xfe, 0x00])],
    ['is another format', () => Buffer.from('{"format":"other","schema":1}')],
  ])('that %s and has no copy is said to be so and left alone', async (_, damage) => {
    const { store, photoPath, photo, recipe, recipePath } = await storeWithPhoto();
    const bytes = damage(documentText(recipe));
    await writeFile(recipePath, bytes);
    const loaded = await store.load(photoPath, photo);
    expect(loaded).toMatchObject({
      kind: 'damaged',
      message: expect.stringMatching(/There is no earlier copy/),
    });
    expect(await readFile(recipePath)).toEqual(bytes);
    saved(await store.save(photoPath, recipe, { version: null }));
    expect(await readFile(`${recipePath}.damaged`)).toEqual(bytes);
  });

  it('is not replaced by a damaged copy', async () => {
    const { store, photoPath, photo, recipe, recipePath, dataFolder } = await storeWithPhoto();
    saved(await store.save(photoPath, recipe, { version: null }));
    const [copy] = await readdir(join(dataFolder, 'recipes'));
    await writeFile(join(dataFolder, 'recipes', copy), '{');
    await writeFile(recipePath, '{');
    expect((await store.load(photoPath, photo)).kind).toBe('damaged');
  });
});

describe('a place that cannot be written', () => {
  it('is a full disk: the old recipe stays, the new one is rescued and comes back', async (context) => {
    const { store, photos, photoPath, photo, recipe, recipePath, dataFolder } = await storeWithPhoto();
    const why = mountDisk(photos, 'size=256k');
    if (why) return context.skip(why);
    await writeFile(photoPath, 'the heron stands in the shallows');
    const { version } = saved(await store.save(photoPath, recipe, { version: null }));
    const before = await readFile(recipePath);
    await writeFile(join(photos, 'ballast'), Buffer.alloc(2 ** 20)).catch(() => {});
    const ours = broader(recipe, 5, 1);
    const failed = await store.save(photoPath, ours, { version });
    expect(failed).toMatchObject({ kind: 'failed', message: expect.stringMatching(/disk is full.*safe in/) });
    expect(await readFile(recipePath)).toEqual(before);
    expect((await readdir(photos)).filter((name) => name.startsWith('.'))).toEqual([]);
    // The program is closed and opened again.
    const later = newStore({ dataFolder });
    const loaded = opened(await later.load(photoPath, photo));
    expect(holdsEveryState(loaded.recipe, ours)).toBe(true);
    expect(loaded.remarks).toEqual([expect.stringContaining('brought back')]);
    await rm(join(photos, 'ballast'));
    saved(await later.save(photoPath, loaded.recipe, loaded));
    expect(opened(await later.load(photoPath, photo)).remarks).toEqual([]);
    expect(await readdir(join(dataFolder, 'rescued'))).toEqual([]);
  });

  it('is a read-only disk: the recipe is rescued, or goes to the mirror', async (context) => {
    const { store, root, photos, photoPath, photo, recipe, recipePath, dataFolder } = await storeWithPhoto();
    const why = mountDisk(photos, 'size=256k');
    if (why) return context.skip(why);
    await writeFile(photoPath, 'the heron stands in the shallows');
    const { version } = saved(await store.save(photoPath, recipe, { version: null }));
    makeReadOnly(photos);
    const ours = changeParameters(recipe, { 'body.brush': '5mm' });
    const failed = await store.save(photoPath, ours, { version });
    expect(failed).toMatchObject({ kind: 'failed', message: expect.stringMatching(/read-only.*safe in/) });
    const mirrorFolder = join(root, 'mirror');
    const mirroring = newStore({ dataFolder, mirrorFolder });
    const mirrored = saved(await mirroring.save(photoPath, ours, { path: recipePath, version }));
    expect(mirrored.path).toBe(recipeInMirror(photoPath, mirrorFolder));
    expect(mirrored.remarks).toEqual([expect.stringContaining(mirrored.path)]);
    const loaded = opened(await mirroring.load(photoPath, photo));
    expect(loaded.path).toBe(mirrored.path);
    expect(currentParameters(loaded.recipe)).toEqual(currentParameters(ours));
    const again = saved(await mirroring.save(photoPath, broader(loaded.recipe, 6, 3), loaded));
    expect(again.path).toBe(mirrored.path);
    expect(currentHistory(opened(await mirroring.load(photoPath, photo)).recipe).states).toHaveLength(2);
  });

  it('is a folder that is gone', async () => {
    const { store, root, photos, photoPath, recipe } = await storeWithPhoto();
    const { version } = saved(await store.save(photoPath, recipe, { version: null }));
    await rename(photos, join(root, 'elsewhere'));
    const failed = await store.save(photoPath, broader(recipe, 5, 1), { version });
    expect(failed).toMatchObject({
      kind: 'failed',
      message: expect.stringMatching(/heron\.jpg\.oxgall\.json.*safe in/),
    });
  });

  it('is a recipe that someone set read-only', async () => {
    const { store, photoPath, photo, recipe, recipePath } = await storeWithPhoto();
    const { version } = saved(await store.save(photoPath, recipe, { version: null }));
    await chmod(recipePath, 0o444);
    const ours = broader(recipe, 5, 1);
    const failed = await store.save(photoPath, ours, { version });
    expect(failed).toMatchObject({ kind: 'failed', message: expect.stringMatching(/set read-only/) });
    expect(holdsEveryState(opened(await store.load(photoPath, photo)).recipe, ours)).toBe(true);
    await chmod(recipePath, 0o644);
    saved(await store.save(photoPath, ours, { version }));
  });

  it('is the data folder: the recipe is saved all the same, without a second copy', async () => {
    const { root, photoPath, photo, recipe } = await storeWithPhoto();
    await writeFile(join(root, 'file'), '');
    const store = newStore({ dataFolder: join(root, 'file', 'data') });
    const result = saved(await store.save(photoPath, recipe, { version: null }));
    expect(result.remarks).toEqual([expect.stringContaining('No second copy')]);
    expect(opened(await store.load(photoPath, photo)).recipe).toEqual(recipe);
  });

  it('takes nothing that could not be opened again', async () => {
    const { store, photoPath, recipe } = await storeWithPhoto();
    const broken = { ...recipe, work: { ...recipe.work, stateId: 'ab'.repeat(32) } };
    expect(await store.save(photoPath, broken, { version: null })).toMatchObject({
      kind: 'failed',
      message: expect.stringMatching(/a state of Low Water/),
    });
  });
});

describe('work rescued by two windows', () => {
  it('comes back from both', async () => {
    const { store, root, photos, photoPath, photo, recipe, dataFolder } = await storeWithPhoto();
    const other = newStore({ dataFolder });
    await rename(photos, join(root, 'elsewhere'));
    const ours = broader(recipe, 5, 1);
    const theirs = broader(recipe, 6, 2);
    await store.save(photoPath, ours, { version: null });
    await other.save(photoPath, theirs, { version: null });
    await rename(join(root, 'elsewhere'), photos);
    const { recipe: both } = opened(await newStore({ dataFolder }).load(photoPath, photo));
    expect(holdsEveryState(both, ours) && holdsEveryState(both, theirs)).toBe(true);
  });
});

describe('locks', () => {
  it('of a killed program and of a sleeping machine do not stand in the way for ever', async () => {
    const { store, photoPath, recipe, dataFolder } = await storeWithPhoto();
    saved(await store.save(photoPath, recipe, { version: null }));
    const lock = join(dataFolder, 'locks', placeOf(`${photoPath}.oxgall.json`));
    await mkdir(join(dataFolder, 'locks'), { recursive: true });
    await writeFile(lock, JSON.stringify({ host: hostname(), processId: 2 ** 22 + 1, id: 'x' }));
    saved(
      await store
        .saveKeepingBoth(photoPath, broader(recipe, 5, 1), { version: null })
        .then((kept) => kept.saved),
    );
    await writeFile(lock, JSON.stringify({ host: 'another', processId: 1, id: 'x' }));
    const longAgo = new Date(Date.now() - 60_000);
    await utimes(lock, longAgo, longAgo);
    saved(
      await store
        .saveKeepingBoth(photoPath, broader(recipe, 6, 2), { version: null })
        .then((kept) => kept.saved),
    );
    expect(await readdir(join(dataFolder, 'locks'))).toEqual([]);
  });
});
