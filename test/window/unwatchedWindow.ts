import { type ChildProcess, execFileSync, spawn } from 'node:child_process';
import { once } from 'node:events';
import { readFile, rm } from 'node:fs/promises';
import { join } from 'node:path';
import { chromium, type Page } from 'playwright-core';
import { onTestFinished } from 'vitest';
import { chromiumFound } from './chromium.ts';
import { startHost } from './openWindow.ts';

/** The program with a window that nobody listens to but while `look` is asked. */
export interface UnwatchedWindow {
  host: ChildProcess;
  /** The process that draws the page; known once something was looked at. */
  rendererPid(): number;
  look<T>(act: (page: Page) => Promise<T>): Promise<T>;
}

/**
 * Opens a path in a browser of its own, for measuring memory: a browser that is watched keeps a hundred megabytes of
 * the answers it received, for the watcher. Both, and the folder, are gone when the test is over.
 */
export async function openUnwatched(path: string, folder: string): Promise<UnwatchedWindow> {
  const { host, address } = await startHost({ path, dataFolder: join(folder, 'data') });
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
  const endpoint = await firstMatch(browser.stderr!, /ws:\/\/\S+/);
  const look = async <T>(act: (page: Page) => Promise<T>): Promise<T> => {
    const listening = await chromium.connectOverCDP(endpoint);
    try {
      return await act(listening.contexts()[0].pages()[0]);
    } finally {
      await listening.close();
    }
  };
  await look((page) => page.goto(address));
  return { host, rendererPid: () => rendererPid(browser.pid!), look };
}

/** Resident memory of a process in megabytes, from the kernel. */
export async function residentMb(pid: number): Promise<number> {
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

async function firstMatch(stream: AsyncIterable<Buffer>, pattern: RegExp): Promise<string> {
  let text = '';
  for await (const chunk of stream) {
    text += chunk;
    const found = pattern.exec(text)?.[0];
    if (found) return found;
  }
  throw new Error(`Expected ${pattern} before the end, received ${text}`);
}
