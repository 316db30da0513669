/** What can be done with the series on the Wall. Every change of it is one undoable step. */
import type { Parameters } from '../../core/parameters/table.ts';
import { allMatchParts, type MatchParts } from '../../core/series/frameMatch.ts';
import type { Remedy } from '../../core/series/oddOnesOut.ts';
import {
  lookOfFrame,
  overrideOf,
  partsOfFrame,
  type SeriesLook,
  type SeriesSettings,
  withOverride,
} from '../../core/series/seriesDocument.ts';
import type { SeriesView } from '../../main/host/api/seriesCommands.ts';
import { layPreset, tellWork } from '../app/memoryWork.ts';
import { openPhoto } from '../app/photoWork.ts';
import { host, isUnwanted, troubleOf } from '../host/host.ts';
import { currentLook } from '../state/lookStore.ts';
import { memoryStore } from '../state/memoryStore.ts';
import { addNotice } from '../state/noticeStore.ts';
import { openingStore, photoStore, sessionStore } from '../state/photoStore.ts';
import { type ChangeGroup, recordChange, redo, startHistory, undo } from '../state/undoHistory.ts';
import { pictureShelf } from './pictureShelf.ts';
import { readRun, runStore } from './runWork.ts';
import {
  chosenStore,
  comparedStore,
  nothingChosen,
  roomStore,
  seriesStore,
  settingsStore,
  startingScalePx,
  wallScaleStore,
  wallSheetStore,
} from './wallStore.ts';

/** A series is opened only after one that was taken down is closed: it may be the same folder. */
let closing: Promise<unknown> = Promise.resolve();

/** Hangs a folder on the Wall. */
export async function openSeries(path: string): Promise<void> {
  openingStore.set({ path, trouble: null });
  try {
    await Promise.all([tellWork(), closing]);
    const view = await host.call('openSeries', { path });
    openingStore.set({ path: null, trouble: null });
    hang(view);
  } catch (error) {
    openingStore.set({ path: null, trouble: isUnwanted(error) ? null : troubleOf(error) });
  }
}

export async function openDemoSeries(): Promise<void> {
  openingStore.set({ path: sessionStore.get()?.demo.title ?? 'the demo', trouble: null });
  try {
    const demo = await host.call('openDemo', {});
    await openSeries(demo.folder);
  } catch (error) {
    openingStore.set({ path: null, trouble: troubleOf(error) });
  }
}

function hang(view: SeriesView): void {
  const before = seriesStore.get();
  pictureShelf.follow(view.seriesId);
  chosenStore.set(nothingChosen);
  comparedStore.set(null);
  wallSheetStore.set('none');
  seriesStore.set(view);
  if (before?.seriesId !== view.seriesId) {
    settingsStore.set(startHistory(view.settings));
    const wall = { widthPx: window.innerWidth * 0.76, heightPx: window.innerHeight * 0.93 };
    const coming = Array.from({ length: view.coming }, () => ({ widthPx: 0, heightPx: 0 }));
    wallScaleStore.set(startingScalePx([...view.frames, ...coming], wall));
  }
  roomStore.set('wall');
  void readRun();
}

/** Takes the series down; changes are kept. */
export async function closeSeries(): Promise<void> {
  const series = seriesStore.get();
  if (!series) return;
  roomStore.set('easel');
  seriesStore.set(null);
  settingsStore.set(null);
  comparedStore.set(null);
  wallSheetStore.set('none');
  runStore.set(null);
  pictureShelf.follow(null);
  const { seriesId } = series;
  closing = telling.then(() => host.call('closeSeries', { seriesId })).catch(() => undefined);
  await closing;
}

/** The host found out something new. */
export async function refreshSeries(seriesId: string): Promise<void> {
  if (seriesStore.get()?.seriesId !== seriesId) return;
  const view = await host.call('readSeries', { seriesId }).catch(() => null);
  if (view && seriesStore.get()?.seriesId === seriesId) seriesStore.set(view);
}

export function currentSettings(): SeriesSettings | null {
  return settingsStore.get()?.present ?? null;
}

/** Changes the series, as one step of undo. */
export function changeSeries(
  change: Partial<SeriesSettings>,
  label: string,
  group: ChangeGroup | null = null,
): void {
  const history = settingsStore.get();
  if (!history) return;
  const next = { ...history.present, ...change };
  settingsStore.set(recordChange(history, next, label, group, performance.now()));
  void tellChange(change);
}

export function undoSeries(): void {
  step(undo);
}

export function redoSeries(): void {
  step(redo);
}

function step(move: typeof undo<SeriesSettings>): void {
  const history = settingsStore.get();
  if (!history) return;
  const next = move(history);
  if (next === history) return;
  settingsStore.set(next);
  void tellChange(next.present);
}

let telling: Promise<void> = Promise.resolve();

/** One after another, so that an older change never lands on a newer one. */
function tellChange(change: Partial<SeriesSettings>): Promise<void> {
  const series = seriesStore.get();
  if (!series) return telling;
  const { seriesId } = series;
  telling = telling.then(async () => {
    try {
      const view = await host.call('changeSeries', { seriesId, change });
      if (seriesStore.get()?.seriesId === seriesId) seriesStore.set(view);
    } catch (error) {
      const { message, remedy } = troubleOf(error);
      addNotice(`${message} ${remedy}`.trim());
    }
  });
  return telling;
}

const frameWords = (frameIds: readonly string[]) =>
  frameIds.length === 1 ? frameIds[0] : `${frameIds.length} frames`;

export function makeLead(frameId: string): void {
  const settings = currentSettings();
  if (!settings || settings.lead === frameId) return;
  const leftOut = settings.leftOut.filter((other) => other !== frameId);
  changeSeries({ lead: frameId, leftOut }, `${frameId} leads`);
}

/** Leaves frames out of the series, or takes them back. */
export function leaveOut(frameIds: readonly string[], isOut: boolean): void {
  const settings = currentSettings();
  if (!settings || frameIds.length === 0) return;
  const named = new Set(frameIds);
  const rest = settings.leftOut.filter((frameId) => !named.has(frameId));
  const label = `${isOut ? 'Leave out' : 'Take back'} ${frameWords(frameIds)}`;
  changeSeries({ leftOut: isOut ? [...rest, ...frameIds] : rest }, label);
}

/** Lays a look on some frames as their own, or on the whole series. */
export function layLook(look: SeriesLook, name: string, frameIds: readonly string[] | null): void {
  const settings = currentSettings();
  if (!settings) return;
  if (frameIds === null) {
    changeSeries({ look }, `${name} for the series`);
    return;
  }
  let { overrides } = settings;
  for (const frameId of frameIds)
    overrides = withOverride(overrides, [frameId], { ...overrideOf({ overrides }, frameId), look });
  changeSeries({ overrides }, `${name} for ${frameWords(frameIds)}`);
}

/** Matches these parts of some frames, or of the whole series. */
export function matchParts(change: Partial<MatchParts>, frameIds: readonly string[] | null): void {
  const settings = currentSettings();
  if (!settings) return;
  if (frameIds === null) {
    const { match } = settings;
    changeSeries({ match: { ...match, parts: { ...match.parts, ...change } } }, 'What is matched');
    return;
  }
  let { overrides } = settings;
  for (const frameId of frameIds) {
    const own = overrideOf({ overrides }, frameId);
    const parts = { ...(own?.parts ?? settings.match.parts), ...change };
    overrides = withOverride(overrides, [frameId], { ...own, parts });
  }
  changeSeries({ overrides }, `What is matched of ${frameWords(frameIds)}`);
}

export function dropOverrides(frameIds: readonly string[]): void {
  const settings = currentSettings();
  if (!settings) return;
  const overrides = withOverride(settings.overrides, frameIds, null);
  changeSeries({ overrides }, `${frameWords(frameIds)} as the series`);
}

export function setMatchAmount(amount01: number, isHeld: boolean): void {
  const settings = currentSettings();
  if (!settings || settings.match.amount01 === amount01) return;
  changeSeries({ match: { ...settings.match, amount01 } }, 'Match to the lead', {
    name: 'match',
    held: isHeld,
  });
}

export const remedyWords: Record<Remedy, string> = {
  matchTone: 'Match its tone',
  matchInk: 'Match its ink',
  matchNoise: 'Match its noise and detail',
  chooseAnotherLead: 'Choose another lead',
  leaveOut: 'Leave it out',
};

export function applyRemedy(remedy: Remedy, frameId: string): void {
  const settings = currentSettings();
  if (!settings) return;
  if (remedy === 'leaveOut') leaveOut([frameId], true);
  else if (remedy === 'chooseAnotherLead') {
    const next = likelyLead();
    if (next) makeLead(next);
  } else {
    const wanted = { matchTone: ['tone'], matchInk: ['ink'], matchNoise: ['noise', 'detail'] } as const;
    const change = Object.fromEntries(wanted[remedy].map((part) => [part, true]));
    const parts = { ...partsOfFrame(settings, frameId), ...change };
    const own = { ...overrideOf(settings, frameId), parts: { ...allMatchParts, ...parts } };
    const overrides = withOverride(settings.overrides, [frameId], own);
    changeSeries({ overrides, match: { ...settings.match, amount01: 1 } }, remedyWords[remedy]);
  }
}

/** The first frame that nothing is odd about. */
function likelyLead(): string | null {
  const settings = currentSettings();
  const series = seriesStore.get();
  const fit = series?.frames.find(
    ({ frameId, odd, state }) =>
      !odd && state === 'ready' && frameId !== settings?.lead && !settings?.leftOut.includes(frameId),
  );
  return fit?.frameId ?? null;
}

/** Counts the words where to go: opening a photo takes a while, and the last word counts. */
let goings = 0;

/** Puts a frame on the easel, with the look it has on the Wall where it has no recipe of its own. */
export async function openOnEasel(frameId: string): Promise<void> {
  const frame = seriesStore.get()?.frames.find((candidate) => candidate.frameId === frameId);
  const settings = currentSettings();
  if (!frame || !settings || frame.state === 'unreadable') return;
  goings += 1;
  const going = goings;
  if (photoStore.get()?.path !== frame.path) await openPhoto(frame.path);
  if (photoStore.get()?.path !== frame.path || going !== goings) return;
  roomStore.set('easel');
  const look = lookOfFrame(settings, frameId);
  const offer = sessionStore.get()?.presets.find(({ name }) => name === look.preset);
  const laid = currentLook();
  if (offer && memoryStore.get()?.isKept === false && laid?.stateId !== look.stateId)
    await layPreset(look.preset, offer.title);
}

/** The look that lies on the easel, for the Wall. */
export function easelLook(): SeriesLook | null {
  const look = currentLook();
  return look && { preset: look.presetId, stateId: look.stateId, parameters: look.parameters as Parameters };
}

/** To the other room; the Wall only where a series hangs. */
export function goTo(room: 'easel' | 'wall'): void {
  if (room === 'wall' && !seriesStore.get()) return;
  if (room === 'easel' && !photoStore.get()) {
    const { at } = chosenStore.get();
    const first = at ?? currentSettings()?.lead ?? seriesStore.get()?.frames[0]?.frameId;
    if (first) void openOnEasel(first);
    return;
  }
  goings += 1;
  roomStore.set(room);
}
