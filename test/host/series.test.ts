import { mkdir, readdir, readFile, writeFile } from 'node:fs/promises';
import { join } from 'node:path';
import { beforeEach, describe, expect, it, onTestFinished } from 'vitest';
import { seriesFileName } from '../../core/series/seriesDocument.ts';
import type { SeriesView } from '../../main/host/api/seriesCommands.ts';
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
    const led = await testHost.caller.call('changeSeries', { seriesId, change: { lead: 'plate-9.png' } });
    expect(keyOf(led, 'plate-9.png')).not.toBe(keyOf(half, 'plate-9.png'));
  });
});
