import type { KeyboardEvent } from 'react';
import { dialogStore } from '../state/panelStore.ts';
import { choose, chooseAll, chooseNone, compareChosen, framesAtHand } from './choosing.ts';
import { frameInNextRow, type WallLayout } from './wallLayout.ts';
import {
  chosenStore,
  comparedStore,
  seriesStore,
  wallScaleStore,
  wallScales,
  wallSheetStore,
} from './wallStore.ts';
import {
  closeSeries,
  currentSettings,
  dropOverrides,
  goTo,
  leaveOut,
  makeLead,
  openOnEasel,
  redoSeries,
  undoSeries,
} from './wallWork.ts';

/** A key of the Wall, wherever the focus is. */
export interface WallKey {
  keys: readonly string[];
  withControl?: boolean;
  withShift?: boolean;
  shown: string;
  does: string;
  run: () => void;
}

export function changeScale(step: 1 | -1): void {
  const { leastPx, mostPx, stepPx } = wallScales;
  wallScaleStore.update((px) => Math.min(mostPx, Math.max(leastPx, px + step * stepPx)));
}

/** Leaves the frames at hand out; takes them back where all of them are out. */
export function toggleLeftOut(): void {
  const hand = framesAtHand();
  const out = new Set(currentSettings()?.leftOut);
  leaveOut(hand, !hand.every((frameId) => out.has(frameId)));
}

export const wallKeys: readonly WallKey[] = [
  { keys: ['z'], withControl: true, shown: 'Ctrl Z', does: 'Undo a change of the series', run: undoSeries },
  {
    keys: ['z'],
    withControl: true,
    withShift: true,
    shown: 'Ctrl Shift Z, Ctrl Y',
    does: 'Redo a change of the series',
    run: redoSeries,
  },
  { keys: ['a'], withControl: true, shown: 'Ctrl A', does: 'Choose all frames', run: chooseAll },
  {
    keys: ['l'],
    shown: 'L',
    does: 'Make the frame the lead',
    run: () => {
      const [first] = framesAtHand();
      if (first) makeLead(first);
    },
  },
  {
    keys: ['x', 'delete'],
    shown: 'X, Delete',
    does: 'Leave the chosen frames out, or take them back',
    run: toggleLeftOut,
  },
  {
    keys: ['d'],
    shown: 'D',
    does: 'Drop what the chosen frames have of their own',
    run: () => dropOverrides(framesAtHand()),
  },
  {
    keys: ['c'],
    shown: 'C',
    does: 'Compare two chosen frames, or one with the lead',
    run: () => {
      if (comparedStore.get()) comparedStore.set(null);
      else compareChosen(currentSettings()?.lead ?? null);
    },
  },
  { keys: ['r'], shown: 'R', does: 'Paint the series to files', run: () => wallSheetStore.set('run') },
  { keys: ['s'], shown: 'S', does: 'Make a proof sheet', run: () => wallSheetStore.set('proof') },
  { keys: ['+', '='], shown: '+', does: 'Larger prints', run: () => changeScale(1) },
  { keys: ['-', '−', '_'], shown: '−', does: 'Smaller prints', run: () => changeScale(-1) },
  { keys: ['e'], shown: 'E', does: 'To the easel', run: () => goTo('easel') },
  {
    keys: ['o'],
    withControl: true,
    shown: 'Ctrl O',
    does: 'Open a photograph or a folder',
    run: () => dialogStore.set('open'),
  },
  {
    keys: ['escape'],
    shown: 'Escape',
    does: 'End comparing; choose nothing',
    run: () => {
      if (comparedStore.get()) comparedStore.set(null);
      else chooseNone();
    },
  },
  {
    keys: ['w'],
    withControl: true,
    withShift: true,
    shown: 'Ctrl Shift W',
    does: 'Take the series down',
    run: () => void closeSeries(),
  },
  { keys: ['?'], shown: '?', does: 'This list', run: () => dialogStore.set('keys') },
];

/** The keys that walk among the frames: arrows, with Shift to choose on the way; Space chooses, Enter opens. */
export function takeWallKey(event: KeyboardEvent, layout: WallLayout): void {
  const frames = seriesStore.get()?.frames ?? [];
  const at = chosenStore.get().at ?? frames[0]?.frameId;
  const index = frames.findIndex(({ frameId }) => frameId === at);
  const isOnFrame = (event.target as HTMLElement).dataset.frame !== undefined;
  const isOnGround = event.target === event.currentTarget;
  if (index < 0 || (!isOnFrame && !isOnGround) || event.altKey) return;
  const to = targetOf(event.key, index, layout, frames.length);
  if (to !== null) {
    if (event.ctrlKey || event.metaKey) return;
    choose(frames[to].frameId, event.shiftKey ? 'stretch' : 'walk');
  } else if (event.key === ' ') choose(at, event.shiftKey ? 'stretch' : 'toggle');
  else if (event.key === 'Enter') void openOnEasel(at);
  else return;
  event.preventDefault();
}

function targetOf(key: string, index: number, layout: WallLayout, count: number): number | null {
  switch (key) {
    case 'ArrowRight':
      return Math.min(count - 1, index + 1);
    case 'ArrowLeft':
      return Math.max(0, index - 1);
    case 'ArrowDown':
      return frameInNextRow(layout, index, 1);
    case 'ArrowUp':
      return frameInNextRow(layout, index, -1);
    case 'Home':
      return 0;
    case 'End':
      return count - 1;
    default:
      return null;
  }
}
