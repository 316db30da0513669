import { join, resolve } from 'node:path';
import { fullParameters } from '../../../core/presets/parametersSchema.ts';
import { lookOfFrame, partsOfFrame } from '../../../core/series/seriesDocument.ts';
import { outputDepth } from '../../files/outputFormat.ts';
import type { RunOrder } from '../../series/runSeries.ts';
import { planSeries } from '../../series/seriesPlan.ts';
import { lookNamer } from '../../store/lookNames.ts';
import type { PresetStore } from '../../store/presetStore.ts';
import { Refusal } from '../refusal.ts';
import type { WallSeries } from './wallSeries.ts';

/**
 * What a run of a series makes, by its settings as they are now: what is changed while it runs is for the next one.
 * @throws FileError where the folder of the photos cannot be read; Refusal where the paintings would lie among them
 */
export async function runOrderOf(
  { folder, settings }: Pick<WallSeries, 'folder' | 'settings'>,
  outFolder: string,
  presets: PresetStore,
): Promise<RunOrder> {
  if (resolve(outFolder) === resolve(folder))
    throw new Refusal(
      'BadRequest',
      `The photos of the series lie in ${folder}.`,
      'Choose another folder for the paintings.',
    );
  const { leftOut, match } = settings;
  const output = { ...settings.output, depth: outputDepth(settings.output.format, settings.output.depth) };
  const { frames } = await planSeries(folder, output.format);
  const out = new Set(leftOut);
  // A lead whose file is gone leads nobody, as on the Wall.
  const lead = frames.find(({ name }) => name === settings.lead)?.name ?? null;
  const nameOf = await lookNamer(presets);
  return {
    folder,
    outFolder,
    frames: frames.filter(({ name }) => !out.has(name)),
    parametersOf: (name) => fullParameters(lookOfFrame(settings, name).parameters),
    lookOf: (name) => nameOf(lookOfFrame(settings, name)),
    lead,
    leadPath: join(folder, lead ?? ''),
    amount01: match.amount01,
    partsOf: (name) => partsOfFrame(settings, name),
    output,
    shard: null,
    resumes: true,
  };
}
