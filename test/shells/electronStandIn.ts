import { EventEmitter } from 'node:events';
import type { BrowserWindowConstructorOptions } from 'electron';

type Handler = (...args: never[]) => unknown;

/** Everything a shell did to the stand-in, in order. */
export interface Recorded {
  calls: string[];
  windows: StandInWindow[];
  schemes: { scheme: string; privileges: Record<string, boolean> }[];
  handlers: Map<string, (request: Request) => Promise<Response>>;
  ipc: Map<string, Handler>;
  menu: { label?: string; submenu?: unknown }[];
  beforeRequest: Handler | null;
  permissionRequest: Handler | null;
  permissionCheck: Handler | null;
  deviceCheck: Handler | null;
  quits: number;
}

export class StandInContents extends EventEmitter {
  openHandler: Handler | null = null;
  setWindowOpenHandler(handler: Handler) {
    this.openHandler = handler;
  }
}

export class StandInWindow extends EventEmitter {
  shown = false;
  focused = false;
  loadedUrl = '';
  constructor(readonly options: BrowserWindowConstructorOptions) {
    super();
  }
  async loadURL(url: string) {
    this.loadedUrl = url;
  }
  show() {
    this.shown = true;
  }
  focus() {
    this.focused = true;
  }
  maximize() {}
  restore() {}
  isDestroyed() {
    return false;
  }
  isVisible() {
    return this.shown;
  }
  isMinimized() {
    return false;
  }
  isMaximized() {
    return false;
  }
  getNormalBounds() {
    return { x: 10, y: 20, width: 1300, height: 800 };
  }
}

/**
 * Stands in for the `electron` module: enough of it for the shell to start, everything recorded.
 * @param options.firstInstance whether the single-instance lock is to be had
 */
export function makeElectronStandIn(options: { firstInstance: boolean }) {
  const recorded: Recorded = {
    calls: [],
    windows: [],
    schemes: [],
    handlers: new Map(),
    ipc: new Map(),
    menu: [],
    beforeRequest: null,
    permissionRequest: null,
    permissionCheck: null,
    deviceCheck: null,
    quits: 0,
  };
  const note = (call: string) => recorded.calls.push(call);
  const app = Object.assign(new EventEmitter(), {
    isPackaged: true,
    requestSingleInstanceLock: () => options.firstInstance,
    quit: () => {
      recorded.quits += 1;
      app.emit('before-quit', { preventDefault: () => note('quit held back') });
    },
    exit: () => note('exit'),
    enableSandbox: () => note('enableSandbox'),
    disableHardwareAcceleration: () => note('disableHardwareAcceleration'),
    whenReady: async () => note('ready'),
  });
  class BrowserWindow extends StandInWindow {
    constructor(windowOptions: BrowserWindowConstructorOptions) {
      super(windowOptions);
      note('window');
      recorded.windows.push(this);
    }
  }
  const defaultSession = Object.assign(new EventEmitter(), {
    setPermissionRequestHandler: (handler: Handler) => {
      recorded.permissionRequest = handler;
    },
    setPermissionCheckHandler: (handler: Handler) => {
      recorded.permissionCheck = handler;
    },
    setDevicePermissionHandler: (handler: Handler) => {
      recorded.deviceCheck = handler;
    },
    webRequest: {
      onBeforeRequest: (handler: Handler) => {
        recorded.beforeRequest = handler;
      },
    },
  });
  const electron = {
    app,
    BrowserWindow,
    dialog: {
      showOpenDialog: async () => ({ canceled: false, filePaths: [process.env.OXGALL_TEST_CHOICE ?? ''] }),
      showSaveDialog: async () => ({ canceled: true, filePath: '' }),
    },
    ipcMain: { handle: (channel: string, handler: Handler) => recorded.ipc.set(channel, handler) },
    Menu: {
      buildFromTemplate: (template: Recorded['menu']) => template,
      setApplicationMenu: (menu: Recorded['menu']) => {
        recorded.menu = menu;
      },
    },
    protocol: {
      registerSchemesAsPrivileged: (schemes: Recorded['schemes']) => {
        note('registerSchemesAsPrivileged');
        recorded.schemes.push(...schemes);
      },
      handle: (scheme: string, handler: (request: Request) => Promise<Response>) =>
        recorded.handlers.set(scheme, handler),
    },
    screen: { getAllDisplays: () => [{ workArea: { x: 0, y: 0, width: 1920, height: 1080 } }] },
    session: { defaultSession },
    shell: { showItemInFolder: () => note('showItemInFolder') },
  };
  return { electron, recorded, app, defaultSession };
}
