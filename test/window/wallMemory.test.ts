import { mkdir, mkdtemp } from 'node:fs/promises';
import { tmpdir } from 'node:os';
import { join } from 'node:path';
import { setTimeout as pause } from 'node:timers/promises';
import type { Page } from 'playwright-core';
import { describe, expect, it } from 'vitest';
import { chromiumFound } from './chromium.ts';
import { openUnwatched, residentMb, type UnwatchedWindow } from './unwatchedWindow.ts';
import { hangs, writeFrames } from './wallFrames.ts';

/** Starts to go through the whole wall and back, stopping at every view until its pictures are there. */
function startPass(page: Page): Promise<void> {
  return page.evaluate(() => {
    Object.assign(globalThis, { seen: null });
    const rest = () => new Promise((resolve) => setTimeout(resolve, 40));
    const ground = document.querySelector<HTMLElement>('.wall-ground')!;
    const seen = new Set<string>();
    const inView = () =>
      [...ground.querySelectorAll<HTMLElement>('[data-frame]')].filter((print) => {
        const { top, bottom } = print.getBoundingClientRect();
        return bottom > 0 && top < innerHeight;
      });
    const isThere = (print: HTMLElement) => print.querySelector('canvas.is-there') !== null;
    const look = async () => {
      const until = Date.now() + 4000;
      await rest();
      while (!inView().every(isThere) && Date.now() < until) await rest();
      for (const print of inView()) if (isThere(print)) seen.add(print.dataset.frame!);
    };
    const run = async () => {
      for (const way of [1, -1])
        for (let last = -1; last !== ground.scrollTop; ) {
          last = ground.scrollTop;
          await look();
          ground.scrollTop += way * ground.clientHeight * 0.8;
        }
      Object.assign(globalThis, { seen: seen.size });
    };
    setTimeout(run, 500);
  });
}

/** How many different frames the pass showed, once it is over; what the page no longer needs is gone by then. */
async function endOfPass({ look }: UnwatchedWindow): Promise<number> {
  for (;;) {
    await pause(5000);
    const seen = await look(async (page) => {
      const count = await page.evaluate(() => (globalThis as unknown as { seen: number | null }).seen);
      if (count === null) return null;
      const session = await page.context().newCDPSession(page);
      for (let round = 0; round < 2; round++) await session.send('HeapProfiler.collectGarbage');
      return count;
    });
    if (seen !== null) return seen;
  }
}

describe.skipIf(!chromiumFound.path || process.platform !== 'linux')('memory of the Wall', () => {
  it('levels off while all of five hundred frames go by, there and back', {
    timeout: 600_000,
  }, async () => {
    const folder = await mkdtemp(join(tmpdir(), 'oxgall-wall-memory-'));
    const photos = join(folder, 'photos');
    await mkdir(photos);
    await writeFrames(photos, 500, { widthPx: 240 });
    const window = await openUnwatched(photos, folder);
    await window.look(hangs);
    const renderer = window.rendererPid();
    const passes: { host: number; renderer: number }[] = [];
    // The first one fills the shelves.
    for (let pass = 0; pass < 3; pass++) {
      await window.look(startPass);
      expect(await endOfPass(window)).toBe(500);
      await pause(1000);
      passes.push({ host: await residentMb(window.host.pid!), renderer: await residentMb(renderer) });
    }
    for (const who of ['host', 'renderer'] as const) {
      const [, second, third] = passes.map((pass) => pass[who]);
      process.stdout.write(`${who}: ${passes.map((pass) => pass[who].toFixed(0)).join(', ')} MB\n`);
      expect(third, who).toBeLessThanOrEqual(second * 1.1);
    }
  });
});
