import { type ChildProcess, spawn } from 'node:child_process';
import { once } from 'node:events';
import { mkdir, mkdtemp, rm } from 'node:fs/promises';
import { tmpdir } from 'node:os';
import { join } from 'node:path';
import { type Browser, chromium, type Page } from 'playwright-core';
import { chromiumFound } from './chromium.ts';

const root = join(import.meta.dirname, '../..');
export const artefacts = join(root, 'artefacts');

/** The built program with a real window on it. */
export interface OpenWindow {
  page: Page;
  browser: Browser;
  host: ChildProcess;
  /** From the program's start to its address. */
  hostReadyMs: number;
  dataFolder: string;
  /** Faults that the page reported; a test that leaves any has failed. */
  faults: string[];
  close(): Promise<void>;
}

export interface WindowOptions {
  /** A photo to start with. */
  path?: string;
  widthPx?: number;
  heightPx?: number;
  deviceScaleFactor?: number;
  /** Kept between two windows of one test; else made and removed. */
  dataFolder?: string;
  environment?: Record<string, string>;
  /** The screen's space; sRGB unless given. */
  screen?: 'srgb' | 'display-p3-d65';
}

/** Starts the built program without a window of its own. */
export async function startHost(
  options: Pick<WindowOptions, 'path' | 'environment'> & { dataFolder: string },
): Promise<{ host: ChildProcess; address: string }> {
  const given = ['--no-window', ...(options.path ? [options.path] : [])];
  const host = spawn(process.execPath, [join(root, 'dist/main/loopbackShell.js'), ...given], {
    env: { ...process.env, OXGALL_DATA: options.dataFolder, ...options.environment },
    stdio: ['ignore', 'pipe', 'inherit'],
  });
  return { host, address: await firstAddress(host) };
}

export async function openWindow(options: WindowOptions = {}): Promise<OpenWindow> {
  const dataFolder = options.dataFolder ?? (await mkdtemp(join(tmpdir(), 'oxgall-window-data-')));
  const startedMs = performance.now();
  const { host, address } = await startHost({ ...options, dataFolder });
  const hostReadyMs = performance.now() - startedMs;
  const browser = await chromium.launch({
    executablePath: chromiumFound.path!,
    args: [
      '--disable-background-networking',
      '--disable-component-update',
      `--force-color-profile=${options.screen ?? 'srgb'}`,
      ...(process.getuid?.() === 0 ? ['--no-sandbox'] : []),
    ],
  });
  const context = await browser.newContext({
    viewport: { width: options.widthPx ?? 1280, height: options.heightPx ?? 800 },
    deviceScaleFactor: options.deviceScaleFactor ?? 1,
  });
  const page = await context.newPage();
  const faults: string[] = [];
  page.on('pageerror', (error) => faults.push(error.message));
  page.on('console', (message) => {
    if (message.type() === 'error') faults.push(message.text());
  });
  await page.goto(address);
  return {
    page,
    browser,
    host,
    hostReadyMs,
    dataFolder,
    faults,
    async close() {
      await browser.close();
      const gone = once(host, 'exit');
      if (host.exitCode === null && host.signalCode === null) {
        host.kill();
        await gone;
      }
      if (!options.dataFolder) await rm(dataFolder, { recursive: true, force: true });
    },
  };
}

async function firstAddress(host: ChildProcess): Promise<string> {
  let text = '';
  for await (const chunk of host.stdout!) {
    text += chunk;
    const address = /http:\/\/\S+/.exec(text)?.[0];
    if (address) return address;
  }
  throw new Error(`The program ended before it said its address: ${text}`);
}

/** Waits until the picture is sharp and nothing is being painted; says what the window showed if it never is. */
export async function settled(page: Page): Promise<void> {
  try {
    await page.locator('.window[data-painting="no"][data-rough="false"]').waitFor();
  } catch (cause) {
    const shown = await page.locator('.window').evaluate((element) => {
      const { painting, rough } = (element as HTMLElement).dataset;
      return `${painting}, rough ${rough}: ${element.querySelector('.work-sign, [role=alert]')?.textContent}`;
    });
    throw new Error(`Expected a settled picture, received ${shown}`, { cause });
  }
}

/** Keeps a picture of the window among the artefacts. */
export async function keepScreen(page: Page, name: string): Promise<void> {
  await mkdir(join(artefacts, 'window'), { recursive: true });
  await page.screenshot({ path: join(artefacts, 'window', `${name}.png`) });
}
