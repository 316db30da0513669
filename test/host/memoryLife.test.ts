import { createHash } from 'node:crypto';
import { mkdir, readdir, readFile, rename, stat, writeFile } from 'node:fs/promises';
import { join } from 'node:path';
import { afterEach, beforeEach, describe, expect, it } from 'vitest';
import { readEvents } from '../../core/hostProtocol/eventStream.ts';
import { fullParameters } from '../../core/presets/parametersSchema.ts';
import { defaultOutputSettings } from '../../core/recipes/outputSettings.ts';
import { EventHub } from '../../main/host/eventHub.ts';
import { PhotoMemories } from '../../main/host/photoMemories.ts';
import { startLoopbackShell } from '../shells/runningShell.ts';
import { temporaryFolder } from '../store/storeFolders.ts';
import { base, makePhoto, type TestHost } from './testHost.ts';
import { hostOn, keepNoted, notesOf, openAt, openNew, statesOf, untilSaved, workOf } from './workOnPhoto.ts';

let data: string;
let folder: string;
let t: TestHost;
beforeEach(async () => {
  data = await temporaryFolder();
  folder = await temporaryFolder();
  t = await hostOn(data);
});
afterEach(() => t.close());

const recipeOf = async (path: string) => JSON.parse(await readFile(`${path}.oxgall.json`, 'utf8'));

describe('work that was not saved yet', () => {
  it('is on the disk when the host has closed', async () => {
    const { photoId, memory, path } = await openNew(t, folder);
    await t.caller.call('layWork', { photoId, work: workOf(memory, { 'body.hold': 0.33 }) });
    await t.close();
    expect((await recipeOf(path)).work.changes).toEqual({ 'body.hold': 0.33 });
    t = await hostOn(data);
  });

  it('is on the disk when its photo made room for others', async () => {
    const { photoId, memory, path } = await openNew(t, folder);
    await t.caller.call('layWork', { photoId, work: workOf(memory, { 'body.hold': 0.44 }) });
    for (const name of ['a.png', 'b.png', 'c.png']) await openNew(t, folder, name);
    expect((await recipeOf(path)).work.changes).toEqual({ 'body.hold': 0.44 });
    expect((await readdir(folder)).filter((name) => name.endsWith('.json'))).toHaveLength(1);
  });

  for (const signal of ['SIGTERM', 'SIGINT', 'SIGHUP'] as const)
    it(`is on the disk when the built program was ended by ${signal}`, async () => {
      const path = await makePhoto(join(folder, 'heron.png'), 120, 80);
      const shell = await startLoopbackShell([path], { OXGALL_DATA: data });
      await shell.caller.call('startSession', {});
      const { photoId, memory } = await shell.caller.call('openPhoto', { path });
      await shell.caller.call('layWork', { photoId, work: workOf(memory, { 'body.hold': 0.55 }) });
      const gone = new Promise((resolve) => shell.child.on('exit', resolve));
      shell.child.kill(signal);
      expect(await gone).toBe(0);
      expect((await recipeOf(path)).work.changes).toEqual({ 'body.hold': 0.55 });
    });
});

describe('a delivery', () => {
  it('is noted though its photo was closed when its file was there', async () => {
    const { photoId, memory, path } = await openNew(t, folder);
    const painted = join(folder, 'out.png');
    await writeFile(painted, 'a painting');
    await t.caller.call('closePhoto', { photoId });
    const memories = new PhotoMemories({ loadStores: t.parts.loadStores, events: new EventHub() });
    const hash = 'ab'.repeat(32);
    await memories.noteDelivered(
      { photoId, path },
      {
        path: painted,
        sha256: hash,
        pixelsSha256: hash,
        parameters: { ...fullParameters(statesOf(memory)[0].parameters), 'body.hold': 0.6 },
        output: defaultOutputSettings(),
      },
    );
    const { deliveries, states } = (await recipeOf(path)).histories[0];
    expect(deliveries).toMatchObject([{ path: 'out.png', sha256: hash, stateId: states[1].id }]);
    expect(states[1].parameters['body.hold']).toBe(0.6);
  });
});

describe('a photo that was moved', () => {
  it('gets its recipe back when the folder is opened, before anybody opens the photo', async () => {
    const { photoId, path } = await openNew(t, folder);
    await keepNoted(t, photoId, 'kept');
    await t.caller.call('closePhoto', { photoId });
    const renamed = join(folder, 'plate 7.png');
    await rename(path, renamed);
    await t.host.offerPath(folder);
    await t.caller.call('openSeries', { path: folder });
    await expect.poll(() => stat(`${renamed}.oxgall.json`).then(Boolean, () => false)).toBe(true);
    await expect.poll(() => readdir(folder)).not.toContain('heron.png.oxgall.json');
    expect(await readdir(join(data, 'bin', 'recipes'))).toEqual(['heron.png.oxgall.json']);
    expect(notesOf((await openAt(t, renamed)).memory)).toContain('kept');
  });

  it('is known where another photo has taken its name', async () => {
    const { photoId, path } = await openNew(t, folder);
    await keepNoted(t, photoId, 'kept');
    await t.caller.call('closePhoto', { photoId });
    const away = join(folder, 'card 1');
    await mkdir(away);
    await rename(path, join(away, 'heron.png'));
    await makePhoto(path, 50, 40);
    const { memory } = await openAt(t, join(away, 'heron.png'));
    expect(notesOf(memory)).toContain('kept');
    expect(memory.remarks.join()).toContain('moved here');
    expect((await openAt(t, path)).memory.photo).toBe('changed');
  });

  it('brings the newest of its recipes along where it was moved twice', async () => {
    const { photoId, path } = await openNew(t, folder);
    await keepNoted(t, photoId, 'first place');
    await t.caller.call('closePhoto', { photoId });
    let last = path;
    for (const note of ['second place', 'third place']) {
      const away = join(folder, note);
      await mkdir(away);
      await rename(last, join(away, 'heron.png'));
      last = join(away, 'heron.png');
      const opened = await openAt(t, last);
      await keepNoted(t, opened.photoId, note, note.length / 100);
      await t.caller.call('closePhoto', { photoId: opened.photoId });
    }
    await mkdir(join(folder, 'last'));
    await rename(last, join(folder, 'last', 'heron.png'));
    const { memory } = await openAt(t, join(folder, 'last', 'heron.png'));
    expect(notesOf(memory)).toEqual(['', 'first place', 'second place', 'third place']);
  });
});

describe('a photo whose bytes have changed', () => {
  it('keeps its recipe, says so, and notes deliveries by the photo that was painted', async () => {
    const { photoId, path } = await openNew(t, folder);
    const kept = await keepNoted(t, photoId, 'kept');
    await t.caller.call('closePhoto', { photoId });
    await makePhoto(path, 90, 60);
    const { photoId: again, memory } = await openAt(t, path);
    expect(memory.photo).toBe('changed');
    expect(memory.remarks.join()).toMatch(/bytes have changed/);
    const saved = await t.caller.call('savePainting', {
      photoId: again,
      parameters: statesOf(kept)[0].parameters as never,
      folder,
      name: 'out.png',
      output: { format: 'png' },
    });
    const [delivery] = saved.memory.recipe.histories[0].deliveries;
    const hash = createHash('sha256')
      .update(await readFile(path))
      .digest('hex');
    expect(delivery.photoSha256).toBe(hash);
    // From now on the recipe is this photo's.
    await t.caller.call('closePhoto', { photoId: again });
    const later = (await openAt(t, path)).memory;
    expect(later).toMatchObject({ photo: 'same', remarks: [], recipe: { photo: { sha256: hash } } });
    expect(notesOf(later)).toEqual(notesOf(saved.memory));
  });

  it('does not become another photo’s by being tried on it', async () => {
    const { photoId, path, memory } = await openNew(t, folder);
    await keepNoted(t, photoId, 'kept');
    await t.caller.call('closePhoto', { photoId });
    await makePhoto(path, 90, 60);
    const other = await openAt(t, path);
    await t.caller.call('layWork', {
      photoId: other.photoId,
      work: workOf(other.memory, { 'body.hold': 0.1 }),
    });
    expect((await untilSaved(t, other.photoId)).recipe.photo).toEqual(memory.recipe.photo);
  });
});

describe('a draft of the time before recipes', () => {
  const draftFile = (path: string) =>
    join(data, 'drafts', `${createHash('sha256').update(path).digest('hex')}.json`);

  async function photoWithDraft(parameters: object) {
    const path = await makePhoto(join(folder, 'heron.png'), 120, 80);
    await mkdir(join(data, 'drafts'));
    const draft = { parameters, presetName: 'reed-pen', view: {} };
    const file = { format: 'oxgall-draft', schema: 1, path, keptAt: '2031-04-05T06:07:08.009Z', draft };
    await writeFile(draftFile(path), JSON.stringify(file));
    return path;
  }

  it('is taken in and gone once the recipe holds it', async () => {
    const path = await photoWithDraft({ 'body.hold': 0.77, 'body.gone': 3, 'body.coats': 'many' });
    const { photoId, memory } = await openAt(t, path);
    expect(memory.recipe.work).toMatchObject({ preset: 'reed-pen', changes: { 'body.hold': 0.77 } });
    expect((await untilSaved(t, photoId)).saved.kind).toBe('saved');
    expect((await recipeOf(path)).work.changes).toEqual({ 'body.hold': 0.77 });
    expect(await readdir(join(data, 'drafts'))).toEqual([]);
  });
});

describe('the window', () => {
  it('hears of a save that failed', async () => {
    const { photoId, memory, path } = await openNew(t, folder);
    await mkdir(`${path}.oxgall.json`);
    const abort = new AbortController();
    const response = await t.host.fetch(new Request(`${base}/api/events`, { signal: abort.signal }));
    await t.caller.call('layWork', { photoId, work: workOf(memory, { 'body.hold': 0.3 }) });
    for await (const event of readEvents(response.body!)) if (event.name === 'memoryChanged') break;
    abort.abort();
    expect((await t.caller.call('readMemory', { photoId })).saved.kind).toBe('failed');
  });
});
