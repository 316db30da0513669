import type { PhotoMemory } from '../../main/host/api/memoryCommands.ts';
import { createStore } from './store.ts';

/** What the host remembers of the photo on the easel; null before the first photo. */
export const memoryStore = createStore<PhotoMemory | null>(null);

/** One side of a comparison: a state of the photo, or what lies on the easel now. */
export type ComparedSide = { kind: 'state'; preset: string; stateId: string } | { kind: 'easel' };

/** Two states side by side; null while none are compared. */
export interface Comparison {
  left: ComparedSide;
  right: ComparedSide;
  /** The two take turns instead of standing side by side. */
  isFlickering: boolean;
}

export const comparisonStore = createStore<Comparison | null>(null);
