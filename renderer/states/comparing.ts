import { fullParameters } from '../../core/presets/parametersSchema.ts';
import { toRoman } from '../../core/presets/roman.ts';
import type { State } from '../../core/presets/state.ts';
import { currentLook, type Look } from '../state/lookStore.ts';
import { type ComparedSide, comparisonStore, memoryStore } from '../state/memoryStore.ts';
import { changeView, viewStore } from '../state/viewStore.ts';

/** What a state carries when it is dragged off the thread. */
export const stateDragType = 'application/x-oxgall-state';

/** Begins to compare two sides: the left one on the left of the split. */
export function compare(left: ComparedSide, right: ComparedSide = { kind: 'easel' }): void {
  const isFlickering = comparisonStore.get()?.isFlickering ?? false;
  comparisonStore.set({ left, right, isFlickering });
  changeView({ split01: viewStore.get().split01 ?? 0.5 });
}

export function endComparing(): void {
  comparisonStore.set(null);
  changeView({ split01: null });
}

/** The two take turns, or stand side by side again. */
export function toggleFlicker(): void {
  const comparison = comparisonStore.get();
  if (!comparison) return;
  comparisonStore.set({ ...comparison, isFlickering: !comparison.isFlickering });
  if (comparison.isFlickering) changeView({ split01: 0.5 });
}

/** Shows the other of the two, whole. */
export function turnOver(): void {
  changeView({ split01: viewStore.get().split01 === 1 ? 0 : 1 });
}

/** The state that a side stands for; null for the easel, or where the thread has it no longer. */
export function stateOfSide(side: ComparedSide): State | null {
  if (side.kind === 'easel') return null;
  const history = memoryStore.get()?.recipe.histories.find(({ preset }) => preset === side.preset);
  return history?.states.find(({ id }) => id === side.stateId) ?? null;
}

/** The look that a side is painted by. */
export function lookOfSide(side: ComparedSide): Look | null {
  const look = currentLook();
  const state = stateOfSide(side);
  if (!look || !state) return look;
  const parameters = fullParameters(state.parameters);
  return { ...look, stateId: state.id, presetParameters: parameters, parameters, lifted: {} };
}

export function nameOfSide(side: ComparedSide): string {
  const state = stateOfSide(side);
  return state ? `State ${toRoman(state.number)}` : 'The easel';
}

/** What is said of a side besides its name. */
export function wordsOfSide(side: ComparedSide): string {
  const state = stateOfSide(side);
  if (!state) return side.kind === 'easel' ? 'as it is now' : '';
  const histories = memoryStore.get()?.recipe.histories ?? [];
  const margin = histories.map(({ margins }) => margins[state.id]?.note).find((note) => note);
  return margin ?? state.note;
}
