import type { State } from '../../core/presets/state.ts';

/*
 * The thread is laid out in pixels of a window whose type is 14 px high. It is shown in rem, so that it grows with
 * the type.
 */
export const rootPx = 14;

/** Distance of two states on the thread. */
export const pitchPx = 46;
/** Room before the first and after the last. */
export const marginPx = 26;

/** A length of the thread for a style. */
export function toRem(px: number): string {
  return `${px / rootPx}rem`;
}

/** A state on the thread. */
export interface PlacedState {
  state: State;
  xPx: number;
  /** Where the state that it follows stands, where that is not its neighbour; null otherwise. */
  fromXPx: number | null;
}

/** How wide a thread of that many states is, with room for unkept work. */
export function threadWidthPx(count: number): number {
  return 2 * marginPx + Math.max(0, count - 1) * pitchPx + pitchPx;
}

export function xOf(index: number): number {
  return marginPx + index * pitchPx;
}

/**
 * The states that are in view, with a few more on either side.
 * @param states in the order they were kept
 * @param leftPx @param widthPx what is shown of the thread
 */
export function placeStates(states: readonly State[], leftPx: number, widthPx: number): PlacedState[] {
  const first = Math.max(0, Math.floor((leftPx - marginPx) / pitchPx) - 2);
  const last = Math.min(states.length - 1, Math.ceil((leftPx + widthPx - marginPx) / pitchPx) + 2);
  const placed: PlacedState[] = [];
  for (let index = first; index <= last; index++) {
    const state = states[index];
    const parent = state.parent === null ? -1 : indexOf(states, state.parent, index);
    const fromXPx = parent >= 0 && parent !== index - 1 ? xOf(parent) : null;
    placed.push({ state, xPx: xOf(index), fromXPx });
  }
  return placed;
}

/** A parent stands before its followers, mostly close by. */
function indexOf(states: readonly State[], id: string, before: number): number {
  for (let index = before - 1; index >= 0; index--) if (states[index].id === id) return index;
  return -1;
}
