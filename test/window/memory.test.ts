import { execFileSync } from 'node:child_process';
import { mkdtemp, readFile, rm } from 'node:fs/promises';
import { tmpdir } from 'node:os';
import { join } from 'node:path';
import type { Page } from 'playwright-core';
import { describe, expect, it } from 'vitest';
import { chromiumFound } from './chromium.ts';
import { openWindow, settled } from './openWindow.ts';
import { writePhotograph } from './photographs.ts';

const changes = 200;
const measureFrom = 50;

/** Resident memory of a process in megabytes, from the kernel. */
async function residentMb(pid: number): Promise<number> {
  const status = await readFile(`/proc/${pid}/status`, 'utf8');
  return Number(/VmRSS:\s+(\d+)/.exec(status)![1]) / 1024;
}

/** The process that draws the page: the largest renderer among the browser's children. */
async function rendererPid(): Promise<number> {
  const lines = execFileSync('ps', ['-eo', 'pid,rss,args'], { encoding: 'utf8' }).split('\n');
  const renderers = lines
    .filter((line) => line.includes('--type=renderer') && line.includes('playwright'))
    .map((line) => line.trim().split(/\s+/).map(Number))
    .toSorted((a, b) => b[1] - a[1]);
  return renderers[0][0];
}

async function change(page: Page, index: number): Promise<void> {
  const name = index % 4 === 0 ? 'Brush' : index % 4 === 2 ? 'Pull' : 'Strength';
  const key = index % 8 < 4 ? 'ArrowLeft' : 'ArrowRight';
  await page.getByRole('slider', { name, exact: true }).press(key);
  await settled(page);
}

describe.skipIf(!chromiumFound.path || process.platform !== 'linux')('memory of the easel', () => {
  it('levels off over two hundred changes', { timeout: 400_000 }, async () => {
    const folder = await mkdtemp(join(tmpdir(), 'oxgall-memory-'));
    const photo = join(folder, 'ferry-bank.jpg');
    await writePhotograph(photo, 'nagasaki-boats', 1200);
    const window = await openWindow({ path: photo, environment: { HOME: folder } });
    const { page, host } = window;
    await settled(page);
    const renderer = await rendererPid();
    const samples: { host: number; renderer: number }[] = [];
    const median = (from: number, to: number, who: 'host' | 'renderer') =>
      samples
        .slice(from, to)
        .map((sample) => sample[who])
        .toSorted((a, b) => a - b)[Math.floor((to - from) / 2)];
    for (let index = 0; index < changes; index++) {
      await change(page, index);
      samples.push({ host: await residentMb(host.pid!), renderer: await residentMb(renderer) });
    }
    for (const who of ['host', 'renderer'] as const) {
      const early = median(measureFrom - 10, measureFrom + 10, who);
      const late = median(changes - 20, changes, who);
      process.stdout.write(
        `${who}: ${early.toFixed(0)} MB at ${measureFrom}, ${late.toFixed(0)} MB at the end\n`,
      );
      expect(late, who).toBeLessThanOrEqual(early * 1.1);
    }
    await window.close();
    await rm(folder, { recursive: true, force: true });
  });
});
