import type { SeriesSettings } from '../../core/series/seriesDocument.ts';
import type { SeriesView } from '../../main/host/api/seriesCommands.ts';
import { createStore } from '../state/store.ts';
import type { UndoHistory } from '../state/undoHistory.ts';
import { hangFrames } from './wallLayout.ts';

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

/** Between these a series starts: smaller prints are hard to judge, larger ones leave no wall around them. */
const startsBetween = { leastPx: 180, mostPx: 440 };

/**
 * The largest print scale at which the whole series hangs in view; a long one starts small and is scrolled through.
 * @param sizes of its photos, upright; 0 where unknown
 * @param wall in CSS pixels
 */
export function startingScalePx(
  sizes: readonly { widthPx: number; heightPx: number }[],
  wall: { widthPx: number; heightPx: number },
): number {
  const { leastPx, mostPx } = startsBetween;
  for (let longEdgePx = mostPx; longEdgePx >= leastPx; longEdgePx -= 10)
    if (hangFrames(sizes, { widthPx: wall.widthPx, longEdgePx }).heightPx <= wall.heightPx) return longEdgePx;
  return 220;
}

/** Two frames that are compared at one print scale. */
export const comparedStore = createStore<readonly [string, string] | null>(null);

/** Which sheet lies over the Wall. */
export const wallSheetStore = createStore<'none' | 'run' | 'proof'>('none');
