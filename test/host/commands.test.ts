import { readdir, readFile, stat, symlink, writeFile } from 'node:fs/promises';
import { join } from 'node:path';
import sharp from 'sharp';
import { afterEach, beforeEach, describe, expect, it } from 'vitest';
import { readEvents } from '../../core/hostProtocol/eventStream.ts';
import { newCallId } from '../../core/hostProtocol/hostCaller.ts';
import type { HostError } from '../../core/hostProtocol/hostError.ts';
import { base, makePhoto, makeTestHost, type TestHost } from './testHost.ts';

let t: TestHost;
beforeEach(async () => {
  t = await makeTestHost();
});
afterEach(() => t.close());

async function openFresh(name = 'heron.png', widthPx = 120, heightPx = 80) {
  const path = await makePhoto(join(t.photos, name), widthPx, heightPx);
  await t.host.offerPath(path);
  return t.caller.call('openPhoto', { path });
}

const refusalOf = (promise: Promise<unknown>) =>
  promise.then(
    () => expect.fail('expected a refusal'),
    (error: HostError) => error,
  );

describe('the session', () => {
  it('tells what the first screen needs', async () => {
    const session = await t.caller.call('startSession', {});
    expect(session.presets.find(({ name }) => name === 'low-water')).toMatchObject({ isBuiltIn: true });
    expect(session).toMatchObject({ shell: 'loopback', opening: null, recents: [], presetProblems: [] });
  });

  it('tells once what the program was started with', async () => {
    const path = await makePhoto(join(t.photos, 'ferry.png'), 20, 20);
    await t.host.offerPath(path);
    expect((await t.caller.call('startSession', {})).opening).toEqual({ kind: 'photo', path });
    expect((await t.caller.call('startSession', {})).opening).toBeNull();
  });
});

describe('opening', () => {
  it('gives size, levels and noise floor of a small photo at once', async () => {
    const photo = await openFresh();
    expect(photo).toMatchObject({ stage: 'full', widthPx: 120, heightPx: 80, depth: 8, noiseFloor: 0.0125 });
    expect(photo.levels[1]).toEqual({ widthPx: 60, heightPx: 40 });
  });

  it('paints a large JPEG from a quick decode first, then from the whole', async () => {
    const path = await makePhoto(join(t.photos, 'wide.jpg'), 3201, 2133);
    await t.host.offerPath(path);
    const early = await t.caller.call('openPhoto', { path });
    expect(early).toMatchObject({ stage: 'quick', readyFromLevel: 2, widthPx: 3201, noiseFloor: null });
    const ask = { photoId: early.photoId, parameters: {}, level: 4, view: 'easel' };
    const quick = await t.caller.callForFrame('paintStrata', ask);
    expect(quick.header).toMatchObject({ source: 'quick', level: 4, levelWidthPx: 201, levelHeightPx: 134 });
    const whole = await t.caller.call('awaitPhoto', { photoId: early.photoId });
    expect(whole).toMatchObject({ stage: 'full', readyFromLevel: 0, noiseFloor: 0.0125 });
    expect(whole.levels).toEqual(early.levels);
    const sharpOne = await t.caller.callForFrame('paintStrata', ask);
    expect(sharpOne.header.source).toBe('full');
    // The two decodes are of the same picture: their means differ by less than one part in a hundred.
    const mean = (plane: ArrayLike<number>) => Array.from(plane).reduce((a, b) => a + b, 0) / plane.length;
    expect(mean(quick.planes.ground!) / mean(sharpOne.planes.ground!)).toBeCloseTo(1, 2);
    expect(t.engine.openPhotos).toBe(1);
  });

  it('names the file and the remedy where it is no photo', async () => {
    const path = join(t.photos, 'notes.jpg');
    await writeFile(path, 'low water at six');
    await t.host.offerPath(path);
    const error = await refusalOf(t.caller.call('openPhoto', { path }));
    expect(error.kind).toBe('FileError');
    expect(error.message).toContain(path);
    expect(error.remedy).not.toBe('');
    expect(t.engine.openPhotos).toBe(0);
  });

  it('closes the photo that was used least recently when a fourth is opened', async () => {
    const first = await openFresh('1.png');
    const second = await openFresh('2.png');
    await openFresh('3.png');
    await t.caller.callForFrame('paintStrata', {
      photoId: first.photoId,
      parameters: {},
      level: 3,
      view: 'easel',
    });
    await openFresh('4.png');
    const gone = { photoId: second.photoId, parameters: {}, level: 3, view: 'easel' };
    expect((await refusalOf(t.caller.callForFrame('paintStrata', gone))).kind).toBe('NotFound');
    expect(t.engine.openPhotos).toBe(3);
  });

  it('gives the memory back when a photo is closed in the middle of a painting', async () => {
    const photo = await openFresh();
    t.engine.pauseMs = 5;
    const ask = { photoId: photo.photoId, parameters: {}, level: 0, view: 'easel' };
    const painting = refusalOf(t.caller.callForFrame('paintStrata', ask));
    await expect.poll(() => t.engine.paintingsStarted).toBe(1);
    await t.caller.call('closePhoto', { photoId: photo.photoId });
    expect((await painting).kind).toBe('Cancelled');
    expect(t.engine).toMatchObject({ openPhotos: 0, paintingsAborted: 1 });
  });
});

describe('painting strata', () => {
  it('sends planes of the level and region asked for, and leaves out what is not wanted', async () => {
    const { photoId } = await openFresh();
    const region = { xPx: 10, yPx: 20, widthPx: 30, heightPx: 15 };
    const { header, planes } = await t.caller.callForFrame('paintStrata', {
      photoId,
      parameters: { 'body.crispness': 2 },
      level: 0,
      region,
      view: 'easel',
      omit: ['line'],
    });
    expect(header).toMatchObject({ region, level: 0, groundChannels: 3, groundDepth: 8, rough: false });
    expect(planes.line).toBeUndefined();
    expect(planes.ground?.slice(0, 3)).toEqual(Uint8Array.from([10, 20, 128]));
    // Five columns around the tenth, red equal to the column: their mean is the tenth again.
    expect(planes.body?.[0]).toBe(Math.round((10 / 255) * 65535));
  });

  it('clips a region that reaches over the edge and refuses one that lies outside', async () => {
    const { photoId } = await openFresh();
    const ask = { photoId, parameters: {}, level: 0, view: 'easel' };
    const over = { xPx: 100, yPx: 70, widthPx: 500, heightPx: 500 };
    const { header } = await t.caller.callForFrame('paintStrata', { ...ask, region: over });
    expect(header.region).toEqual({ xPx: 100, yPx: 70, widthPx: 20, heightPx: 10 });
    const outside = { xPx: 120, yPx: 0, widthPx: 5, heightPx: 5 };
    expect((await refusalOf(t.caller.callForFrame('paintStrata', { ...ask, region: outside }))).kind).toBe(
      'BadRequest',
    );
  });

  it('chooses a coarser level for a rough picture and says which', async () => {
    const { photoId } = await openFresh('large.png', 1200, 800);
    const ask = { photoId, parameters: {}, level: 0, view: 'easel', rough: true };
    const { header } = await t.caller.callForFrame('paintStrata', ask);
    expect(header).toMatchObject({ askedLevel: 0, level: 2, levelWidthPx: 300, rough: true });
    const region = { xPx: 601, yPx: 401, widthPx: 590, heightPx: 390 };
    const part = await t.caller.callForFrame('paintStrata', { ...ask, region });
    expect(part.header).toMatchObject({
      level: 1,
      region: { xPx: 300, yPx: 200, widthPx: 296, heightPx: 196 },
    });
  });

  it('lets only the newest call for a view live', async () => {
    const { photoId } = await openFresh();
    t.engine.pauseMs = 5;
    const ask = (crispness: number, view = 'easel') =>
      t.caller.callForFrame('paintStrata', {
        photoId,
        parameters: { 'body.crispness': crispness },
        level: 0,
        view,
      });
    const other = ask(1, 'other');
    const dragged = Array.from({ length: 12 }, (_, i) => ask(i + 2));
    const settled = await Promise.allSettled(dragged);
    const kinds = settled.map((one) => (one.status === 'fulfilled' ? 'painted' : one.reason.kind));
    expect(kinds).toEqual([...Array(11).fill('Superseded'), 'painted']);
    await other;
    expect(t.engine.lastParameters?.['body.crispness']).toBe(13);
    expect(t.engine.paintingsStarted - t.engine.paintingsAborted).toBe(2);
  });

  it('stops when the client aborts, and when told so by the call id', async () => {
    const { photoId } = await openFresh();
    t.engine.pauseMs = 5;
    const controller = new AbortController();
    const ask = { photoId, parameters: {}, level: 0, view: 'easel' };
    const aborted = refusalOf(t.caller.callForFrame('paintStrata', ask, { signal: controller.signal }));
    await expect.poll(() => t.engine.paintingsStarted).toBe(1);
    controller.abort();
    await aborted;
    await expect.poll(() => t.engine.paintingsAborted).toBe(1);
    const callId = newCallId();
    const told = refusalOf(t.caller.callForFrame('paintStrata', ask, { callId }));
    await expect.poll(() => t.engine.paintingsStarted).toBe(2);
    expect(await t.caller.call('cancelCall', { callId })).toEqual({ cancelled: true });
    expect((await told).kind).toBe('Cancelled');
    expect(await t.caller.call('cancelCall', { callId })).toEqual({ cancelled: false });
  });

  it('names the parameter that is out of range', async () => {
    const { photoId } = await openFresh();
    const ask = { photoId, parameters: { 'body.hold': 7 }, level: 0, view: 'easel' };
    const error = await refusalOf(t.caller.callForFrame('paintStrata', ask));
    expect(error).toMatchObject({ kind: 'ParameterError' });
    expect(error.message).toContain('body.hold');
  });

  it('paints small pictures one after another', async () => {
    const { photoId } = await openFresh('large.png', 1200, 800);
    const ask = () =>
      t.caller.callForFrame('paintSmallPicture', { photoId, parameters: {}, longEdgePx: 200 });
    const pictures = await Promise.all([ask(), ask(), ask()]);
    for (const { header, planes } of pictures) {
      expect(header).toMatchObject({ widthPx: 300, heightPx: 200 });
      expect(planes.rgba?.length).toBe(300 * 200 * 4);
    }
  });
});

describe('saving', () => {
  it('writes the painting, numbers a taken name, and tells how far it is', async () => {
    const photo = await openFresh();
    const listening = await t.host.fetch(new Request(`${base}/api/events`));
    const callId = newCallId();
    const ask = {
      photoId: photo.photoId,
      parameters: {},
      folder: t.photos,
      name: 'painted',
      output: { format: 'png' as const },
    };
    const first = await t.caller.call('savePainting', ask, { callId });
    const second = await t.caller.call('savePainting', ask);
    expect([first.name, second.name]).toEqual(['painted.png', 'painted 2.png']);
    expect(await sharp(first.path).metadata()).toMatchObject({ width: 120, height: 80, format: 'png' });
    expect(first.sizeBytes).toBe((await stat(first.path)).size);
    const stages: string[] = [];
    for await (const { name, data } of readEvents(listening.body!)) {
      const progress = data as { callId: string; stage: string; fraction01: number };
      if (name !== 'progress' || progress.callId !== callId) continue;
      stages.push(progress.stage);
      if (progress.fraction01 === 1) break;
    }
    expect(stages[0]).toBe('opening');
    expect(stages).toContain('body');
    expect(stages.at(-1)).toBe('writing');
    expect(t.engine.composedHeld).toBe(0);
  });

  it('leaves the photo and every other file as they were', async () => {
    const photo = await openFresh();
    const before = await readFile(photo.path);
    const ask = {
      photoId: photo.photoId,
      parameters: {},
      folder: t.photos,
      output: { format: 'png' as const },
    };
    const saved = await t.caller.call('savePainting', { ...ask, name: photo.name });
    expect(saved.name).toBe('heron 2.png');
    expect(await readFile(photo.path)).toEqual(before);
    const over = { ...ask, name: photo.name, whenTaken: 'replace' as const };
    expect((await refusalOf(t.caller.call('savePainting', over))).kind).toBe('NotAllowed');
  });

  it('refuses a name that leads elsewhere or that some system cannot hold', async () => {
    const photo = await openFresh();
    for (const name of ['../out', 'a/b', 'a\\b', '.hidden', 'nul.png', 'a\u0000b', 'what?', ' ']) {
      const ask = {
        photoId: photo.photoId,
        parameters: {},
        folder: t.photos,
        name,
        output: { format: 'png' as const },
      };
      expect((await refusalOf(t.caller.call('savePainting', ask))).kind, name).toBe('BadRequest');
    }
    expect(await readdir(t.photos)).toEqual(['heron.png']);
  });

  it('says in the file what painted it', async () => {
    const { photoId } = await openFresh();
    const ask = {
      photoId,
      parameters: {},
      folder: t.photos,
      name: 'told',
      output: { format: 'jpeg' as const },
    };
    const { path } = await t.caller.call('savePainting', ask);
    const exif = (await sharp(path).metadata()).exif!.toString('utf8');
    expect(exif).toMatch(/Painted by Oxgall: Low Water, State I\0/);
    expect(exif).toMatch(/Oxgall, engine \d+/);
  });

  it('leaves nothing behind when it is cancelled', async () => {
    const photo = await openFresh();
    t.engine.pauseMs = 5;
    const controller = new AbortController();
    const ask = {
      photoId: photo.photoId,
      parameters: {},
      folder: t.photos,
      name: 'p',
      output: { format: 'png' as const },
    };
    const saving = refusalOf(t.caller.call('savePainting', ask, { signal: controller.signal }));
    await expect.poll(() => t.engine.paintingsStarted).toBe(1);
    controller.abort();
    await saving;
    await expect.poll(() => t.engine.paintingsAborted).toBe(1);
    expect(await readdir(t.photos)).toEqual(['heron.png']);
  });
});

describe('what the user chose', () => {
  it('opens no photo that no answer has shown', async () => {
    const path = await makePhoto(join(t.photos, 'hidden.png'), 20, 20);
    expect((await refusalOf(t.caller.call('openPhoto', { path }))).kind).toBe('NotAllowed');
    await t.host.offerPath(t.photos);
    await t.caller.call('listFolder', { path: t.photos });
    expect((await t.caller.call('openPhoto', { path })).widthPx).toBe(20);
  });

  it('lists folders step by step, and none that was not shown', async () => {
    expect((await refusalOf(t.caller.call('listFolder', { path: t.photos }))).kind).toBe('NotAllowed');
    expect((await refusalOf(t.caller.call('listFolder', { path: `${t.photos}/../../..` }))).kind).toBe(
      'NotAllowed',
    );
    const home = await t.caller.call('listFolder', {});
    expect(home.crumbs.at(-1)?.path).toBe(home.path);
    for (const crumb of home.crumbs) await t.caller.call('listFolder', { path: crumb.path });
  });

  it('shows folders and photos in natural order and nothing else', async () => {
    await makePhoto(join(t.photos, 'plate 10.png'), 8, 8);
    await makePhoto(join(t.photos, 'plate 9.png'), 8, 8);
    await writeFile(join(t.photos, 'notes.txt'), 'low water');
    await writeFile(join(t.photos, '.secret.png'), '');
    await symlink(join(t.photos, 'nowhere.png'), join(t.photos, 'dangling.png'));
    await t.host.offerPath(t.folder);
    const listing = await t.caller.call('listFolder', { path: t.photos }).catch(async () => {
      await t.caller.call('listFolder', { path: t.folder });
      return t.caller.call('listFolder', { path: t.photos });
    });
    expect(listing.photos.map((photo) => photo.name)).toEqual(['plate 9.png', 'plate 10.png']);
    expect(listing.folders).toEqual([]);
  });

  it('writes into no folder that was not chosen', async () => {
    const photo = await openFresh();
    const ask = { photoId: photo.photoId, parameters: {}, name: 'p', output: { format: 'png' as const } };
    for (const folder of [t.folder, '/', 'photos', `${t.photos}/..`])
      expect((await refusalOf(t.caller.call('savePainting', { ...ask, folder }))).kind, folder).toBe(
        'NotAllowed',
      );
  });
});

describe('recents', () => {
  it('are remembered for the next session', async () => {
    const photo = await openFresh();
    await t.host.close();
    const next = await makeTestHost({ dataFolder: t.parts.dataFolder });
    try {
      const session = await next.caller.call('startSession', {});
      expect(session.recents).toMatchObject([{ path: photo.path, widthPx: 120, present: true }]);
      expect((await next.caller.call('forgetRecent', { path: photo.path })).recents).toEqual([]);
    } finally {
      await next.close();
    }
  });

  it('start empty where their file is damaged', async () => {
    await openFresh();
    await t.host.close();
    await writeFile(join(t.parts.dataFolder, 'recents.json'), '[]');
    const next = await makeTestHost({ dataFolder: t.parts.dataFolder });
    expect(await next.caller.call('startSession', {})).toMatchObject({ recents: [] });
    await next.close();
  });
});
