import type { App, BrowserWindowConstructorOptions, Session, WebContents, WebPreferences } from 'electron';

export const scheme = 'oxgall';
export const windowOrigin = `${scheme}://app`;
export const windowUrl = `${windowOrigin}/`;

/** The page is an ordinary web page: no Node, its own world, the system's sandbox. */
const safePreferences: WebPreferences = {
  contextIsolation: true,
  sandbox: true,
  nodeIntegration: false,
  nodeIntegrationInWorker: false,
  nodeIntegrationInSubFrames: false,
  webSecurity: true,
  allowRunningInsecureContent: false,
  experimentalFeatures: false,
  webviewTag: false,
  navigateOnDragDrop: false,
  spellcheck: false,
};

/** Lays the security flags over a window's options; called last, so that nothing before it can undo them. */
export function secured(options: BrowserWindowConstructorOptions): BrowserWindowConstructorOptions {
  return { ...options, webPreferences: { ...options.webPreferences, ...safePreferences } };
}

/** Whether an address is the window's own. */
export function isOwn(url: string): boolean {
  return url === windowUrl || url.startsWith(windowUrl);
}

/** Every page, whoever makes it: stays where it is, opens no window, embeds nothing. */
export function confineContents(app: App): void {
  app.on('web-contents-created', (_event, contents: WebContents) => {
    const stayHome = (event: { preventDefault(): void; url: string }) => {
      if (!isOwn(event.url)) event.preventDefault();
    };
    contents.on('will-navigate', stayHome);
    contents.on('will-redirect', stayHome);
    contents.on('will-frame-navigate', stayHome);
    contents.on('will-attach-webview', (event) => event.preventDefault());
    contents.setWindowOpenHandler(() => ({ action: 'deny' }));
  });
}

/** The session grants no permission, knows no device, downloads nothing and reaches nothing but the window's own. */
export function confineSession(session: Session): void {
  session.setPermissionRequestHandler((_contents, _permission, answer) => answer(false));
  session.setPermissionCheckHandler(() => false);
  session.setDevicePermissionHandler(() => false);
  session.on('will-download', (event) => event.preventDefault());
  session.webRequest.onBeforeRequest((details, answer) => {
    const allowed = isOwn(details.url) || /^(data|blob|devtools):/.test(details.url);
    answer({ cancel: !allowed });
  });
}

/** @returns a refusal for a request that does not come from the window itself; null where it may go on */
export function refuseForeign(request: Request): Response | null {
  const origin = request.headers.get('origin');
  if (isOwn(request.url) && (origin === null || origin === windowOrigin)) return null;
  const error = { name: 'NotAllowed', message: 'This page may not speak to Oxgall.', remedy: '', callId: '' };
  return Response.json({ error }, { status: 403 });
}
