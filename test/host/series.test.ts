import { mkdir, readdir, readFile, stat, writeFile } from 'node:fs/promises';
import { join } from 'node:path';
import { beforeEach, describe, expect, it, onTestFinished } from 'vitest';
import { seriesFileName } from '../../core/series/seriesDocument.ts';
import type { RunView } from '../../main/host/api/runCommands.ts';
import type { SeriesView } from '../../main/host/api/seriesCommands.ts';
import { readRunLogs } from '../../main/series/runLog.ts';
import { makePhoto, makeTestHost, type TestHost } from './testHost.ts';

let testHost: TestHost;
let folder: string;

beforeEach(async () => {
  testHost = await makeTestHost();
  onTestFinished(() => testHost.close());
  folder = join(testHost.photos, 'ferry');
  await mkdir(folder);
  for (const name of ['plate-10.png', 'plate-9.png', 'plate-1.png'])
    await makePhoto(join(folder, name), 240, 160);
  await testHost.host.offerPath(folder);
});

const open = () => testHost.caller.call('openSeries', { path: folder });

/** Reads the series until it is as wished. */
async function until(seriesId: string, isReady: (view: SeriesView) => boolean): Promise<SeriesView> {
  for (let tries = 0; tries < 400; tries++) {
    const view = await testHost.caller.call('readSeries', { seriesId });
    if (isReady(view)) return view;
    await new Promise((resolve) => setTimeout(resolve, 25));
  }
  throw new Error('Expected the series to get ready');
}

describe('a folder as a series', () => {
  it('hangs in natural order with the first frame as the lead', async () => {
    const { frames, settings, name } = await open();
    expect(name).toBe('ferry');
    expect(frames.map(({ frameId }) => frameId)).toEqual(['plate-1.png', 'plate-9.png', 'plate-10.png']);
    expect(settings).toMatchObject({ lead: 'plate-1.png', leftOut: [], look: { preset: 'low-water' } });
  });

  it('is refused where nobody chose the folder, and where it holds no photos', async () => {
    await expect(testHost.caller.call('openSeries', { path: '/etc' })).rejects.toMatchObject({
      kind: 'NotAllowed',
    });
    const empty = join(testHost.photos, 'empty');
    await mkdir(empty);
    await testHost.host.offerPath(empty);
    await expect(testHost.caller.call('openSeries', { path: empty })).rejects.toMatchObject({
      kind: 'FileError',
    });
  });

  it('writes nothing until something is changed, and then remembers it', async () => {
    const first = await open();
    await testHost.caller.call('closeSeries', { seriesId: first.seriesId });
    expect(await readdir(folder)).not.toContain(seriesFileName);
    const { seriesId } = await open();
    const change = { lead: 'plate-9.png', leftOut: ['plate-10.png'] };
    await testHost.caller.call('changeSeries', { seriesId, change });
    await testHost.caller.call('closeSeries', { seriesId });
    expect(JSON.parse(await readFile(join(folder, seriesFileName), 'utf8'))).toMatchObject({
      format: 'oxgall-series',
      ...change,
    });
    expect((await open()).settings).toMatchObject(change);
  });

  it('puts a series file that it cannot read aside before it saves its own', async () => {
    const damaged = '{"format": "oxgall-series", "schema": 1';
    await writeFile(join(folder, seriesFileName), damaged);
    const { seriesId, problems } = await open();
    expect(problems).toHaveLength(1);
    await testHost.caller.call('changeSeries', { seriesId, change: { lead: null } });
    await testHost.caller.call('closeSeries', { seriesId });
    expect(await readFile(join(folder, `${seriesFileName}.other`), 'utf8')).toBe(damaged);
  });

  it('says which frame cannot be read, and shows the others', async () => {
    await writeFile(join(folder, 'plate-2.jpg'), 'no photo');
    const { seriesId } = await open();
    const view = await until(seriesId, ({ frames }) =>
      frames.every(({ widthPx, state }) => widthPx > 0 || state === 'unreadable'),
    );
    const byName = Object.fromEntries(view.frames.map((frame) => [frame.frameId, frame.state]));
    expect(byName['plate-2.jpg']).toBe('unreadable');
    expect(view.frames.filter(({ state }) => state !== 'unreadable')).toHaveLength(3);
    expect(view.problems.map(({ name }) => name)).toEqual(['plate-2.jpg']);
  });
});

describe('the picture of a frame', () => {
  it('is no larger than a small picture needs, and comes from the cache the second time', async () => {
    await makePhoto(join(folder, 'plate-3.jpg'), 2400, 1600);
    const { seriesId } = await open();
    await until(seriesId, ({ frames }) => frames.every(({ widthPx }) => widthPx > 0));
    const ask = () =>
      testHost.caller.callForFrame('paintFramePicture', {
        seriesId,
        frameId: 'plate-3.jpg',
        longEdgePx: 256,
        rough: true,
      });
    const { header, planes } = await ask();
    expect(header.widthPx).toBeGreaterThanOrEqual(150);
    expect(header.widthPx).toBeLessThan(320);
    expect(header.widthPx / header.heightPx).toBeCloseTo(1.5, 1);
    expect(planes.rgba).toHaveLength(header.widthPx * header.heightPx * 4);
    const painted = testHost.engine.paintingsStarted;
    await ask();
    expect(testHost.engine.paintingsStarted).toBe(painted);
    expect(testHost.engine.openPhotos).toBe(0);
  });

  it('has another key when the look, the lead or the match changes, and only then', async () => {
    const { seriesId, settings } = await open();
    const ready = await until(seriesId, ({ frames }) => frames.every(({ state }) => state === 'ready'));
    const keyOf = (view: SeriesView, name: string) =>
      view.frames.find(({ frameId }) => frameId === name)!.pictureKey;
    const before = keyOf(ready, 'plate-9.png');
    const left = await testHost.caller.call('changeSeries', {
      seriesId,
      change: { leftOut: ['plate-10.png'] },
    });
    expect(keyOf(left, 'plate-9.png')).toBe(before);
    const match = { ...settings.match, amount01: 0.5 };
    const half = await testHost.caller.call('changeSeries', { seriesId, change: { match } });
    expect(keyOf(half, 'plate-9.png')).not.toBe(before);
    const out = await testHost.caller.call('changeSeries', {
      seriesId,
      change: { leftOut: ['plate-1.png'] },
    });
    // A lead that is not painted leads on.
    expect(keyOf(out, 'plate-9.png')).toBe(keyOf(half, 'plate-9.png'));
    const led = await testHost.caller.call('changeSeries', { seriesId, change: { lead: 'plate-9.png' } });
    expect(keyOf(led, 'plate-9.png')).not.toBe(keyOf(half, 'plate-9.png'));
  });
});

describe('a run of the series', () => {
  const outFolder = () => join(folder, 'painted');
  const start = (seriesId: string) => testHost.caller.call('startRun', { seriesId, outFolder: outFolder() });

  /** Reads the run until it is as wished. */
  async function untilRun(seriesId: string, isReached: (run: RunView) => boolean): Promise<RunView> {
    for (let tries = 0; tries < 1500; tries++) {
      const { run } = await testHost.caller.call('readRun', { seriesId });
      if (run && isReached(run)) return run;
      await new Promise((resolve) => setTimeout(resolve, 10));
    }
    throw new Error('Expected the run to get that far');
  }

  const hasEnded = ({ state }: RunView) => state !== 'running' && state !== 'paused';
  const statesOf = ({ frames }: RunView) =>
    Object.fromEntries(Object.entries(frames).map(([frameId, { state }]) => [frameId, state]));
  const namesPainted = async () => {
    const entries = await readRunLogs(outFolder());
    return entries.flatMap((entry) => (entry.kind === 'painted' ? [entry.name] : []));
  };

  beforeEach(async () => {
    for (const number of [11, 12, 13]) await makePhoto(join(folder, `plate-${number}.png`), 240, 160);
  });

  it('paints all but what is left out, in the format of the series, and logs it', async () => {
    const { seriesId, settings } = await open();
    const output = { ...settings.output, format: 'png' as const };
    const change = { leftOut: ['plate-12.png', 'plate-13.png'], output };
    await testHost.caller.call('changeSeries', { seriesId, change });
    await start(seriesId);
    const run = await untilRun(seriesId, hasEnded);
    expect(run).toMatchObject({ state: 'done', total: 4, done: 4, failed: 0, fraction01: 1 });
    const names = ['plate-1.png', 'plate-9.png', 'plate-10.png', 'plate-11.png'];
    expect(Object.keys(run.frames)).toEqual(names);
    expect(Object.values(run.frames).map(({ path }) => path)).toEqual(
      names.map((name) => join(outFolder(), name)),
    );
    expect((await namesPainted()).sort()).toEqual([...names].sort());
    expect((await readdir(outFolder())).filter((name) => !name.endsWith('.jsonl')).sort()).toEqual(
      [...names].sort(),
    );
    expect(testHost.engine.openPhotos).toBe(0);
  });

  it('begins no frame while it is paused, and paints what was asked for first when it goes on', async () => {
    testHost.engine.pauseMs = 1;
    const { seriesId } = await open();
    await start(seriesId);
    await testHost.caller.call('pauseRun', { seriesId });
    const rested = await untilRun(seriesId, ({ frames }) =>
      Object.values(frames).every(({ state }) => state !== 'painting'),
    );
    expect(rested.state).toBe('paused');
    const waiting = Object.keys(rested.frames).filter((name) => rested.frames[name].state === 'waiting');
    expect(waiting.length).toBeGreaterThanOrEqual(4);
    await new Promise((resolve) => setTimeout(resolve, 200));
    expect(statesOf((await testHost.caller.call('readRun', { seriesId })).run!)).toEqual(statesOf(rested));
    const before = await namesPainted();
    await testHost.caller.call('prioritise', { seriesId, frameIds: ['plate-13.png', 'plate-12.png'] });
    expect(await testHost.caller.call('resumeRun', { seriesId })).toMatchObject({ state: 'running' });
    expect(await untilRun(seriesId, hasEnded)).toMatchObject({ state: 'done', done: 6 });
    const begun = (await readRunLogs(outFolder())).flatMap((entry) =>
      entry.kind === 'begun' && !before.includes(entry.name) ? [entry.name] : [],
    );
    expect(begun.slice(0, 2).sort()).toEqual(['plate-12.png', 'plate-13.png']);
  });

  it('is stopped, and goes on later with nothing painted twice', async () => {
    testHost.engine.pauseMs = 1;
    const { seriesId } = await open();
    await start(seriesId);
    await untilRun(seriesId, ({ done }) => done >= 2);
    const stopped = await testHost.caller.call('cancelRun', { seriesId });
    expect(stopped.state).toBe('cancelled');
    expect(stopped.done).toBeLessThan(6);
    expect(Object.values(statesOf(stopped)).filter((state) => state === 'painting')).toEqual([]);
    expect(testHost.engine.openPhotos).toBe(0);
    const early = Object.keys(stopped.frames).filter((name) => stopped.frames[name].state === 'painted');
    const timesOf = () =>
      Promise.all(early.map(async (name) => (await stat(stopped.frames[name].path!)).mtimeMs));
    const times = await timesOf();
    testHost.engine.pauseMs = 0;
    await start(seriesId);
    const run = await untilRun(seriesId, hasEnded);
    expect(run).toMatchObject({ state: 'done', total: 6, done: 6 });
    for (const name of Object.keys(run.frames))
      expect(run.frames[name].state).toBe(early.includes(name) ? 'kept' : 'painted');
    for (const name of early) expect(run.frames[name].message).toMatch(/earlier run/);
    expect(await timesOf()).toEqual(times);
    expect((await namesPainted()).sort()).toEqual(Object.keys(run.frames).sort());
    const others = (await readdir(outFolder())).filter((name) => !/^plate-\d+\.jpg$|\.jsonl$/.test(name));
    expect(others).toEqual([]);
  });

  it('is stopped while it is paused', async () => {
    const { seriesId } = await open();
    await start(seriesId);
    await testHost.caller.call('pauseRun', { seriesId });
    expect(await testHost.caller.call('cancelRun', { seriesId })).toMatchObject({ state: 'cancelled' });
    // The folder is free again.
    await start(seriesId);
    expect(await untilRun(seriesId, hasEnded)).toMatchObject({ state: 'done', done: 6 });
  });

  it('paints the others where one cannot be read, and says why', async () => {
    await writeFile(join(folder, 'plate-2.jpg'), 'no photo');
    const { seriesId } = await open();
    await start(seriesId);
    const run = await untilRun(seriesId, hasEnded);
    expect(run).toMatchObject({ state: 'done', total: 7, done: 6, failed: 1 });
    expect(run.frames['plate-2.jpg']).toMatchObject({ state: 'failed', path: null });
    expect(run.frames['plate-2.jpg'].message).toContain('plate-2.jpg');
    expect(await readFile(join(folder, 'plate-2.jpg'), 'utf8')).toBe('no photo');
  });

  it('leaves a file alone that lies where a painting would go', async () => {
    await mkdir(outFolder());
    await writeFile(join(outFolder(), 'plate-9.jpg'), 'by another hand');
    const { seriesId } = await open();
    await start(seriesId);
    const run = await untilRun(seriesId, hasEnded);
    expect(run.frames['plate-9.png']).toMatchObject({
      state: 'painted',
      path: join(outFolder(), 'plate-9 2.jpg'),
    });
    expect(await readFile(join(outFolder(), 'plate-9.jpg'), 'utf8')).toBe('by another hand');
  });

  it('is refused among the photos themselves, and twice at once', async () => {
    testHost.engine.pauseMs = 1;
    const { seriesId } = await open();
    await expect(testHost.caller.call('startRun', { seriesId, outFolder: folder })).rejects.toMatchObject({
      kind: 'BadRequest',
    });
    const both = await Promise.allSettled([start(seriesId), start(seriesId)]);
    expect(both.map(({ status }) => status).sort()).toEqual(['fulfilled', 'rejected']);
    await testHost.caller.call('cancelRun', { seriesId });
  });
});
