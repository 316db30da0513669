import { toRoman } from '../../core/presets/roman.ts';
import type { State } from '../../core/presets/state.ts';

/*
 * The thread is laid out in pixels of a window whose type is 14 px high. It is shown in rem, so that it grows with
 * the type.
 */
export const rootPx = 14;

/** Room before the first and after the last. */
export const marginPx = 26;
/** How high a numeral's ring is, and how wide where the numeral is short. */
export const ringPx = 28;
const gapPx = 18;
const paddingPx = 7;

/** How wide the serif's capitals are, in its own height. */
const letterEm: Readonly<Record<string, number>> = {
  I: 0.34,
  V: 0.66,
  X: 0.66,
  L: 0.57,
  C: 0.66,
  D: 0.74,
  M: 0.9,
};

/** How wide the ring round a numeral is: a ring, or a longer band for a longer numeral. */
export function ringWidthPx(number: number): number {
  let em = 0;
  for (const letter of toRoman(number)) em += letterEm[letter] ?? 0.7;
  return Math.max(ringPx, Math.ceil(em * rootPx) + 2 * paddingPx);
}

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

/** Where the numerals I, II, III … stand; a thread's numbers run without a gap, so that one row serves all threads. */
const centresPx: number[] = [marginPx];

/** Where the state of that index stands. */
export function xOf(index: number): number {
  while (centresPx.length <= index) {
    const number = centresPx.length;
    const stepPx = (ringWidthPx(number) + ringWidthPx(number + 1)) / 2 + gapPx;
    centresPx.push(centresPx[number - 1] + stepPx);
  }
  return centresPx[index];
}

/** How wide a thread of that many states is, with room for unkept work. */
export function threadWidthPx(count: number): number {
  return xOf(count) + marginPx;
}

/** The first state that does not stand left of `xPx`. */
function indexAt(xPx: number, count: number): number {
  let from = 0;
  let to = count;
  while (from < to) {
    const middle = (from + to) >> 1;
    if (xOf(middle) < xPx) from = middle + 1;
    else to = middle;
  }
  return from;
}

/**
 * The states that are in view, with a few more on either side.
 * @param states in the order they were kept
 * @param leftPx @param widthPx what is shown of the thread
 */
export function placeStates(states: readonly State[], leftPx: number, widthPx: number): PlacedState[] {
  const first = Math.max(0, indexAt(leftPx, states.length) - 3);
  const last = Math.min(states.length - 1, indexAt(leftPx + widthPx, states.length) + 2);
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
