import { join } from 'node:path';
import { afterEach, beforeEach, describe, expect, it, vi } from 'vitest';
import { base, makePhoto, makeTestHost, type TestHost } from '../host/testHost.ts';
import { untilSaved } from '../host/workOnPhoto.ts';

/** The window's own modules, talking to a host over real files. */
async function windowOn({ host }: TestHost) {
  vi.resetModules();
  vi.stubGlobal('location', { origin: base });
  vi.stubGlobal('fetch', (request: Request) => host.fetch(request));
  const memory = await import('../../renderer/app/memoryWork.ts');
  const output = await import('../../renderer/app/outputWork.ts');
  const look = await import('../../renderer/state/lookStore.ts');
  return { ...memory, ...output, ...look };
}

let t: TestHost;
let path: string;
beforeEach(async () => {
  t = await makeTestHost();
  path = await makePhoto(join(t.photos, 'heron.png'), 120, 80);
});
afterEach(async () => {
  vi.unstubAllGlobals();
  await t.close();
});

async function openInWindow() {
  const window = await windowOn(t);
  await t.host.offerPath(path);
  const { photoId, memory } = await t.caller.call('openPhoto', { path });
  window.startLook(window.lookOf(memory));
  window.followMemory(memory);
  const recipeOutput = async () =>
    (await t.caller.call('readMemory', { photoId })).recipe.work.output as Record<string, unknown>;
  return { ...window, photoId, recipeOutput };
}

describe('print settings of the photo on the easel', () => {
  it('show at once, reach the recipe, and are there when the photo is opened again', async () => {
    const first = await openInWindow();
    const change = { bleedMm: 3, profile: 'srgb', format: 'tiff', depth: 16 } as const;
    first.changeOutput({ ...change, cropFrame: { aspect: 0.8, x01: 0.25, y01: 0.5 } });
    expect(first.currentOutput()).toMatchObject(change);
    await first.tellWork();
    expect((await untilSaved(t, first.photoId)).recipe.work.output).toMatchObject(change);
    await t.caller.call('closePhoto', { photoId: first.photoId });
    const again = await openInWindow();
    expect(again.currentOutput()).toMatchObject({
      ...change,
      cropFrame: { aspect: 0.8, x01: 0.25, y01: 0.5 },
    });
  });

  it('stay through changes of the look, undo and kept states', async () => {
    const easel = await openInWindow();
    easel.changeOutput({ ppi: 240, isResampled: true });
    easel.setParameter('body.hold', 0.5);
    await easel.tellWork();
    await easel.keepAsState('looser water');
    easel.undoLook();
    await easel.tellWork();
    expect(await easel.recipeOutput()).toMatchObject({ ppi: 240, isResampled: true });
    expect(easel.currentOutput()).toMatchObject({ ppi: 240, isResampled: true });
  });

  it('lose the crop frame by null, here and in the recipe', async () => {
    const easel = await openInWindow();
    easel.changeOutput({ cropFrame: { aspect: 1, x01: 0.5, y01: 0.5 } });
    await easel.tellWork();
    expect(await easel.recipeOutput()).toHaveProperty('cropFrame');
    easel.changeOutput({ cropFrame: null });
    expect(easel.currentOutput()).not.toHaveProperty('cropFrame');
    await easel.tellWork();
    expect(await easel.recipeOutput()).not.toHaveProperty('cropFrame');
  });

  it('share the print’s size with the look, whose undo brings it back', async () => {
    const easel = await openInWindow();
    easel.changeOutput({ printLongEdgeMm: 420 });
    expect(easel.currentLook()?.printLongEdgeMm).toBe(420);
    await easel.tellWork();
    expect(await easel.recipeOutput()).toMatchObject({ printLongEdgeMm: 420 });
    easel.undoLook();
    expect(easel.currentOutput().printLongEdgeMm).toBe(300);
    await easel.tellWork();
    expect(await easel.recipeOutput()).toMatchObject({ printLongEdgeMm: 300 });
  });

  it('are told again when the host could not be reached', async () => {
    const easel = await openInWindow();
    easel.changeOutput({ bleedMm: 5 });
    vi.stubGlobal('fetch', () => Promise.reject(new TypeError('gone')));
    await easel.tellWork();
    vi.stubGlobal('fetch', (request: Request) => t.host.fetch(request));
    await easel.tellWork();
    expect(await easel.recipeOutput()).toMatchObject({ bleedMm: 5 });
  });
});
