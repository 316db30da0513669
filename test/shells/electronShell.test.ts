import { mkdtemp, readFile, rm, writeFile } from 'node:fs/promises';
import { tmpdir } from 'node:os';
import { join } from 'node:path';
import { afterEach, beforeEach, describe, expect, it, vi } from 'vitest';
import { p3Profile } from '../../core/colour/matrixProfile.ts';
import { makePhoto } from '../host/testHost.ts';
import { makeElectronStandIn, StandInContents } from './electronStandIn.ts';

let folder: string;
let argv: string[];
let current: ReturnType<typeof makeElectronStandIn>;

beforeEach(async () => {
  folder = await mkdtemp(join(tmpdir(), 'oxgall-electron-'));
  vi.stubEnv('OXGALL_DATA', join(folder, 'data'));
  argv = process.argv;
});

afterEach(async () => {
  process.argv = argv;
  vi.unstubAllEnvs();
  vi.resetModules();
  await rm(folder, { recursive: true, force: true });
});

/** Loads the real shell over the stand-in, as the program would start with these arguments. */
async function startShell(given: string[] = [], firstInstance = true) {
  current = makeElectronStandIn({ firstInstance });
  vi.doMock('electron', () => current.electron);
  process.argv = ['oxgall', ...given];
  await import('../../main/shells/electronShell.ts');
  if (firstInstance) await expect.poll(() => current.recorded.windows[0]?.loadedUrl).toBe('oxgall://app/');
  return current;
}

function ask(path: string, init: RequestInit = {}) {
  const handler = current.recorded.handlers.get('oxgall');
  return handler!(new Request(`oxgall://app${path}`, init));
}

const post = (name: string, input: unknown, headers: Record<string, string> = {}) =>
  ask(`/api/${name}`, {
    method: 'POST',
    headers: { 'content-type': 'application/json', ...headers },
    body: JSON.stringify(input),
  });

describe('the window', () => {
  it('has no Node, its own world and the sandbox', async () => {
    const { recorded } = await startShell();
    expect(recorded.windows[0].options.webPreferences).toMatchObject({
      contextIsolation: true,
      sandbox: true,
      nodeIntegration: false,
      nodeIntegrationInWorker: false,
      nodeIntegrationInSubFrames: false,
      webSecurity: true,
      allowRunningInsecureContent: false,
      webviewTag: false,
    });
    expect(recorded.windows[0].options.webPreferences?.preload).toMatch(/electronPreload\.cjs$/);
  });

  it('gets its security flags last, so that nothing undoes them', async () => {
    const { secured } = await import('../../main/shells/electronSecurity.ts');
    const careless = {
      webPreferences: { nodeIntegration: true, sandbox: false, contextIsolation: false, webSecurity: false },
    };
    expect(secured(careless).webPreferences).toMatchObject({
      nodeIntegration: false,
      sandbox: true,
      contextIsolation: true,
      webSecurity: true,
    });
  });

  it('is preceded by the sandbox and the scheme, both before the program is ready', async () => {
    const { recorded } = await startShell();
    const at = (call: string) => recorded.calls.indexOf(call);
    expect(at('enableSandbox')).toBeGreaterThanOrEqual(0);
    expect(at('enableSandbox')).toBeLessThan(at('ready'));
    expect(at('registerSchemesAsPrivileged')).toBeLessThan(at('ready'));
    expect(recorded.schemes).toEqual([
      {
        scheme: 'oxgall',
        privileges: { standard: true, secure: true, supportFetchAPI: true, stream: true },
      },
    ]);
    expect(recorded.schemes[0].privileges).not.toHaveProperty('bypassCSP');
  });

  it('is shown when it is ready and remembers where it was', async () => {
    const { recorded } = await startShell();
    const [window] = recorded.windows;
    expect(window.options.show).toBe(false);
    window.emit('ready-to-show');
    expect(window.shown).toBe(true);
    window.emit('close');
    const saved = async () => JSON.parse(await readFile(join(folder, 'data/window.json'), 'utf8')).bounds;
    await expect.poll(() => saved().catch(() => null)).toEqual({ x: 10, y: 20, width: 1300, height: 800 });
    const { loadWindowState } = await import('../../main/shells/windowState.ts');
    const display = { x: 0, y: 0, width: 1920, height: 1080 };
    expect((await loadWindowState(join(folder, 'data'), [display])).bounds).toMatchObject({ x: 10, y: 20 });
    // The display it was on is gone: size kept, place left to the system.
    const elsewhere = { ...display, x: 5000 };
    expect((await loadWindowState(join(folder, 'data'), [elsewhere])).bounds).toEqual({
      width: 1300,
      height: 800,
    });
  });

  it('does without hardware acceleration where asked', async () => {
    expect((await startShell()).recorded.calls).not.toContain('disableHardwareAcceleration');
    vi.resetModules();
    vi.stubEnv('OXGALL_NO_GPU', '1');
    expect((await startShell()).recorded.calls).toContain('disableHardwareAcceleration');
  });
});

describe('what a page may do', () => {
  it('stays where it is, opens no window and embeds nothing', async () => {
    const { app } = await startShell();
    const contents = new StandInContents();
    app.emit('web-contents-created', {}, contents);
    for (const name of ['will-navigate', 'will-redirect', 'will-frame-navigate', 'will-attach-webview']) {
      const prevented = vi.fn();
      contents.emit(name, { preventDefault: prevented, url: 'https://evil.example/' });
      expect(prevented, name).toHaveBeenCalledOnce();
    }
    const own = vi.fn();
    contents.emit('will-navigate', { preventDefault: own, url: 'oxgall://app/' });
    expect(own).not.toHaveBeenCalled();
    expect(contents.openHandler?.()).toEqual({ action: 'deny' });
  });

  it('is granted no permission, no device, no download, and reaches only its own origin', async () => {
    const { recorded, defaultSession } = await startShell();
    const answer = vi.fn();
    for (const permission of ['media', 'geolocation', 'notifications', 'openExternal', 'clipboard-read'])
      (recorded.permissionRequest as (...args: unknown[]) => void)(null, permission, answer);
    expect(answer.mock.calls.flat()).toEqual([false, false, false, false, false]);
    expect(recorded.permissionCheck?.()).toBe(false);
    expect(recorded.deviceCheck?.()).toBe(false);
    const download = vi.fn();
    defaultSession.emit('will-download', { preventDefault: download });
    expect(download).toHaveBeenCalledOnce();
    const cancelled = (url: string) => {
      let result: boolean | undefined;
      const before = recorded.beforeRequest as (
        details: { url: string },
        answer: (a: { cancel: boolean }) => void,
      ) => void;
      before({ url }, ({ cancel }) => {
        result = cancel;
      });
      return result;
    };
    const foreign = [
      'https://evil.example/',
      'file:///etc/hosts',
      'http://127.0.0.1:80/',
      'oxgall://application/',
    ];
    for (const url of foreign) expect(cancelled(url), url).toBe(true);
    for (const url of ['oxgall://app/', 'oxgall://app/api/events', 'blob:oxgall://app/1'])
      expect(cancelled(url), url).toBe(false);
  });

  it('is answered by the host with the security headers, and refused from elsewhere', async () => {
    await startShell();
    const answer = await post('startSession', {}, { origin: 'oxgall://app' });
    expect(answer.status).toBe(200);
    expect(await answer.json()).toMatchObject({ shell: 'electron', desktop: { fileDialogs: true } });
    expect(answer.headers.get('content-security-policy')).toContain("default-src 'none'");
    expect((await post('startSession', {}, { origin: 'https://evil.example' })).status).toBe(403);
    const other = new Request('oxgall://other/api/startSession', { method: 'POST', body: '{}' });
    expect((await current.recorded.handlers.get('oxgall')!(other)).status).toBe(403);
  });

  it('may open a dropped file only when the shell heard of it from the window itself', async () => {
    const { recorded } = await startShell();
    const path = await makePhoto(join(folder, 'heron.png'), 20, 20);
    const dropped = recorded.ipc.get('oxgall:dropped') as (event: unknown, path: unknown) => void;
    const open = async () =>
      (await post('listFolder', { path })).status + (await post('openPhoto', { path })).status;
    const refusedBoth = 403 + 403;
    expect(await open()).toBe(refusedBoth);
    dropped({ senderFrame: { url: 'https://evil.example/' } }, path);
    expect(await open()).toBe(refusedBoth);
    dropped({ senderFrame: { url: 'oxgall://app/' } }, path);
    expect((await post('openPhoto', { path })).status).toBe(200);
  });

  it('opens what was chosen in the dialog', async () => {
    await startShell();
    const path = await makePhoto(join(folder, 'ferry.png'), 20, 20);
    vi.stubEnv('OXGALL_TEST_CHOICE', path);
    expect(await (await post('chooseWithDialog', { kind: 'photo' })).json()).toMatchObject({ path });
    expect((await post('openPhoto', { path })).status).toBe(200);
    expect(await (await post('chooseWithDialog', { kind: 'save' })).json()).toMatchObject({ path: null });
  });

  it('prints for a profile that was chosen in the dialog, and for no other', async () => {
    await startShell();
    const path = await makePhoto(join(folder, 'reeds.png'), 20, 20);
    vi.stubEnv('OXGALL_TEST_CHOICE', path);
    await post('chooseWithDialog', { kind: 'photo' });
    const { photoId } = await (await post('openPhoto', { path })).json();
    const file = join(await mkdtemp(join(folder, 'profiles-')), 'wide.icc');
    await writeFile(file, p3Profile());
    const told = () => post('describeProfile', { photoId, profile: { file } });
    expect((await told()).status).toBe(403);
    vi.stubEnv('OXGALL_TEST_CHOICE', file);
    expect(await (await post('chooseWithDialog', { kind: 'profile' })).json()).toMatchObject({ path: file });
    expect(await (await told()).json()).toMatchObject({ name: 'Display P3', inks: 'RGB' });
  });
});

describe('the program', () => {
  it('runs once; a second start hands over its photo and ends', async () => {
    const second = await startShell([], false);
    expect(second.recorded.quits).toBe(1);
    expect(second.recorded.windows).toEqual([]);
    vi.resetModules();
    const first = await startShell();
    const path = await makePhoto(join(folder, 'heron.png'), 20, 20);
    first.app.emit('second-instance', {}, ['oxgall', '--some-switch', 'heron.png'], folder);
    expect(first.recorded.windows[0].focused).toBe(true);
    await expect
      .poll(async () => (await (await post('startSession', {})).json()).opening)
      .toEqual({ kind: 'photo', path });
  });

  it('opens the photo it was started with', async () => {
    const path = await makePhoto(join(folder, 'heron.png'), 20, 20);
    await startShell([path]);
    expect(await (await post('startSession', {})).json()).toMatchObject({ opening: { kind: 'photo', path } });
  });

  it('ends only when the host has put everything away', async () => {
    const { recorded, app } = await startShell();
    app.emit('window-all-closed');
    expect(recorded.calls).toContain('quit held back');
    await expect.poll(() => recorded.quits).toBe(2);
  });

  it('has a menu whose entries the window hears of', async () => {
    const { recorded } = await startShell();
    expect(recorded.menu.map(({ label }) => label)).toEqual(
      expect.arrayContaining(['Photo', 'Edit', 'View']),
    );
    const events = await ask('/api/events');
    const reader = events.body!.getReader();
    await reader.read();
    const photo = recorded.menu.find(({ label }) => label === 'Photo')?.submenu as { click?: () => void }[];
    photo[0].click?.();
    expect(new TextDecoder().decode((await reader.read()).value)).toContain('openPhoto');
  });
});
