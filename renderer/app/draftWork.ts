/** Keeps unsaved changes with the host, shortly after each, so that neither closing nor a crash loses them. */
import type { Draft, OpenedPhoto } from '../../main/host/api/hostCommands.ts';
import { host } from '../host/host.ts';
import { currentLook, type Look, lookStore } from '../state/lookStore.ts';
import { addNotice } from '../state/noticeStore.ts';
import { viewStore } from '../state/viewStore.ts';

const keepAfterMs = 500;

let photo: OpenedPhoto | null = null;
let timer: ReturnType<typeof setTimeout> | undefined;
let kept: Look | null = null;
let hasComplained = false;

/** Follows the changes of this photo from now on; null follows none. */
export function followDraft(next: OpenedPhoto | null): void {
  clearTimeout(timer);
  timer = undefined;
  photo = next;
  kept = currentLook();
  hasComplained = false;
}

export function startKeepingDrafts(): void {
  lookStore.subscribe(() => {
    if (!photo || currentLook() === kept) return;
    clearTimeout(timer);
    timer = setTimeout(() => void flushDraft(), keepAfterMs);
  });
  document.addEventListener('visibilitychange', () => void flushDraft());
  window.addEventListener('pagehide', () => void flushDraft());
}

/** Keeps what has changed since the last time, now. */
export async function flushDraft(): Promise<void> {
  clearTimeout(timer);
  timer = undefined;
  const look = currentLook();
  if (!photo || !look || look === kept) return;
  kept = look;
  try {
    await host.call('keepDraft', { photoId: photo.photoId, draft: draftOf(look) });
    hasComplained = false;
  } catch {
    kept = null;
    if (!hasComplained) addNotice('Your changes cannot be kept at the moment; save the painting to be safe.');
    hasComplained = true;
  }
}

export async function forgetDraft(): Promise<void> {
  clearTimeout(timer);
  timer = undefined;
  kept = currentLook();
  if (photo) await host.call('dropDraft', { path: photo.path }).catch(() => undefined);
}

function draftOf(look: Look): Draft {
  const { cut01, chosen } = viewStore.get();
  return {
    parameters: look.parameters,
    presetName: look.presetId,
    view: { cut01, chosen, printLongEdgeMm: look.printLongEdgeMm },
  };
}
