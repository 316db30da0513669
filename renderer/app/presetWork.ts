/** What can be done with presets; each step answers with the whole shelf, which the window then shows. */
import type { Parameters } from '../../core/parameters/table.ts';
import type { PresetShelfView } from '../../main/host/api/memoryCommands.ts';
import { host, troubleOf } from '../host/host.ts';
import { addNotice } from '../state/noticeStore.ts';
import { sessionStore } from '../state/photoStore.ts';
import { createStore } from '../state/store.ts';

/** Presets that were deleted and can come back. */
export const presetBinStore = createStore<PresetShelfView['bin']>([]);

export async function refreshPresets(): Promise<void> {
  await run(() => host.call('listPresets', {}));
}

/** A preset of one's own from what lies on the easel. */
export async function createPreset(title: string, parameters: Parameters): Promise<void> {
  const made = await run(() => host.call('createPreset', { title, parameters, note: '' }));
  if (made) addNotice(`${title.trim()} is among your presets.`);
}

export async function addToPreset(name: string, title: string, parameters: Parameters): Promise<void> {
  const done = await run(() => host.call('addToPreset', { name, parameters, note: '' }));
  if (done) addNotice(`${title} has a new state.`);
}

export async function duplicatePreset(name: string): Promise<void> {
  await run(() => host.call('duplicatePreset', { name }));
}

export async function renamePreset(name: string, title: string): Promise<void> {
  await run(() => host.call('renamePreset', { name, title }));
}

export async function describePreset(name: string, description: string): Promise<void> {
  await run(() => host.call('describePreset', { name, description }));
}

export async function removePreset(name: string, title: string): Promise<void> {
  const gone = await run(() => host.call('removePreset', { name }));
  if (!gone) return;
  addNotice(`${title} is in the bin; photographs that use it keep it.`, {
    label: 'Take back',
    run: () => void restorePreset(gone.binId),
  });
}

export async function restorePreset(binId: string): Promise<void> {
  await run(() => host.call('restorePreset', { binId }));
}

/** Writes presets into one file to hand on, in a folder that may be written to. */
export async function handOnPresets(names: string[], title: string, folder: string): Promise<void> {
  try {
    const fileName = `${title.replaceAll(/[\\/:*?"<>|]/g, ' ')}.oxgall-presets.json`;
    const { path } = await host.call('exportPresets', { names, folder, fileName });
    addNotice(`Written to ${path}.`);
  } catch (error) {
    complain(error);
  }
}

export async function importPresets(file: File): Promise<void> {
  const text = await file.text();
  const taken = await run(() => host.call('importPresets', { text, fileName: file.name }));
  if (taken) addNotice(`Taken in from ${file.name}: ${taken.names.length}.`);
}

async function run<Shelf extends PresetShelfView>(ask: () => Promise<Shelf>): Promise<Shelf | null> {
  try {
    const shelf = await ask();
    presetBinStore.set(shelf.bin);
    sessionStore.update(
      (session) => session && { ...session, presets: shelf.presets, presetProblems: shelf.problems },
    );
    return shelf;
  } catch (error) {
    complain(error);
    return null;
  }
}

function complain(error: unknown): void {
  const { message, remedy } = troubleOf(error);
  addNotice(`${message} ${remedy}`.trim());
}
