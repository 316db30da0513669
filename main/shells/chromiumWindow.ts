import { spawn } from 'node:child_process';
import { mkdtemp, rm } from 'node:fs/promises';
import { tmpdir } from 'node:os';
import { join } from 'node:path';

/** A browser's app window; ends when the user closes it. */
export interface ChromiumWindow {
  /** Resolves when the window is gone; `failed` where the browser could not show one at all. */
  closed: Promise<{ failed: boolean }>;
  close(): void;
}

/** A browser that ends with an error this soon has shown nothing. */
const tooSoonMs = 4000;

/** Opens `url` as a window of its own, with a profile that is thrown away afterwards. */
export async function openChromiumWindow(browser: string, url: string): Promise<ChromiumWindow> {
  const profile = await mkdtemp(join(tmpdir(), 'oxgall-window-'));
  const started = performance.now();
  const child = spawn(browser, chromiumArguments(url, profile), { stdio: 'ignore' });
  const closed = new Promise<{ failed: boolean }>((resolve) => {
    child.once('error', () => resolve({ failed: true }));
    child.once('exit', (code) =>
      resolve({ failed: code !== 0 && code !== null && performance.now() - started < tooSoonMs }),
    );
  });
  const cleaned = closed.finally(() => rm(profile, { recursive: true, force: true, maxRetries: 5 }));
  return { closed: cleaned, close: () => void child.kill() };
}

/** What the browser is started with; a sandbox as root is refused by the browser itself. */
export function chromiumArguments(url: string, profile: string): string[] {
  const isRoot = process.getuid?.() === 0;
  return [
    `--app=${url}`,
    `--user-data-dir=${profile}`,
    '--window-size=1440,900',
    '--no-first-run',
    '--no-default-browser-check',
    '--disable-background-networking',
    '--disable-component-update',
    '--disable-sync',
    '--disable-features=Translate,MediaRouter',
    ...(process.env.OXGALL_NO_GPU ? ['--disable-gpu'] : []),
    ...(isRoot ? ['--no-sandbox'] : []),
  ];
}
