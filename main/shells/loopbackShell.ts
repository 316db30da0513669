// The program in a browser's app window, served on this machine alone. Closing the window ends it.
import { createHost } from '../host/host.ts';
import { installedParts } from '../host/installedParts.ts';
import { createWindowHandler } from '../host/windowHandler.ts';
import { type ChromiumWindow, openChromiumWindow } from './chromiumWindow.ts';
import { findChromium } from './findChromium.ts';
import { appVersion, windowFolders } from './installedFolders.ts';
import { serveOnLoopback } from './loopbackServer.ts';
import { readStartArguments } from './startArguments.ts';

const parts = installedParts({
  shell: 'loopback',
  appVersion: appVersion(),
  desktop: {
    capabilities: { fileDialogs: false, droppedPaths: false, revealFiles: false, menu: false },
  },
});

async function main(): Promise<void> {
  const { path, noWindow } = readStartArguments(process.argv.slice(2));
  const host = createHost(parts);
  if (path) await host.offerPath(path);
  const server = await serveOnLoopback(createWindowHandler(host, windowFolders()));
  let window: ChromiumWindow | null = null;
  let ending: Promise<void> | null = null;
  const end = () => {
    ending ??= (async () => {
      window?.close();
      await host.close();
      // The browser's throw-away profile goes with its window.
      await window?.closed;
      await server.close();
      await parts.closeEngine();
    })();
    return ending;
  };
  const stop = () => {
    if (ending) process.exit(1);
    void end().then(() => process.exit(0));
  };
  for (const signal of ['SIGINT', 'SIGTERM', 'SIGHUP'] as const) process.on(signal, stop);

  const browser = noWindow || !hasDisplay() ? null : findChromium();
  if (!browser) return say(`Oxgall is at ${server.oneTimeUrl}`);
  window = await openChromiumWindow(browser, server.oneTimeUrl);
  const { failed } = await window.closed;
  if (failed && !ending)
    return say(`${browser} could not open a window. Open this address instead: ${server.oneTimeUrl}`);
  await end();
  process.exit(0);
}

function hasDisplay(): boolean {
  return process.platform !== 'linux' || Boolean(process.env.DISPLAY || process.env.WAYLAND_DISPLAY);
}

function say(line: string): void {
  process.stdout.write(`${line}\n`);
}

main().catch((error: unknown) => {
  process.stderr.write(`Oxgall cannot start: ${error instanceof Error ? error.message : String(error)}\n`);
  process.exit(1);
});
