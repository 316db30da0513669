import { mkdtemp } from 'node:fs/promises';
import { tmpdir } from 'node:os';
import { join } from 'node:path';
import { setTimeout as pause } from 'node:timers/promises';
import type { Page } from 'playwright-core';
import { describe, expect, it } from 'vitest';
import { chromiumFound } from './chromium.ts';
import { settled } from './openWindow.ts';
import { writePhotograph } from './photographs.ts';
import { openUnwatched, residentMb } from './unwatchedWindow.ts';

const changes = 200;
const measureFrom = 50;
const sampleEveryMs = 200;

interface Sample {
  atMs: number;
  host: number;
  renderer: number;
}

/** Lets the page make the changes by itself: nobody may be listening meanwhile. */
async function startChanges(page: Page, count: number): Promise<void> {
  await page.evaluate((wanted) => {
    const marks: number[] = [];
    Object.assign(globalThis, { marks });
    const frame = () => new Promise((resolve) => setTimeout(resolve, 20));
    const setValue = Object.getOwnPropertyDescriptor(HTMLInputElement.prototype, 'value')!.set!;
    const run = async () => {
      for (let index = 0; index < wanted; index++) {
        const name = index % 4 === 0 ? 'Brush' : index % 4 === 2 ? 'Pull' : 'Strength';
        const track = document.querySelector<HTMLInputElement>(`input[type=range][aria-label="${name}"]`)!;
        const step = Number(track.step) * (index % 8 < 4 ? -1 : 1);
        setValue.call(track, String(Number(track.value) + step));
        track.dispatchEvent(new Event('input', { bubbles: true }));
        await frame();
        while (!document.querySelector('.window[data-painting="no"][data-rough="false"]')) await frame();
        marks.push(Date.now());
      }
    };
    setTimeout(run, 1000);
  }, count);
}

describe.skipIf(!chromiumFound.path || process.platform !== 'linux')('memory of the easel', () => {
  it('levels off over two hundred changes', { timeout: 400_000 }, async () => {
    const folder = await mkdtemp(join(tmpdir(), 'oxgall-memory-'));
    const photo = join(folder, 'ferry-bank.jpg');
    await writePhotograph(photo, 'nagasaki-boats', 1200);
    const { host, rendererPid, look } = await openUnwatched(photo, folder);
    await look(async (page) => {
      await settled(page);
      await startChanges(page, changes);
    });
    const renderer = rendererPid();

    const samples: Sample[] = [];
    let marks: number[] = [];
    while (marks.length < changes) {
      for (let look = 0; look < 50; look++) {
        samples.push({
          atMs: Date.now(),
          host: await residentMb(host.pid!),
          renderer: await residentMb(renderer),
        });
        await pause(sampleEveryMs);
      }
      marks = await look((page) => page.evaluate(() => (globalThis as unknown as { marks: number[] }).marks));
    }
    const median = (from: number, to: number, who: 'host' | 'renderer') => {
      const values = samples
        .filter(({ atMs }) => atMs >= marks[from] && atMs <= marks[to])
        .map((sample) => sample[who])
        .toSorted((a, b) => a - b);
      return values[Math.floor(values.length / 2)];
    };
    for (const who of ['host', 'renderer'] as const) {
      const early = median(measureFrom - 10, measureFrom + 10, who);
      const late = median(changes - 20, changes - 1, who);
      process.stdout.write(
        `${who}: ${early.toFixed(0)} MB about change ${measureFrom}, ${late.toFixed(0)} MB at the end\n`,
      );
      expect(late, who).toBeLessThanOrEqual(early * 1.1);
    }
  });
});
