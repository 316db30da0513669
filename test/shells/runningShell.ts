import { type ChildProcess, spawn } from 'node:child_process';
import { once } from 'node:events';
import { mkdtemp, rm } from 'node:fs/promises';
import { tmpdir } from 'node:os';
import { join } from 'node:path';
import { createHostCaller, type HostCaller } from '../../core/hostProtocol/hostCaller.ts';
import type { HostCommands } from '../../main/host/api/hostCommands.ts';

const root = join(import.meta.dirname, '../..');

/** The built program, running for real. */
export interface RunningShell {
  /** Lets one window in; used up already unless asked not to enter. */
  address: string;
  caller: HostCaller<HostCommands>;
  /** Milliseconds from its start to its address. */
  readyMs: number;
  child: ChildProcess;
  /** The host's events from now on. */
  listen(): Promise<ReadableStream<Uint8Array>>;
  dataFolder: string;
  /** Ends it at once, as a crash would. */
  kill(): Promise<void>;
  /** Ends it politely. */
  end(): Promise<number | null>;
}

/**
 * Starts the built loopback shell without a window.
 * @param options.enter whether to use its one-time address, so that `caller` may speak to it
 */
export async function startLoopbackShell(
  given: string[] = [],
  environment: Record<string, string> = {},
  { enter = true } = {},
): Promise<RunningShell> {
  const dataFolder = environment.OXGALL_DATA ?? (await mkdtemp(join(tmpdir(), 'oxgall-data-')));
  const started = performance.now();
  const child = spawn(process.execPath, [join(root, 'dist/main/loopbackShell.js'), '--no-window', ...given], {
    env: { ...process.env, OXGALL_DATA: dataFolder, ...environment },
    stdio: ['ignore', 'pipe', 'inherit'],
  });
  const address = await firstAddress(child);
  const readyMs = performance.now() - started;
  const { origin } = new URL(address);
  const opened = enter ? await fetch(address, { redirect: 'manual' }) : null;
  const cookie = (opened?.headers.get('set-cookie') ?? '').split(';')[0];
  const send = (request: Request) => {
    request.headers.set('cookie', cookie);
    request.headers.set('origin', origin);
    return fetch(request);
  };
  const gone = once(child, 'exit');
  return {
    address,
    caller: createHostCaller<HostCommands>({ fetch: send, base: origin }),
    readyMs,
    child,
    listen: async () => (await send(new Request(`${origin}/api/events`))).body!,
    dataFolder,
    kill: async () => {
      child.kill('SIGKILL');
      await gone;
    },
    end: async () => {
      child.kill('SIGTERM');
      await gone;
      if (!environment.OXGALL_DATA) await rm(dataFolder, { recursive: true, force: true });
      return child.exitCode;
    },
  };
}

async function firstAddress(child: ChildProcess): Promise<string> {
  let text = '';
  for await (const chunk of child.stdout!) {
    text += chunk;
    const address = /http:\/\/\S+/.exec(text)?.[0];
    if (address) return address;
  }
  throw new Error(`The shell ended before it said its address: ${text}`);
}
