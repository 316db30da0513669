import { execFileSync, spawn } from 'node:child_process';
import { once } from 'node:events';
import { mkdtemp, readFile, rm } from 'node:fs/promises';
import { tmpdir } from 'node:os';
import { join } from 'node:path';
import { setTimeout as pause } from 'node:timers/promises';
import { chromium, type Page } from 'playwright-core';
import { describe, expect, it, onTestFinished } from 'vitest';
import { chromiumFound } from './chromium.ts';
import { settled, startHost } from './openWindow.ts';
import { writePhotograph } from './photographs.ts';

const changes = 200;
const measureFrom = 50;
const sampleEveryMs = 200;

interface Sample {
  atMs: number;
  host: number;
  renderer: number;
}

/** Resident memory of a process in megabytes, from the kernel. */
async function residentMb(pid: number): Promise<number> {
  const status = await readFile(`/proc/${pid}/status`, 'utf8');
  return Number(/VmRSS:\s+(\d+)/.exec(status)![1]) / 1024;
}

/** The process that draws the page: the largest renderer of the browser with this profile. */
function rendererPid(browserPid: number): number {
  const rows = execFileSync('ps', ['-eo', 'pid,ppid,rss,args'], { encoding: 'utf8' })
    .split('\n')
    .map((line) => /^\s*(\d+)\s+(\d+)\s+(\d+)\s+(.*)$/.exec(line))
    .filter((match) => match !== null)
    .map(([, pid, parent, rss, args]) => ({ pid: +pid, parent: +parent, rss: +rss, args }));
  const family = new Set([browserPid]);
  for (let round = 0; round < 4; round++)
    for (const row of rows) if (family.has(row.parent)) family.add(row.pid);
  const renderers = rows.filter((row) => family.has(row.pid) && row.args.includes('--type=renderer'));
  return renderers.toSorted((a, b) => b.rss - a.rss)[0].pid;
}

/**
 * Lets the page make the changes by itself. Nobody may be listening meanwhile: a browser that is watched keeps
 * a hundred megabytes of the answers it received, for the watcher.
 */
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
    const { host, address } = await startHost({ path: photo, dataFolder: join(folder, 'data') });
    const browser = spawn(
      chromiumFound.path!,
      [
        '--headless=new',
        '--remote-debugging-port=0',
        `--user-data-dir=${join(folder, 'profile')}`,
        '--window-size=1280,800',
        '--no-first-run',
        '--disable-background-networking',
        ...(process.getuid?.() === 0 ? ['--no-sandbox'] : []),
        'about:blank',
      ],
      { stdio: ['ignore', 'ignore', 'pipe'] },
    );
    onTestFinished(async () => {
      const gone = [once(browser, 'exit'), once(host, 'exit')];
      browser.kill();
      host.kill();
      await Promise.all(gone);
      await rm(folder, { recursive: true, force: true, maxRetries: 5 });
    });
    const endpoint = await firstMatch(browser.stderr, /ws:\/\/\S+/);
    const first = await chromium.connectOverCDP(endpoint);
    const page = first.contexts()[0].pages()[0];
    await page.goto(address);
    await settled(page);
    const renderer = rendererPid(browser.pid!);
    await startChanges(page, changes);
    await first.close();

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
      const again = await chromium.connectOverCDP(endpoint);
      marks = await again
        .contexts()[0]
        .pages()[0]
        .evaluate(() => (globalThis as unknown as { marks: number[] }).marks);
      await again.close();
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

async function firstMatch(stream: AsyncIterable<Buffer>, pattern: RegExp): Promise<string> {
  let text = '';
  for await (const chunk of stream) {
    text += chunk;
    const found = pattern.exec(text)?.[0];
    if (found) return found;
  }
  throw new Error(`Expected ${pattern} before the end, received ${text}`);
}
