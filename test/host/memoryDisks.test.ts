import { chmod, mkdir, readdir, readFile, rm, stat, writeFile } from 'node:fs/promises';
import { join } from 'node:path';
import { afterEach, beforeEach, describe, expect, it } from 'vitest';
import { chooseMirrorFolder } from '../../main/store/settings.ts';
import { makeReadOnly, mountDisk, temporaryFolder } from '../store/storeFolders.ts';
import { makePhoto, type TestHost } from './testHost.ts';
import { hostOn, keepNoted, notesOf, openAt, openNew, statesOf, untilSaved } from './workOnPhoto.ts';

// Disks and folders that take no recipe. Whatever happens, the photo can be worked on and painted, the user is told
// plainly, and the work is there when the photo is opened again.

let data: string;
let t: TestHost;
beforeEach(async () => {
  data = await temporaryFolder();
  t = await hostOn(data);
});
afterEach(() => t.close());

/** Ends the program and starts it again. */
async function startAgain(): Promise<void> {
  await t.close();
  t = await hostOn(data);
}

/** A disk of its own with one photo on it. */
async function photoOnDisk(skip: (reason: string) => never, options: string): Promise<string> {
  const disk = await temporaryFolder();
  const reason = mountDisk(disk, options);
  if (reason) skip(reason);
  return makePhoto(join(disk, 'heron.png'), 120, 80);
}

/** Takes all the room that is left. */
async function fill(folder: string): Promise<string> {
  const path = join(folder, 'filler');
  await writeFile(path, new Uint8Array(64 * 2 ** 20)).catch(() => {});
  expect((await stat(path)).size).toBeGreaterThan(0);
  return path;
}

describe('a full disk', () => {
  it('keeps the old recipe, says so, and has lost nothing when there is room again', async ({ skip }) => {
    const path = await photoOnDisk(skip, 'size=512k');
    const { photoId, folder } = await openAt(t, path);
    expect((await keepNoted(t, photoId, 'before')).saved.kind).toBe('saved');
    const recipePath = `${path}.oxgall.json`;
    const before = await readFile(recipePath, 'utf8');
    const filler = await fill(folder);
    const failed = await keepNoted(t, photoId, 'while full', 0.6);
    expect(failed.saved.kind).toBe('failed');
    expect(failed.saved.message).toMatch(/full.*Free some space.*safe in /);
    expect(await readFile(recipePath, 'utf8')).toBe(before);
    // Painting goes on, to another disk.
    const out = await temporaryFolder();
    await t.host.offerPath(await makePhoto(join(out, 'other.png'), 8, 8));
    const parameters = statesOf(failed)[0].parameters as never;
    const saved = await t.caller.call('savePainting', {
      photoId,
      parameters,
      folder: out,
      name: 'painted.png',
      output: { format: 'png' },
    });
    expect((await stat(saved.path)).size).toBeGreaterThan(0);
    await startAgain();
    await rm(filler);
    const again = await openAt(t, path);
    expect(notesOf(again.memory)).toEqual(expect.arrayContaining(['before', 'while full']));
    expect(again.memory.recipe.histories[0].deliveries).toMatchObject([{ path: saved.path }]);
    expect(again.memory.remarks.join()).toMatch(/brought back/);
    expect((await keepNoted(t, again.photoId, 'after')).saved.kind).toBe('saved');
    expect(await readFile(recipePath, 'utf8')).toContain('while full');
    expect((await readdir(folder)).sort()).toEqual(['heron.png', 'heron.png.oxgall.json']);
  });
});

describe('a folder that cannot be written', () => {
  it('has its recipes elsewhere, and they are found there', async ({ skip }) => {
    const path = await photoOnDisk(skip, 'size=2m');
    const { photoId, folder } = await openAt(t, path);
    makeReadOnly(folder);
    const kept = await keepNoted(t, photoId, 'from afar');
    expect(kept).toMatchObject({ access: 'mirrored', saved: { kind: 'saved' } });
    expect(kept.recipePath.startsWith(join(data, 'recipes-elsewhere'))).toBe(true);
    expect(kept.remarks.join()).toContain(`${folder} cannot be written: the recipe is in ${kept.recipePath}`);
    await startAgain();
    const again = await openAt(t, path);
    expect(again.memory).toMatchObject({ access: 'mirrored', isKept: true });
    expect(notesOf(again.memory)).toContain('from afar');
    expect((await keepNoted(t, again.photoId, 'and again')).saved.kind).toBe('saved');
    expect(await readdir(folder)).toEqual(['heron.png']);
  });

  it('has them in the folder the user has chosen; those kept before stay found', async ({ skip }) => {
    const path = await photoOnDisk(skip, 'size=2m');
    const second = await makePhoto(join(path, '..', 'ferry.png'), 100, 60);
    const first = await openAt(t, path);
    makeReadOnly(first.folder);
    const early = await keepNoted(t, first.photoId, 'in the usual place');
    const chosen = join(await temporaryFolder(), 'recipes');
    await chooseMirrorFolder(data, chosen);
    await startAgain();
    expect(notesOf((await openAt(t, path)).memory)).toContain('in the usual place');
    const { photoId } = await openAt(t, second);
    const late = await keepNoted(t, photoId, 'in the chosen place');
    expect(late.recipePath.startsWith(chosen)).toBe(true);
    expect(early.recipePath.startsWith(chosen)).toBe(false);
  });
});

describe('a recipe that cannot be written or read', () => {
  it('is left as it is where someone has set it read-only', async () => {
    const { photoId, path } = await openNew(t);
    await keepNoted(t, photoId, 'first');
    const recipePath = `${path}.oxgall.json`;
    const before = await readFile(recipePath, 'utf8');
    await chmod(recipePath, 0o444);
    const failed = await keepNoted(t, photoId, 'second', 0.7);
    expect(failed.saved).toMatchObject({ kind: 'failed' });
    expect(failed.saved.message).toMatch(/read-only.*Allow writing.*safe in/);
    expect(await readFile(recipePath, 'utf8')).toBe(before);
    await t.caller.call('closePhoto', { photoId });
    await chmod(recipePath, 0o644);
    const again = await openAt(t, path);
    expect(notesOf(again.memory)).toEqual(expect.arrayContaining(['first', 'second']));
  });

  it('does not keep the photo from being opened, nor the work from being safe', async () => {
    const path = await makePhoto(join(t.photos, 'heron.png'), 120, 80);
    // Something else has its name, which no permission can change: a folder.
    await mkdir(`${path}.oxgall.json`);
    const { photoId, memory } = await openAt(t, path);
    expect(memory.remarks.join()).toContain(`${path}.oxgall.json`);
    const failed = await keepNoted(t, photoId, 'all the same');
    expect(failed.saved.kind).toBe('failed');
    expect(failed.saved.message).toMatch(/safe in/);
    await t.caller.call('closePhoto', { photoId });
    expect(notesOf((await openAt(t, path)).memory)).toContain('all the same');
    expect((await stat(`${path}.oxgall.json`)).isDirectory()).toBe(true);
  });

  it('comes back from its copy where it was damaged, and the damaged one is put aside', async () => {
    const { photoId, path } = await openNew(t);
    await keepNoted(t, photoId, 'whole');
    await t.caller.call('closePhoto', { photoId });
    const recipePath = `${path}.oxgall.json`;
    const torn = (await readFile(recipePath, 'utf8')).slice(0, 400);
    await writeFile(recipePath, torn);
    const again = await openAt(t, path);
    expect(notesOf(again.memory)).toContain('whole');
    expect(again.memory.remarks.join()).toMatch(/last whole copy/);
    expect(await readFile(recipePath, 'utf8')).toBe(torn);
    await keepNoted(t, again.photoId, 'mended');
    expect(await readFile(`${recipePath}.damaged`, 'utf8')).toBe(torn);
    expect(await readFile(recipePath, 'utf8')).toContain('mended');
  });
});

describe('two windows on one photo', () => {
  it('of one program share one recipe', async () => {
    const { photoId, path } = await openNew(t);
    const other = await openAt(t, path);
    expect(other.photoId).toBe(photoId);
    await Promise.all([keepNoted(t, photoId, 'mine', 0.3), keepNoted(t, other.photoId, 'yours', 0.8)]);
    const both = await untilSaved(t, photoId);
    expect(notesOf(both).sort()).toEqual(['', 'mine', 'yours']);
  });

  it('of two programs: work in conflict outlives both of them', async () => {
    const elsewhere = await hostOn(await temporaryFolder());
    const { photoId, path } = await openNew(t, await temporaryFolder());
    const theirs = await openAt(elsewhere, path);
    await keepNoted(elsewhere, theirs.photoId, 'theirs');
    const conflict = await keepNoted(t, photoId, 'ours', 0.8);
    expect(conflict.saved.kind).toBe('conflict');
    expect(await readFile(`${path}.oxgall.json`, 'utf8')).not.toContain('ours');
    await elsewhere.close();
    // Nobody decides; the program is ended and started again.
    await startAgain();
    const again = await openAt(t, path);
    expect(notesOf(again.memory)).toEqual(expect.arrayContaining(['ours', 'theirs']));
  });
});
