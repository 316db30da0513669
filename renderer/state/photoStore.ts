import type { OpenedPhoto, Session } from '../../main/host/api/hostCommands.ts';
import type { Trouble } from '../host/host.ts';
import { createStore } from './store.ts';

export const sessionStore = createStore<Session | null>(null);

/** The photo on the easel. */
export const photoStore = createStore<OpenedPhoto | null>(null);

/** A photo on its way to the easel, or why it did not get there. */
export interface OpeningState {
  path: string | null;
  trouble: Trouble | null;
}

export const openingStore = createStore<OpeningState>({ path: null, trouble: null });
