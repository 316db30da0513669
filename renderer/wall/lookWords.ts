import { toRoman } from '../../core/presets/roman.ts';
import type { SeriesLook } from '../../core/series/seriesDocument.ts';
import type { PresetOffer } from '../../main/host/api/memoryCommands.ts';

/** A look by its preset's title and its state's numeral, such as “Low Water, State II”. */
export function lookWords(look: SeriesLook, presets: readonly PresetOffer[]): string {
  const preset = presets.find(({ name }) => name === look.preset);
  const state = preset?.states.find(({ id }) => id === look.stateId);
  const title = preset?.title ?? look.preset;
  return state ? `${title}, State ${toRoman(state.number)}` : `${title}, from the easel`;
}
