import type { Stratum } from '../../core/parameters/table.ts';
import type { PlacedView, Size, ViewIntent } from '../geometry/viewTransform.ts';
import { createStore } from './store.ts';

export type Surround = 'light' | 'middle' | 'dark';

/** How the picture is looked at; nothing here is undone, and nothing here changes a file. */
export interface ViewState {
  intent: ViewIntent;
  /** Stage in device pixels. */
  stage: Size;
  devicePixelRatio: number;
  sectionHeightPx: number;
  /** 0 at the picture's top, 1 at its foot. */
  cut01: number;
  chosen: Stratum;
  surround: Surround;
  /** Where the split stands, 0…1 of the picture's width; null when not comparing. */
  split01: number | null;
  /** All paint is lifted off while a key is held. */
  bare: boolean;
}

const surroundKey = 'oxgall.surround';

function rememberedSurround(): Surround {
  const kept = localStorage.getItem(surroundKey);
  return kept === 'light' || kept === 'dark' ? kept : 'middle';
}

export const viewStore = createStore<ViewState>({
  intent: { kind: 'fit' },
  stage: { widthPx: 0, heightPx: 0 },
  devicePixelRatio: 1,
  sectionHeightPx: 0,
  cut01: 0.62,
  chosen: 'body',
  surround: typeof localStorage === 'undefined' ? 'middle' : rememberedSurround(),
  split01: null,
  bare: false,
});

export function changeView(change: Partial<ViewState>): void {
  viewStore.update((view) => ({ ...view, ...change }));
}

export function chooseSurround(surround: Surround): void {
  localStorage.setItem(surroundKey, surround);
  changeView({ surround });
}

/** The view as the stage last placed it; null before the first photo. */
export const placedViewStore = createStore<PlacedView | null>(null);
