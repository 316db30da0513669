// The program in an Electron window.
import { dirname, join } from 'node:path';
import { fileURLToPath } from 'node:url';
import { app, BrowserWindow, dialog, ipcMain, Menu, protocol, screen, session, shell } from 'electron';
import { createHost, type Host } from '../host/host.ts';
import { installedParts } from '../host/installedParts.ts';
import { createWindowHandler } from '../host/windowHandler.ts';
import { electronDesktop } from './electronDesktop.ts';
import { menuTemplate } from './electronMenu.ts';
import {
  confineContents,
  confineSession,
  isOwn,
  refuseForeign,
  scheme,
  secured,
  windowUrl,
} from './electronSecurity.ts';
import { appVersion, windowFolders } from './installedFolders.ts';
import { readStartArguments } from './startArguments.ts';
import { loadWindowState, saveWindowState, smallestWindow } from './windowState.ts';

/** A window that is not ready by now is shown all the same: better a blank one than none. */
const showAtLatestMs = 3000;
const saveStateAfterMs = 500;
const paper = '#f6f1e6';

let window: BrowserWindow | null = null;

const parts = installedParts({
  shell: 'electron',
  appVersion: appVersion(),
  desktop: electronDesktop(dialog, shell, () => window),
});

function start(): void {
  if (!app.requestSingleInstanceLock()) {
    app.quit();
    return;
  }
  const { path } = readStartArguments(argumentsAfterProgram(process.argv));
  const host = createHost(parts);
  app.on('second-instance', (_event, argv, folder) => {
    const again = readStartArguments(argumentsAfterProgram(argv), folder);
    if (again.path) void host.offerPath(again.path);
    bringForward();
  });
  app.on('open-file', (event, opened) => {
    event.preventDefault();
    void host.offerPath(opened);
  });
  app.on('window-all-closed', () => app.quit());
  endGracefully(host);
  if (process.env.OXGALL_NO_GPU || process.argv.includes('--no-gpu')) app.disableHardwareAcceleration();
  protocol.registerSchemesAsPrivileged([
    { scheme, privileges: { standard: true, secure: true, supportFetchAPI: true, stream: true } },
  ]);
  confineContents(app);
  app.enableSandbox();
  const offered = path ? host.offerPath(path) : Promise.resolve();
  void Promise.all([app.whenReady(), offered])
    .then(() => openWindow(host))
    .catch((error: unknown) => {
      process.stderr.write(`Oxgall cannot start: ${error instanceof Error ? error.message : error}\n`);
      app.exit(1);
    });
}

async function openWindow(host: Host): Promise<void> {
  const answer = createWindowHandler(host, windowFolders());
  protocol.handle(scheme, async (request) => refuseForeign(request) ?? answer(request));
  ipcMain.handle('oxgall:dropped', (event, dropped: unknown) => {
    if (!isOwn(event.senderFrame?.url ?? '') || typeof dropped !== 'string') return;
    host.allowDropped(dropped);
  });
  Menu.setApplicationMenu(
    Menu.buildFromTemplate(menuTemplate(process.platform, (command) => host.menu(command))),
  );
  const displays = screen.getAllDisplays().map((display) => display.workArea);
  const { bounds, maximized } = await loadWindowState(parts.dataFolder, displays);
  confineSession(session.defaultSession);
  const opened = new BrowserWindow(
    secured({
      ...bounds,
      minWidth: smallestWindow.width,
      minHeight: smallestWindow.height,
      title: 'Oxgall',
      backgroundColor: paper,
      show: false,
      webPreferences: { preload: preloadPath(), devTools: !app.isPackaged },
    }),
  );
  window = opened;
  rememberState(opened);
  const show = () => {
    if (opened.isDestroyed() || opened.isVisible()) return;
    if (maximized) opened.maximize();
    opened.show();
  };
  opened.once('ready-to-show', show);
  setTimeout(show, showAtLatestMs).unref();
  opened.on('closed', () => {
    window = null;
  });
  await opened.loadURL(windowUrl);
}

function bringForward(): void {
  if (!window) return;
  if (window.isMinimized()) window.restore();
  window.focus();
}

/** Sizes are saved a moment after the last change and again when the window closes. */
function rememberState(opened: BrowserWindow): void {
  let timer: NodeJS.Timeout | undefined;
  const save = () => {
    clearTimeout(timer);
    // A window that cannot be remembered opens where the system puts it.
    void saveWindowState(parts.dataFolder, opened.getNormalBounds(), opened.isMaximized()).catch(
      () => undefined,
    );
  };
  const saveSoon = () => {
    clearTimeout(timer);
    timer = setTimeout(save, saveStateAfterMs);
  };
  opened.on('resize', saveSoon);
  opened.on('move', saveSoon);
  opened.on('close', save);
}

/** The program ends when the host has put everything away. */
function endGracefully(host: Host): void {
  let ended = false;
  app.on('before-quit', (event) => {
    if (ended) return;
    event.preventDefault();
    void host
      .close()
      .then(() => parts.closeEngine())
      .finally(() => {
        ended = true;
        app.quit();
      });
  });
}

/** Run from the source folder, the program's own path comes before what the user named. */
function argumentsAfterProgram(argv: readonly string[]): string[] {
  return argv.slice(app.isPackaged ? 1 : 2);
}

function preloadPath(): string {
  return join(dirname(fileURLToPath(import.meta.url)), 'electronPreload.cjs');
}

start();
