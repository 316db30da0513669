import { createHash } from 'node:crypto';
import { appendFile, mkdir, mkdtemp, readdir, readFile, rm } from 'node:fs/promises';
import { tmpdir } from 'node:os';
import { join } from 'node:path';
import { afterEach, beforeEach, describe, expect, it } from 'vitest';
import { renderDemoSeries } from '../../build/demoSeries/render.mjs';
import { type RunEntry, readRunLogs } from '../../main/series/runLog.ts';
import { chromiumFound } from './chromium.ts';
import { type OpenWindow, openWindow } from './openWindow.ts';
import { frame } from './wallFrames.ts';

/** The demo's own plates, small: about a sixth of a megapixel to half of one. */
const scale = 0.16;

describe.skipIf(!chromiumFound.path)('a run from the Wall', () => {
  let folder: string;
  let plates: string;
  let out: string;
  let opened: OpenWindow;

  beforeEach(async () => {
    folder = await mkdtemp(join(tmpdir(), 'oxgall-wall-run-'));
    plates = join(folder, 'plates');
    out = join(plates, 'painted');
    await mkdir(plates);
    await renderDemoSeries({ outDir: plates, scale });
    opened = await openWindow({ environment: { OXGALL_DEMO: plates } });
  }, 120_000);

  afterEach(async () => {
    await opened.close();
    await rm(folder, { recursive: true, force: true });
  });

  const hashesIn = async (place: string) => {
    const names = (await readdir(place)).filter((name) => /^plate-.*\.(jpg|png|tif)$/.test(name));
    const hash = async (name: string) =>
      createHash('sha256')
        .update(await readFile(join(place, name)))
        .digest('hex');
    return Object.fromEntries(
      await Promise.all(names.map(async (name) => [name, await hash(name)] as const)),
    );
  };
  const namesOf = (entries: readonly RunEntry[], kind: 'begun' | 'painted') =>
    entries.flatMap((entry) => (entry.kind === kind ? [entry.name] : []));

  it('is paused, told what comes first, stopped, and goes on from there with nothing lost', {
    timeout: 240_000,
  }, async () => {
    const { page } = opened;
    const words = (text: RegExp) =>
      page.locator('.run-words', { hasText: text }).waitFor({ timeout: 100_000 });
    const begin = async () => {
      await page.keyboard.press('r');
      await page.getByRole('button', { name: 'Begin' }).click();
    };
    await page.getByRole('button', { name: /Try the demo/ }).click();
    await frame(page, 'plate-9-rain.jpg').waitFor();
    expect(await page.locator('[data-frame]').count()).toBe(9);
    const photos = await hashesIn(plates);

    await begin();
    await page.getByRole('button', { name: 'Pause' }).click();
    await words(/of 9 painted, paused/);
    await frame(page, 'plate-9-rain.jpg').click();
    await page.getByRole('button', { name: 'Paint these first' }).click();
    const before = namesOf(await readRunLogs(out), 'begun');
    expect(before).not.toContain('plate-9-rain.jpg');
    await page.getByRole('button', { name: 'Go on' }).click();
    await expect
      .poll(async () => namesOf(await readRunLogs(out), 'painted'), { timeout: 100_000 })
      .toContain('plate-9-rain.jpg');
    await page.getByRole('button', { name: 'Stop' }).click();
    await words(/was stopped after \d of 9/);

    const stopped = await readRunLogs(out);
    const begun = namesOf(stopped, 'begun');
    expect(begun.indexOf('plate-9-rain.jpg')).toBeLessThanOrEqual(before.length + 2);
    expect(begun.length).toBeLessThan(9);
    const painted = namesOf(stopped, 'painted');
    expect((await readdir(out)).filter((name) => name.startsWith('.'))).toEqual([]);
    const first = await hashesIn(out);
    expect(Object.keys(first)).toHaveLength(painted.length);

    // Somebody works on one of the paintings.
    const [edited] = Object.keys(first);
    await appendFile(join(out, edited), 'retouched');
    const retouched = (await hashesIn(out))[edited];
    await begin();
    await words(/All 9 frames are painted/);
    const entries = (await readRunLogs(out)).slice(stopped.length);
    const again = entries.flatMap((entry) => (entry.kind === 'painted' ? [entry] : []));
    const twice = again.filter(({ name }) => painted.includes(name));
    expect(twice.map(({ output, reason }) => [output, reason])).toEqual([
      [edited, 'Its file was changed by another hand.'],
    ]);
    expect(again).toHaveLength(9 - painted.length + 1);
    const done = await hashesIn(out);
    expect(done[edited.replace(/(\.\w+)$/, '.changed$1')]).toBe(retouched);
    expect(done[edited]).toBe(first[edited]);
    expect(Object.keys(done)).toHaveLength(10);

    await begin();
    await words(/All 9 frames are painted/);
    await expect.poll(() => page.locator('.wall-run-word', { hasText: 'painted before' }).count()).toBe(9);
    expect(namesOf((await readRunLogs(out)).slice(stopped.length + entries.length), 'begun')).toEqual([]);
    expect(await hashesIn(out)).toEqual(done);
    expect(await hashesIn(plates)).toEqual(photos);
    expect(opened.faults).toEqual([]);
  });
});
