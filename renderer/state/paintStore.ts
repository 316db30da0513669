import type { Trouble } from '../host/host.ts';
import { createStore } from './store.ts';

/** What the painting is doing. `rough` means that a coarse picture stands in for the sharp one. */
export interface PaintState {
  busy: 'no' | 'rough' | 'sharp' | 'detail';
  /** The picture shown is coarser than the view asks for. */
  isRough: boolean;
  /** The user stopped the work; it goes on at the next change. */
  stopped: boolean;
  trouble: Trouble | null;
}

export const idlePaint: PaintState = {
  busy: 'no',
  isRough: true,
  stopped: false,
  trouble: null,
};

export const paintStore = createStore<PaintState>(idlePaint);
