/** The print settings of the photo on the easel; the host keeps them in its recipe. Nothing here is undone. */
import { useMemo } from 'react';
import {
  changedOutput,
  defaultOutputSettings,
  type OutputChange,
  type OutputSettings,
} from '../../core/recipes/outputSettings.ts';
import { changeLook, currentLook, lookStore } from '../state/lookStore.ts';
import { outputStore } from '../state/outputStore.ts';
import { useStore } from '../state/store.ts';
import type { ChangeGroup } from '../state/undoHistory.ts';

/** The open photo's print settings; the same object for as long as none of them changes. */
export function useOutput(): OutputSettings {
  const output = useStore(outputStore);
  const printLongEdgeMm = useStore(lookStore, (history) => history?.present.printLongEdgeMm);
  return useMemo(() => withSize(output, printLongEdgeMm), [output, printLongEdgeMm]);
}

/** The same outside of components. */
export function currentOutput(): OutputSettings {
  return withSize(outputStore.get(), currentLook()?.printLongEdgeMm);
}

/**
 * Changes some print settings: they show at once and are kept shortly after.
 * @param change a crop frame of null is taken away; the print's size becomes an undoable step, for strokes follow it
 * @param group joins changes of the size that belong to one gesture
 */
export function changeOutput(change: OutputChange, group: ChangeGroup | null = null): void {
  const { printLongEdgeMm, ...others } = change;
  const look = currentLook();
  if (look && printLongEdgeMm !== undefined && printLongEdgeMm !== look.printLongEdgeMm)
    changeLook({ printLongEdgeMm }, 'Print size', group);
  outputStore.update((output) => output && changedOutput(output, others));
}

function withSize(output: OutputSettings | null, printLongEdgeMm: number | undefined): OutputSettings {
  const known = output ?? defaultOutputSettings();
  return printLongEdgeMm === undefined ? known : { ...known, printLongEdgeMm };
}
