import { stat } from 'node:fs/promises';
import { dirname, resolve } from 'node:path';
import { Hono } from 'hono';
import { callIdHeader, newCallId } from '../../core/hostProtocol/hostCaller.ts';
import { commandSchemas, commonBodyLimitBytes } from './api/commandSchemas.ts';
import type { CommandName, HostCommands } from './api/hostCommands.ts';
import type { MenuCommand } from './api/hostEvents.ts';
import { carriesDocument, documentBodyLimitBytes } from './api/memorySchemas.ts';
import { type CommandHandlers, createCommandHandlers } from './commandHandlers.ts';
import { EventHub } from './eventHub.ts';
import type { HostParts } from './hostParts.ts';
import { OpenPhotos } from './openPhotos.ts';
import { PathGrants } from './pathGrants.ts';
import { PhotoMemories } from './photoMemories.ts';
import { RecentPhotos } from './recentPhotos.ts';
import { describeError, Refusal } from './refusal.ts';
import { readJsonBody } from './requestBody.ts';
import { RunningCalls } from './runningCalls.ts';
import { Walls } from './series/walls.ts';

/** The host: everything behind the window, whichever shell shows it. */
export interface Host {
  /** Answers `/api/…`; a web-standard fetch handler. */
  fetch(request: Request): Promise<Response>;
  /** The user named a photo or folder outside the window: an argument, a second start, a drop. */
  offerPath(path: string): Promise<void>;
  /** A file dropped on the window: it may be opened from now on. */
  allowDropped(path: string): void;
  menu(command: MenuCommand): void;
  /** Cancels what is under way and gives everything back; every change is on the disk when it resolves. */
  close(): Promise<void>;
}

/** Everything the commands share. */
export interface HostState {
  parts: HostParts;
  grants: PathGrants;
  events: EventHub;
  calls: RunningCalls;
  photos: OpenPhotos;
  recents: RecentPhotos;
  memories: PhotoMemories;
  walls: Walls;
  /** What the program was started with; told once. */
  opening: { kind: 'photo' | 'folder'; path: string } | null;
}

const maximumOpenPhotos = 3;
/** More calls than any window of ours has under way at once. */
const maximumCalls = 64;
const plainCallId = /^[\w.:-]{1,64}$/;

/** Builds a host from its parts; nothing heavy is loaded before it is asked for. */
export function createHost(parts: HostParts): Host {
  const events = new EventHub();
  const calls = new RunningCalls();
  const state: HostState = {
    parts,
    grants: new PathGrants(),
    events,
    calls,
    photos: new OpenPhotos({
      loadEngine: () => parts.loadEngine(),
      loadFiles: () => parts.loadFiles(),
      events,
      maximum: parts.maximumOpenPhotos ?? maximumOpenPhotos,
    }),
    recents: new RecentPhotos(parts.dataFolder),
    memories: new PhotoMemories({ loadStores: () => parts.loadStores(), events }),
    walls: new Walls(parts, events, calls),
    opening: null,
  };
  const app = routes(state);
  return {
    fetch: async (request) => app.fetch(request),
    offerPath: (path) => offerPath(state, path),
    allowDropped: (path) => allowOpening(state, path),
    menu: (command) => events.send('menu', { command }),
    close: () => closeHost(state),
  };
}

function routes(state: HostState): Hono {
  const app = new Hono();
  const handlers = createCommandHandlers(state);
  app.get('/api/events', ({ req }) => state.events.listen(req.raw.signal));
  app.post('/api/:command', ({ req }) => answer(state, handlers, req.param('command'), req.raw));
  app.all('/api/*', () => {
    throw new Refusal('NotFound', 'There is no such command.');
  });
  app.onError((error, { req }) => failure(error, req.header(callIdHeader) ?? ''));
  app.notFound(({ req }) =>
    failure(new Refusal('NotFound', 'There is nothing here.'), req.header(callIdHeader) ?? ''),
  );
  return app;
}

async function answer(
  state: HostState,
  handlers: CommandHandlers,
  name: string,
  request: Request,
): Promise<Response> {
  const given = request.headers.get(callIdHeader);
  const callId = given ?? newCallId();
  if (!plainCallId.test(callId))
    throw new Refusal('BadRequest', 'A call id is up to 64 letters and figures.');
  if (!isCommand(name)) throw new Refusal('NotFound', `There is no command ${name.slice(0, 40)}.`);
  if (state.calls.count >= maximumCalls)
    throw new Refusal('TooLarge', 'Too much is under way at once.', 'Wait a moment and try again.');
  let signal: AbortSignal | undefined;
  try {
    return await state.calls.run(callId, request.signal, async (call) => {
      signal = call.signal;
      const limitBytes = carriesDocument.has(name) ? documentBodyLimitBytes : commonBodyLimitBytes;
      const input = checkInput(name, await readJsonBody(request, limitBytes));
      const result = await run(handlers, name, input, call);
      call.signal.throwIfAborted();
      return result instanceof Uint8Array
        ? frameResponse(result as Uint8Array<ArrayBuffer>, callId)
        : jsonResponse(result, 200, callId);
    });
  } catch (error) {
    return failure(error, callId, signal);
  }
}

/** The table's own types tie each schema to its handler; by name alone the compiler cannot see it. */
function run(
  handlers: CommandHandlers,
  name: CommandName,
  input: unknown,
  call: Parameters<CommandHandlers[CommandName]>[1],
): Promise<object | Uint8Array<ArrayBuffer>> {
  const handler = handlers[name] as (input: unknown, call: unknown) => Promise<object>;
  return handler(input, call);
}

function isCommand(name: string): name is CommandName {
  return Object.hasOwn(commandSchemas, name);
}

function checkInput<Name extends keyof HostCommands>(name: Name, value: unknown): unknown {
  const checked = commandSchemas[name].safeParse(value);
  if (checked.success) return checked.data;
  const [issue] = checked.error.issues;
  const where = issue.path.length > 0 ? ` for ${issue.path.join('.')}` : '';
  throw new Refusal('BadRequest', `${name}: ${issue.message}${where}.`);
}

function frameResponse(frame: Uint8Array<ArrayBuffer>, callId: string): Response {
  return new Response(frame, {
    headers: {
      'content-type': 'application/octet-stream',
      'content-length': String(frame.byteLength),
      'cache-control': 'no-store',
      [callIdHeader]: callId,
    },
  });
}

function jsonResponse(value: object, status: number, callId: string): Response {
  return new Response(JSON.stringify(value), {
    status,
    headers: {
      'content-type': 'application/json; charset=utf-8',
      'cache-control': 'no-store',
      [callIdHeader]: callId,
    },
  });
}

function failure(error: unknown, callId: string, signal?: AbortSignal): Response {
  const { status, body } = describeError(error, callId, signal);
  return jsonResponse(body, status, callId);
}

/** A photo the user chose may be opened, and paintings may be written beside it. */
export function allowOpening(state: HostState, path: string): void {
  state.grants.allowPhoto(path);
  state.grants.allowWriting(dirname(resolve(path)));
}

async function offerPath(state: HostState, given: string): Promise<void> {
  const path = resolve(given);
  const facts = await stat(path).catch(() => null);
  const kind = facts?.isDirectory() ? 'folder' : 'photo';
  if (kind === 'folder') state.grants.offerFolder(path);
  else allowOpening(state, path);
  // Before a window listens there is nobody to tell: the session's first answer says it.
  if (state.events.listenerCount === 0) state.opening = { kind, path };
  else state.events.send('openRequested', { kind, path });
}

async function closeHost(state: HostState): Promise<void> {
  state.calls.cancelAll();
  // What waits is saved at once: a painting may take a while to stop.
  await Promise.all([state.photos.closeAll(), state.memories.flush()]);
  await Promise.all([state.memories.close(), state.recents.flush(), state.walls.closeAll()]);
  state.events.close();
}
