import type { LookName } from '../../core/presets/lookName.ts';
import type { SeriesLook } from '../../core/series/seriesDocument.ts';
import type { PresetStore } from './presetStore.ts';

/** Names the looks of a series by the presets that are on the shelf now. */
export async function lookNamer(presets: PresetStore): Promise<(look: SeriesLook) => LookName> {
  const shelf = await presets.list();
  const names = new Map(
    shelf.presets.flatMap(({ preset: { title, states } }) =>
      states.map(({ id, number }) => [id, { title, stateNumber: number, isChanged: false }] as const),
    ),
  );
  return ({ stateId, preset }) =>
    names.get(stateId) ?? { title: preset, stateNumber: null, isChanged: false };
}
