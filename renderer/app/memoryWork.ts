/**
 * Tells the host what lies on the easel, shortly after each change, and does what the States thread asks for.
 * Steps that only the host can make (keep, return, lay a preset) come back as a new memory, whose easel becomes one
 * undoable step here.
 */
import { defaultPrintLongEdgeMm } from '../../core/parameters/lengths.ts';
import { fullParameters } from '../../core/presets/parametersSchema.ts';
import { toRoman } from '../../core/presets/roman.ts';
import type { State } from '../../core/presets/state.ts';
import type { OutputSettings } from '../../core/recipes/outputSettings.ts';
import type { PhotoMemory, WorkOnEasel } from '../../main/host/api/memoryCommands.ts';
import { host, troubleOf } from '../host/host.ts';
import { changeLook, currentLook, type Look, lookStore } from '../state/lookStore.ts';
import { comparisonStore, memoryStore } from '../state/memoryStore.ts';
import { addNotice } from '../state/noticeStore.ts';
import { outputStore } from '../state/outputStore.ts';

const tellAfterMs = 300;

let photoId: string | null = null;
let told: Look | null = null;
let toldOutput: OutputSettings | null = null;
let timer: ReturnType<typeof setTimeout> | undefined;
let hasComplained = false;

/** Follows the changes of this photo from now on; null follows none. */
export function followMemory(memory: PhotoMemory | null): void {
  clearTimeout(timer);
  timer = undefined;
  photoId = memory?.photoId ?? null;
  told = currentLook();
  toldOutput = memory?.recipe.work.output ?? null;
  outputStore.set(toldOutput);
  hasComplained = false;
  comparisonStore.set(null);
  memoryStore.set(memory);
}

/** Begins to listen; called once. */
export function startTellingWork(): void {
  const tellSoon = () => {
    if (!photoId || isTold()) return;
    clearTimeout(timer);
    timer = setTimeout(() => void tellWork(), tellAfterMs);
  };
  lookStore.subscribe(tellSoon);
  outputStore.subscribe(tellSoon);
  document.addEventListener('visibilitychange', () => void tellWork());
  window.addEventListener('pagehide', () => void tellWork());
}

/** Tells what has changed since the last time, now. */
export async function tellWork(): Promise<void> {
  clearTimeout(timer);
  timer = undefined;
  const look = currentLook();
  if (!photoId || !look || isTold()) return;
  told = look;
  toldOutput = outputStore.get();
  try {
    take(await host.call('layWork', { photoId, work: workOf(look) }));
    hasComplained = false;
  } catch {
    told = null;
    toldOutput = null;
    if (!hasComplained) addNotice('Your changes cannot be kept at the moment; save the painting to be safe.');
    hasComplained = true;
  }
}

function isTold(): boolean {
  return currentLook() === told && outputStore.get() === toldOutput;
}

/** The look that a photo's memory lays on the easel. */
export function lookOf({ recipe }: PhotoMemory): Look {
  const { preset, stateId, changes, output } = recipe.work;
  const state = stateOf(recipe, preset, stateId);
  const presetParameters = fullParameters(state.parameters);
  return {
    presetId: preset,
    stateId,
    presetParameters,
    parameters:
      Object.keys(changes).length > 0
        ? fullParameters({ ...state.parameters, ...changes })
        : presetParameters,
    printLongEdgeMm: output.printLongEdgeMm ?? defaultPrintLongEdgeMm,
    lifted: {},
  };
}

function stateOf(recipe: PhotoMemory['recipe'], preset: string, stateId: string): State {
  const history = recipe.histories.find((candidate) => candidate.preset === preset);
  const state = history?.states.find((candidate) => candidate.id === stateId);
  if (!state) throw new RangeError(`Expected a state of ${preset}, received ${stateId}`);
  return state;
}

/** Keeps what lies on the easel as a new state. */
export function keepAsState(note: string): Promise<void> {
  return hostStep('Keep as a new state', (look) =>
    host.call('keepState', { photoId: photoId!, work: workOf(look), note }),
  );
}

export async function returnTo(preset: string, state: State): Promise<void> {
  await hostStep(`Return to State ${toRoman(state.number)}`, () =>
    host.call('returnToState', { photoId: photoId!, preset, stateId: state.id }),
  );
}

export function layPreset(preset: string, title: string): Promise<void> {
  return hostStep(`Preset ${title}`, () => host.call('layPreset', { photoId: photoId!, preset }));
}

export function repaintWithEngine(): Promise<void> {
  return hostStep('Repaint with today’s engine', () => host.call('repaintWithEngine', { photoId: photoId! }));
}

/** The look of another photo's recipe, as its file holds it. */
export function takeLookOf(fileName: string, recipeText: string): Promise<void> {
  return hostStep(`The look of ${fileName}`, () => host.call('takeLook', { photoId: photoId!, recipeText }));
}

export async function writeBeside(
  preset: string,
  stateId: string,
  words: { note?: string; branch?: string },
): Promise<void> {
  if (!photoId) return;
  try {
    take(await host.call('writeBeside', { photoId, preset, stateId, ...words }));
  } catch (error) {
    complain(error);
  }
}

export async function keepBoth(): Promise<void> {
  if (!photoId) return;
  try {
    await tellWork();
    take(await host.call('keepBoth', { photoId }));
    addNotice('Both versions are kept: the states of the other one are on the thread.');
  } catch (error) {
    complain(error);
  }
}

/** The host saved something, could not, or saw a change from outside. */
export async function refreshMemory(changedId: string): Promise<void> {
  if (changedId !== photoId) return;
  const memory = await host.call('readMemory', { photoId: changedId }).catch(() => null);
  if (memory) take(memory);
}

/** A delivery was noted while the easel stayed as it was. */
export function takeDelivered(memory: PhotoMemory): void {
  if (memory.photoId !== photoId) return;
  take(memory);
  const look = currentLook();
  const laid = lookOf(memory);
  if (!look || look.stateId === laid.stateId) return;
  // What was painted became a state; the easel's changes count from it now, and nothing of them is lost.
  told = { ...look, stateId: laid.stateId, presetParameters: laid.presetParameters };
  lookStore.update((history) => history && { ...history, present: told as Look });
}

async function hostStep(label: string, ask: (look: Look) => Promise<PhotoMemory>): Promise<void> {
  const look = currentLook();
  if (!photoId || !look) return;
  const asked = photoId;
  try {
    await tellWork();
    const memory = await ask(look);
    if (asked !== photoId) return;
    const next = lookOf(memory);
    told = { ...look, ...next, printLongEdgeMm: look.printLongEdgeMm };
    changeLook(told, label);
    told = currentLook();
    take(memory);
  } catch (error) {
    complain(error);
  }
}

function take(memory: PhotoMemory): void {
  if (memory.photoId !== photoId) return;
  const before = memoryStore.get();
  memoryStore.set(memory);
  for (const remark of memory.remarks) if (!before?.remarks.includes(remark)) addNotice(remark);
}

function complain(error: unknown): void {
  const { message, remedy } = troubleOf(error);
  addNotice(`${message} ${remedy}`.trim());
}

/** All of it each time, so that a change that could not be told is told with the next one. */
function workOf(look: Look): WorkOnEasel {
  const output = outputStore.get();
  return {
    preset: look.presetId,
    stateId: look.stateId,
    parameters: look.parameters,
    output: {
      ...output,
      // Absent would mean that it stays.
      ...(output && { cropFrame: output.cropFrame ?? null }),
      printLongEdgeMm: look.printLongEdgeMm,
    },
  };
}
