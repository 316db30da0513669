import type { OpenedPhoto } from '../../main/host/api/hostCommands.ts';
import { compositor } from '../compositing/compositor.ts';
import { canvasSpace } from '../compositing/compositorClient.ts';
import type { WayToScreen } from '../compositing/messages.ts';
import { host, isUnwanted, troubleOf } from '../host/host.ts';
import { changeLook, endLook, startLook } from '../state/lookStore.ts';
import { addNotice } from '../state/noticeStore.ts';
import { openingStore, photoStore, sessionStore } from '../state/photoStore.ts';
import { changeView, viewStore } from '../state/viewStore.ts';
import { roomStore, seriesStore } from '../wall/wallStore.ts';
import { followMemory, lookOf, tellWork } from './memoryWork.ts';

let opening: AbortController | null = null;

/** Puts a photo on the easel: the first picture as soon as the host has one, the rest when it is decoded. */
export async function openPhoto(path: string): Promise<void> {
  opening?.abort();
  const abort = new AbortController();
  opening = abort;
  openingStore.set({ path, trouble: null });
  try {
    await tellWork();
    const photo = await host.call('openPhoto', { path }, { signal: abort.signal });
    if (abort.signal.aborted) return;
    // Fetched before the first picture, which else would turn colour before one's eyes.
    const way = await wayToScreen(photo.photoId, abort.signal);
    if (abort.signal.aborted) return;
    compositor.setWayToScreen(way);
    openingStore.set({ path: null, trouble: null });
    setOnEasel(photo);
    roomStore.set('easel');
    if (photo.stage === 'quick') await finishDecoding(photo, abort.signal);
  } catch (error) {
    if (abort.signal.aborted || isUnwanted(error)) openingStore.set({ path: null, trouble: null });
    else openingStore.set({ path: null, trouble: troubleOf(error) });
  }
}

/** Photos whose way to the screen cannot be found are shown by their numbers. */
async function wayToScreen(photoId: string, signal: AbortSignal): Promise<WayToScreen> {
  const screen = canvasSpace === 'srgb' ? 'srgb' : 'p3';
  const frame = await host.callForFrame('readScreenTable', { photoId, screen }, { signal }).catch(() => null);
  const table = frame?.planes.table;
  return {
    table: table instanceof Uint16Array ? table.slice() : null,
    space: frame?.header.space === 'p3' ? 'display-p3' : 'srgb',
  };
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
  const { memory } = photo;
  changeView({ intent: { kind: 'fit' }, split01: null, bare: false });
  endLook();
  const look = lookOf(memory);
  startLook(look);
  photoStore.set(photo);
  for (const remark of [...photo.remarks, ...memory.remarks]) addNotice(remark);
  if (Object.keys(memory.recipe.work.changes).length > 0)
    addNotice(`Your changes to ${photo.name} are as you left them.`, {
      label: 'Start afresh',
      run: () => changeLook({ parameters: look.presetParameters }, 'Start afresh'),
    });
  followMemory(memory);
  if (previous && previous.photoId !== photo.photoId) void closeQuietly(previous.photoId);
}

/** Back to the first screen; changes are kept. */
export async function closePhoto(): Promise<void> {
  const photo = photoStore.get();
  if (!photo) return;
  opening?.abort();
  await tellWork();
  followMemory(null);
  photoStore.set(null);
  endLook();
  viewStore.update((view) => ({ ...view, split01: null, bare: false }));
  if (seriesStore.get()) roomStore.set('wall');
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
