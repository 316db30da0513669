import type { Trouble } from '../host/host.ts';
import { createStore } from './store.ts';

/** What is known of the colours that a chosen print cannot show. Looking, so nothing here is undone. */
export interface GamutState {
  /** Strokes are laid over what lies outside. */
  isMarked: boolean;
  /** The compositor has what it needs to know of the print. */
  isKnown: boolean;
  /** The share of the printed picture that lies outside; null while it is being found out, or nothing is converted. */
  share01: number | null;
  /** Why it cannot be found out. */
  trouble: Trouble | null;
}

export const gamutStore = createStore<GamutState>({
  isMarked: true,
  isKnown: false,
  share01: null,
  trouble: null,
});

export function changeGamut(change: Partial<GamutState>): void {
  gamutStore.update((state) => ({ ...state, ...change }));
}

export function toggleMarks(): void {
  changeGamut({ isMarked: !gamutStore.get().isMarked });
}
