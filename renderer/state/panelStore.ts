import type { Stratum } from '../../core/parameters/table.ts';
import { createStore } from './store.ts';
import { changeView } from './viewStore.ts';

/** The page open at the right: the presets, the chosen stratum's controls, or the print. */
export type PanelPage = 'presets' | 'stratum' | 'print';

export const panelStore = createStore<PanelPage>('stratum');

export function chooseStratum(stratum: Stratum): void {
  changeView({ chosen: stratum });
  panelStore.set('stratum');
}

/** Dialogs over the easel; one at a time. */
export type DialogName = 'none' | 'save' | 'keys' | 'open' | 'openFolder';

export const dialogStore = createStore<DialogName>('none');
