import { homedir } from 'node:os';
import { basename, dirname } from 'node:path';
import { engineVersion } from '../../core/engineVersion.ts';
import { fingerprintPhoto } from '../store/photoFingerprint.ts';
import type { CheckedInput } from './api/commandSchemas.ts';
import type { Choice, CommandName, HostCommands, OpenedPhoto, Session } from './api/hostCommands.ts';
import { allowOpening, type HostState } from './host.ts';
import { listFolder, listPlaces, listProfilePlaces } from './listFolder.ts';
import { createMemoryHandlers, readShelf } from './memoryHandlers.ts';
import type { OpenPhoto } from './openPhoto.ts';
import { PaintCommands } from './paintCommands.ts';
import { Refusal } from './refusal.ts';
import type { RunningCall } from './runningCalls.ts';
import { savePainting } from './savePainting.ts';
import { ScreenTables } from './screenTables.ts';
import { createRunHandlers } from './series/runHandlers.ts';
import { createSeriesHandlers } from './series/seriesHandlers.ts';

type Answer<Command> = Command extends { output: infer Output } ? Output : Uint8Array<ArrayBuffer>;

/** One handler for each command of the contract. */
export type CommandHandlers = {
  [Name in CommandName]: (
    input: CheckedInput<Name>,
    call: RunningCall,
  ) => Promise<Answer<HostCommands[Name]>>;
};

/** Binds the commands to what they share; each is described where the contract lists it. */
export function createCommandHandlers(state: HostState): CommandHandlers {
  const { photos, memories, recents, grants, parts, calls } = state;
  const screenTables = new ScreenTables(() => parts.loadFiles());
  const paint = new PaintCommands(parts, calls, screenTables);
  return {
    ...createMemoryHandlers(state),
    ...createSeriesHandlers(state),
    ...createRunHandlers(state),
    startSession: () => startSession(state),
    openPhoto: ({ path }, call) => openPhoto(state, path, call, screenTables),
    awaitPhoto: async ({ photoId }, call) => {
      const photo = photos.find(photoId);
      await photo.whole(AbortSignal.any([call.signal, photo.closingSignal]));
      return present(state, photo);
    },
    closePhoto: async ({ photoId }) => {
      await Promise.all([photos.close(photoId, 'asked'), memories.forget(photoId)]);
      return {};
    },
    paintStrata: (input, call) => paint.paintStrata(photos.find(input.photoId), input, call),
    paintSmallPicture: (input, call) => paint.paintSmallPicture(photos.find(input.photoId), input, call),
    readGamutTable: async (input) => {
      if (typeof input.profile === 'object') grants.checkProfile(input.profile.file);
      return paint.readGamutTable(photos.find(input.photoId), input);
    },
    readScreenTable: (input) => paint.readScreenTable(photos.find(input.photoId), input),
    savePainting: (input, call) =>
      savePainting(photos.find(input.photoId), input, call, {
        loadEngine: () => parts.loadEngine(),
        loadFiles: () => parts.loadFiles(),
        grants,
        events: state.events,
        openPaths: () => photos.all.map((photo) => photo.path),
        memories,
      }),
    describeProfile: async ({ photoId, profile }) => {
      if (typeof profile === 'object') grants.checkProfile(profile.file);
      const files = await parts.loadFiles();
      return files.describeProfile(photos.find(photoId).path, profile);
    },
    listFolder: async ({ path, wanted }) => {
      const places = await listPlaces();
      if (wanted === 'profiles') places.push(...(await listProfilePlaces()));
      for (const place of places) grants.offerFolder(place.path);
      const folder = grants.checkListing(path ?? homedir());
      const listing = await listFolder(folder);
      grants.folderWasListed(folder);
      return { ...listing, places };
    },
    chooseWithDialog: (input) => chooseWithDialog(state, input),
    listRecents: async () => ({ recents: await recents.list() }),
    forgetRecent: async ({ path }) => {
      await recents.forget(path);
      return { recents: await recents.list() };
    },
    openDemo: async () => {
      if (!parts.demo) throw new Refusal('NotFound', 'The demo plates are not installed.');
      const series = await parts.demo.prepare(() => state.walls.folderChanged());
      for (const { path } of series.photos) allowOpening(state, path);
      grants.offerFolder(series.folder);
      return series;
    },
    revealFile: async ({ path }) => {
      if (!parts.desktop.reveal) throw new Refusal('NotFound', 'This window cannot show files elsewhere.');
      grants.checkWriting(dirname(path));
      await parts.desktop.reveal(path);
      return {};
    },
    cancelCall: async ({ callId }) => ({ cancelled: calls.cancel(callId) }),
  };
}

const warmUpAfterMs = 200;

/** A part that cannot be loaded says so when it is needed. */
async function warmUp(parts: HostState['parts']): Promise<void> {
  await Promise.allSettled([parts.loadFiles(), parts.loadEngine(), parts.loadComposeSmall()]);
}

async function startSession(state: HostState): Promise<Session> {
  const { parts, recents } = state;
  const { presets: presetStore } = await parts.loadStores();
  const [shelf, recentList] = await Promise.all([readShelf(presetStore), recents.list()]);
  // What the user opened in an earlier session counts as chosen.
  for (const { path, frames } of recentList)
    if (frames === undefined) allowOpening(state, path);
    else state.grants.offerFolder(path);
  const { opening } = state;
  state.opening = null;
  // The window is up: what the first photo needs is loaded while the user looks for it.
  setTimeout(() => void warmUp(parts), warmUpAfterMs).unref();
  return {
    appVersion: parts.appVersion,
    engineVersion: String(engineVersion),
    shell: parts.shell,
    platform: process.platform,
    workers: parts.workers,
    desktop: parts.desktop.capabilities,
    presets: shelf.presets,
    presetProblems: shelf.problems,
    recents: recentList,
    demo: { available: parts.demo !== null, title: parts.demo?.title ?? '' },
    opening,
    homePath: homedir(),
  };
}

async function openPhoto(
  state: HostState,
  given: string,
  call: RunningCall,
  screenTables: ScreenTables,
): Promise<OpenedPhoto> {
  const path = state.grants.checkPhoto(given);
  screenTables.begin(path);
  // Reading the bytes to know the photo by goes on beside the decoding: neither waits for the other.
  const fingerprint = fingerprintPhoto(path);
  fingerprint.catch(() => undefined);
  const photo = await state.photos.open(path, call.signal);
  await state.memories.open(photo.photoId, path, fingerprint, photo.describe().depth);
  await state.memories.keepOnly(state.photos.all.map(({ photoId }) => photoId));
  allowOpening(state, path);
  const opened = await present(state, photo);
  const { profile } = opened.memory.recipe.work.output;
  if (typeof profile === 'object') state.grants.allowProfile(profile.file);
  void state.recents.add(opened).then(() => state.events.send('recentsChanged', {}));
  return opened;
}

async function present(state: HostState, photo: OpenPhoto): Promise<OpenedPhoto> {
  return { ...photo.describe(), memory: await state.memories.view(photo.photoId) };
}

async function chooseWithDialog(state: HostState, input: CheckedInput<'chooseWithDialog'>): Promise<Choice> {
  const { desktop } = state.parts;
  if (!desktop.choose)
    throw new Refusal('NotFound', 'This window has no system dialogs.', 'Use the list of folders.');
  const path = await desktop.choose(input);
  if (!path) return { path: null, folder: null, name: null };
  if (input.kind === 'photo') allowOpening(state, path);
  if (input.kind === 'profile') state.grants.allowProfile(path);
  if (input.kind === 'folder') {
    state.grants.offerFolder(path);
    state.grants.allowWriting(path);
  }
  if (input.kind === 'save') state.grants.allowReplacing(path);
  return { path, folder: dirname(path), name: basename(path) };
}
