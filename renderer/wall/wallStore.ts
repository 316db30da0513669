import type { SeriesSettings } from '../../core/series/seriesDocument.ts';
import type { SeriesView } from '../../main/host/api/seriesCommands.ts';
import { createStore } from '../state/store.ts';
import type { UndoHistory } from '../state/undoHistory.ts';

/** The two rooms. */
export const roomStore = createStore<'easel' | 'wall'>('easel');

/** The series on the Wall, as the host told it last; null while none is open. */
export const seriesStore = createStore<SeriesView | null>(null);

/** Its settings as they are now: changes show at once, before the host has answered. */
export const settingsStore = createStore<UndoHistory<SeriesSettings> | null>(null);

/** Frames chosen together, and the one the keys are on. */
export interface Chosen {
  frameIds: ReadonlySet<string>;
  /** From where a stretch is chosen with Shift. */
  anchor: string | null;
  at: string | null;
}

export const nothingChosen: Chosen = { frameIds: new Set(), anchor: null, at: null };

export const chosenStore = createStore<Chosen>(nothingChosen);

/** Long edge of a print on the screen, in CSS pixels. */
export const wallScaleStore = createStore<number>(250);
export const wallScales = { leastPx: 130, mostPx: 560, stepPx: 30 };

/** A print scale at which a short series fills the wall, and a long one is still easy to look at. */
export function startingScalePx(frameCount: number, wall: { widthPx: number; heightPx: number }): number {
  const share = 0.66 * Math.sqrt((wall.widthPx * wall.heightPx) / Math.max(1, frameCount));
  return Math.round(Math.min(440, Math.max(220, share)) / 10) * 10;
}

/** Two frames that are compared at one print scale. */
export const comparedStore = createStore<readonly [string, string] | null>(null);

/** Which sheet lies over the Wall. */
export const wallSheetStore = createStore<'none' | 'run' | 'proof'>('none');
