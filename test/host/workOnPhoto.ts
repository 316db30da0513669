import { join } from 'node:path';
import { expect } from 'vitest';
import type { PhotoMemory, WorkOnEasel } from '../../main/host/api/memoryCommands.ts';
import { openStores } from '../../main/store/openStores.ts';
import { makePhoto, makeTestHost, type TestHost } from './testHost.ts';

/** A host on a data folder that others had before it or will have after it. */
export function hostOn(dataFolder: string): Promise<TestHost> {
  const stores = openStores(dataFolder);
  return makeTestHost({ dataFolder, loadStores: async () => stores });
}

/** Opens a photo that is there, as the user would by naming it. */
export async function openAt({ host, caller }: TestHost, path: string) {
  await host.offerPath(path);
  return caller.call('openPhoto', { path });
}

/** Makes a photo and opens it. */
export async function openNew(t: TestHost, folder = t.photos, name = 'heron.png') {
  return openAt(t, await makePhoto(join(folder, name), 120, 80));
}

/** What lies on the easel, with values changed over it. */
export function workOf({ recipe }: PhotoMemory, parameters = {}): WorkOnEasel {
  const { preset, stateId } = recipe.work;
  return { preset, stateId, parameters };
}

/** The states of the preset on the easel. */
export function statesOf({ recipe }: PhotoMemory) {
  return recipe.histories.find(({ preset }) => preset === recipe.work.preset)!.states;
}

export function notesOf(memory: PhotoMemory): string[] {
  return statesOf(memory).map(({ note }) => note);
}

/** Keeps a state with that note and waits until saving has come to an end, good or bad. */
export async function keepNoted(t: TestHost, photoId: string, note: string, hold = 0.5) {
  const memory = await t.caller.call('readMemory', { photoId });
  await t.caller.call('keepState', { photoId, work: workOf(memory, { 'body.hold': hold }), note });
  return untilSaved(t, photoId);
}

export async function untilSaved({ caller }: TestHost, photoId: string): Promise<PhotoMemory> {
  const read = () => caller.call('readMemory', { photoId });
  await expect.poll(async () => (await read()).saved.kind, { timeout: 10_000 }).not.toBe('waiting');
  return read();
}
