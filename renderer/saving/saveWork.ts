import { newCallId } from '../../core/hostProtocol/hostCaller.ts';
import type { SavedPainting, SavePaintingInput } from '../../main/host/api/hostCommands.ts';
import type { HostEvents } from '../../main/host/api/hostEvents.ts';
import { takeDelivered, tellWork } from '../app/memoryWork.ts';
import { host, isUnwanted, type Trouble, troubleOf } from '../host/host.ts';
import { addNotice } from '../state/noticeStore.ts';
import { dialogStore } from '../state/panelStore.ts';
import { createStore } from '../state/store.ts';

export interface SaveState {
  progress: { callId: string; fraction01: number; stage: string } | null;
  saved: SavedPainting | null;
  trouble: Trouble | null;
}

export const saveStore = createStore<SaveState>({
  progress: null,
  saved: null,
  trouble: null,
});

let work: AbortController | null = null;

/** Saves; it goes on when the dialog is closed, and then says so in a notice. */
export async function startSave(input: SavePaintingInput): Promise<void> {
  const callId = newCallId();
  const abort = new AbortController();
  work = abort;
  const change = (next: Partial<SaveState>) => saveStore.update((state) => ({ ...state, ...next }));
  change({
    progress: { callId, fraction01: 0, stage: 'opening' },
    saved: null,
    trouble: null,
  });
  try {
    // What the recipe asks for is painted: the host has to know the last of it.
    await tellWork();
    const saved = await host.call('savePainting', input, { signal: abort.signal, callId });
    takeDelivered(saved.memory);
    change({ progress: null, saved: dialogStore.get() === 'save' ? saved : null });
    if (dialogStore.get() !== 'save') addNotice(`Saved as ${saved.name}.`);
  } catch (error) {
    const isCancelled = abort.signal.aborted || isUnwanted(error);
    change({ progress: null, trouble: isCancelled ? null : troubleOf(error) });
    if (!isCancelled && dialogStore.get() !== 'save') addNotice(troubleOf(error).message);
  } finally {
    if (work === abort) work = null;
  }
}

export function cancelSave(): void {
  work?.abort();
}

/** Progress as the host reports it; of other calls it knows nothing. */
export function takeProgress({ callId, fraction01, stage }: HostEvents['progress']): void {
  saveStore.update((state) =>
    state.progress?.callId === callId ? { ...state, progress: { callId, fraction01, stage } } : state,
  );
}
