import { defaultPrintLongEdgeMm } from '../../core/parameters/lengths.ts';
import { defaultParameters, type Parameters } from '../../core/parameters/table.ts';
import type { OpenedPhoto, PresetOffer } from '../../main/host/api/hostCommands.ts';
import { host, isUnwanted, troubleOf } from '../host/host.ts';
import { endLook, type Look, startLook } from '../state/lookStore.ts';
import { addNotice } from '../state/noticeStore.ts';
import { openingStore, photoStore, sessionStore } from '../state/photoStore.ts';
import { changeView, viewStore } from '../state/viewStore.ts';
import { flushDraft, followDraft, forgetDraft } from './draftWork.ts';

/** What a photo that was never worked on starts from. */
const firstPresetName = 'low-water';

let opening: AbortController | null = null;

/** Puts a photo on the easel: the first picture as soon as the host has one, the rest when it is decoded. */
export async function openPhoto(path: string): Promise<void> {
  opening?.abort();
  const abort = new AbortController();
  opening = abort;
  openingStore.set({ path, trouble: null });
  try {
    await flushDraft();
    const photo = await host.call('openPhoto', { path }, { signal: abort.signal });
    if (abort.signal.aborted) return;
    openingStore.set({ path: null, trouble: null });
    setOnEasel(photo);
    if (photo.stage === 'quick') await finishDecoding(photo, abort.signal);
  } catch (error) {
    if (abort.signal.aborted || isUnwanted(error)) openingStore.set({ path: null, trouble: null });
    else openingStore.set({ path: null, trouble: troubleOf(error) });
  }
}

export function cancelOpening(): void {
  opening?.abort();
  openingStore.set({ path: null, trouble: null });
}

async function finishDecoding(photo: OpenedPhoto, signal: AbortSignal): Promise<void> {
  const whole = await host.call('awaitPhoto', { photoId: photo.photoId }, { signal });
  if (photoStore.get()?.photoId === whole.photoId) photoStore.set(whole);
}

function setOnEasel(photo: OpenedPhoto): void {
  const previous = photoStore.get();
  const preset = presetByName(photo.draft?.presetName ?? null);
  const fresh = freshLook(preset);
  changeView({ intent: { kind: 'fit' }, split01: null, bare: false });
  endLook();
  if (photo.draft) {
    const { view } = photo.draft;
    startLook({
      ...fresh,
      parameters: { ...fresh.parameters, ...photo.draft.parameters } as Parameters,
      printLongEdgeMm:
        typeof view.printLongEdgeMm === 'number' ? view.printLongEdgeMm : fresh.printLongEdgeMm,
    });
    if (typeof view.cut01 === 'number') changeView({ cut01: view.cut01 });
    addNotice(`Your changes to ${photo.name} are as you left them.`, {
      label: 'Start afresh',
      run: () => startAfresh(fresh),
    });
  } else startLook(fresh);
  photoStore.set(photo);
  for (const remark of photo.remarks) addNotice(remark);
  followDraft(photo);
  if (previous && previous.photoId !== photo.photoId) void closeQuietly(previous.photoId);
}

function startAfresh(look: Look): void {
  startLook(look);
  void forgetDraft();
}

export function presetByName(name: string | null): PresetOffer {
  const presets = sessionStore.get()?.presets ?? [];
  return (
    presets.find((preset) => preset.name === name) ??
    presets.find((preset) => preset.name === firstPresetName) ??
    presets[0] ?? { name: 'plain', title: 'Plain', description: '', parameters: defaultParameters() }
  );
}

function freshLook(preset: PresetOffer): Look {
  return {
    presetId: preset.name,
    presetParameters: preset.parameters,
    parameters: preset.parameters,
    printLongEdgeMm: defaultPrintLongEdgeMm,
    lifted: {},
  };
}

/** Back to the first screen; changes are kept as a draft. */
export async function closePhoto(): Promise<void> {
  const photo = photoStore.get();
  if (!photo) return;
  opening?.abort();
  await flushDraft();
  followDraft(null);
  photoStore.set(null);
  endLook();
  viewStore.update((view) => ({ ...view, split01: null, bare: false }));
  await closeQuietly(photo.photoId);
  await refreshSession();
}

async function closeQuietly(photoId: string): Promise<void> {
  await host.call('closePhoto', { photoId }).catch(() => undefined);
}

/** Asks the host again what the first screen shows. */
export async function refreshSession(): Promise<void> {
  try {
    sessionStore.set(await host.call('startSession', {}));
  } catch (error) {
    if (!sessionStore.get()) openingStore.set({ path: null, trouble: troubleOf(error) });
  }
}

export async function openDemo(): Promise<void> {
  openingStore.set({ path: 'demo', trouble: null });
  try {
    const demo = await host.call('openDemo', {});
    if (demo.photos[0]) await openPhoto(demo.photos[0].path);
  } catch (error) {
    openingStore.set({ path: null, trouble: troubleOf(error) });
  }
}
