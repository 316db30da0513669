import { createStore } from '../state/store.ts';

/** The small form that a state is kept by is open. */
export const keepingStore = createStore(false);

/** Counts the calls of the key that brings the keyboard to the present state. */
export const threadCallStore = createStore(0);
