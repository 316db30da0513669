import { chmod, mkdir, mkdtemp, rm, utimes, writeFile } from 'node:fs/promises';
import { tmpdir } from 'node:os';
import { dirname, join } from 'node:path';
import { afterEach, beforeEach, describe, expect, it } from 'vitest';
import { chromiumArguments } from '../../main/shells/chromiumWindow.ts';
import { findChromium } from '../../main/shells/findChromium.ts';
import { readStartArguments } from '../../main/shells/startArguments.ts';
import { dataFolder } from '../../main/store/dataFolder.ts';

interface Start {
  staleSteps(folder: string): string[];
  findElectron(folder: string, environment: Record<string, string>): string | null;
}

const start = (await import(join(import.meta.dirname, '../../build/start.mjs'))) as Start;

let folder: string;
beforeEach(async () => {
  folder = await mkdtemp(join(tmpdir(), 'oxgall-start-'));
});
afterEach(() => rm(folder, { recursive: true, force: true }));

async function put(path: string, changedAt: number) {
  const whole = join(folder, path);
  await mkdir(dirname(whole), { recursive: true });
  await writeFile(whole, '');
  await utimes(whole, changedAt, changedAt);
}

describe('what is built before the start', () => {
  it('is what is missing or older than its sources, and nothing else', async () => {
    await put('core/kernels/assembly/index.ts', 100);
    await put('main/host/host.ts', 100);
    await put('renderer/main.tsx', 100);
    expect(start.staleSteps(folder)).toEqual(['kernels', 'host', 'renderer']);
    for (const output of ['kernels.wasm', 'main/loopbackShell.js', 'renderer/index.html'])
      await put(`dist/${output}`, 200);
    expect(start.staleSteps(folder)).toEqual([]);
    await put('main/host/host.ts', 300);
    expect(start.staleSteps(folder)).toEqual(['host']);
    await put('renderer/easel/deep/Easel.tsx', 300);
    expect(start.staleSteps(folder)).toEqual(['host', 'renderer']);
  });
});

describe('the Electron binary', () => {
  it('is looked for where it was put, then where the package keeps it', async () => {
    expect(start.findElectron(folder, {})).toBeNull();
    await writeFile(join(folder, 'path.txt'), 'electron');
    expect(start.findElectron(folder, {})).toBeNull();
    await put('dist/electron', 1);
    expect(start.findElectron(folder, {})).toBe(join(folder, 'dist/electron'));
    await put('elsewhere/electron', 1);
    const elsewhere = join(folder, 'elsewhere');
    expect(start.findElectron(folder, { ELECTRON_OVERRIDE_DIST_PATH: elsewhere })).toBe(
      join(elsewhere, 'electron'),
    );
    expect(start.findElectron(folder, { ELECTRON_OVERRIDE_DIST_PATH: join(folder, 'gone') })).toBe(
      join(folder, 'dist/electron'),
    );
  });
});

describe('the browser', () => {
  it('is the one that is named, else the first on PATH; a name that leads nowhere is no other browser', async () => {
    await put('bin/chromium', 1);
    const program = join(folder, 'bin/chromium');
    expect(findChromium({ PATH: join(folder, 'bin') }, 'aix')).toBeNull();
    await chmod(program, 0o755);
    expect(findChromium({ PATH: join(folder, 'bin') }, 'aix')).toBe(program);
    await put('mine', 1);
    await chmod(join(folder, 'mine'), 0o755);
    expect(findChromium({ PATH: join(folder, 'bin'), OXGALL_CHROMIUM: join(folder, 'mine') })).toBe(
      join(folder, 'mine'),
    );
    expect(findChromium({ PATH: join(folder, 'bin'), OXGALL_CHROMIUM: join(folder, 'gone') })).toBeNull();
  });

  it('opens a window of its own with a profile that nobody else uses', () => {
    const given = chromiumArguments('http://127.0.0.1:1/open', '/tmp/profile');
    expect(given).toContain('--app=http://127.0.0.1:1/open');
    expect(given).toContain('--user-data-dir=/tmp/profile');
    expect(given.includes('--no-sandbox')).toBe(process.getuid?.() === 0);
  });
});

describe('arguments and places', () => {
  it('takes one path, from the folder it was typed in', () => {
    expect(readStartArguments(['--switch', 'a.jpg'], '/photos', {})).toEqual({
      path: '/photos/a.jpg',
      noWindow: false,
    });
    expect(readStartArguments(['--no-window'], '/', {})).toEqual({ path: null, noWindow: true });
    expect(readStartArguments([], '/', { OXGALL_NO_WINDOW: '1' }).noWindow).toBe(true);
  });

  it('keeps its own files where each system wants them', () => {
    expect(dataFolder({}, 'linux', '/home/o')).toBe('/home/o/.local/share/oxgall');
    expect(dataFolder({ XDG_DATA_HOME: '/d' }, 'linux', '/home/o')).toBe('/d/oxgall');
    expect(dataFolder({}, 'darwin', '/Users/o')).toBe('/Users/o/Library/Application Support/Oxgall');
    expect(dataFolder({ OXGALL_DATA: '/mine' }, 'win32', 'C:')).toBe('/mine');
  });
});
