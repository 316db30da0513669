import { z } from 'zod';
import { storedParametersSchema } from '../presets/parametersSchema.ts';
import { presetNameSchema } from '../presets/preset.ts';
import { type State, stateIdSchema } from '../presets/state.ts';
import type { DocumentFormat } from '../recipes/openDocument.ts';
import { defaultOutputSettings, outputSettingsSchema } from '../recipes/outputSettings.ts';
import { allMatchParts, type MatchParts } from './frameMatch.ts';

/** The newest schema of series files this version writes. */
export const seriesSchemaVersion = 1;

export const matchPartsSchema = z
  .looseObject({ tone: z.boolean(), noise: z.boolean(), detail: z.boolean(), ink: z.boolean() })
  .meta({ description: 'Which parts of a frame are matched to the lead photo.' });

export const seriesLookSchema = z
  .looseObject({ preset: presetNameSchema, stateId: stateIdSchema, parameters: storedParametersSchema })
  .meta({ description: 'A preset, its state, and the parameters in full.' });

export const frameOverrideSchema = z
  .looseObject({ look: seriesLookSchema.optional(), parts: matchPartsSchema.optional() })
  .meta({ description: 'What one frame has of its own; what is missing is the series’.' });

const fileName = z.string().min(1).max(1024);

const settings = {
  lead: z.union([fileName, z.null()]).meta({ description: 'The photo that the others are matched to.' }),
  leftOut: z.array(fileName).meta({ description: 'Frames that are not painted.' }),
  look: seriesLookSchema,
  match: z.looseObject({ amount01: z.number().min(0).max(1), parts: matchPartsSchema }),
  overrides: z
    .array(z.looseObject({ frames: z.array(fileName).min(1), override: frameOverrideSchema }))
    .meta({ description: 'Each frame is named at most once.' }),
  output: outputSettingsSchema,
};

export const seriesSettingsSchema = z.looseObject(settings);

export const seriesSchema = z
  .looseObject({
    format: z.literal('oxgall-series'),
    schema: z.literal(seriesSchemaVersion),
    ...settings,
  })
  .meta({
    id: 'series',
    title: 'Oxgall series',
    description:
      'Lies beside the photos of a series. Frames are named by their file names, in natural order.',
  });

/** A series as its file holds it. */
export type SeriesDocument = z.infer<typeof seriesSchema>;

/** Everything about a series that can be changed, and undone. */
export type SeriesSettings = z.infer<typeof seriesSettingsSchema>;
export type SeriesLook = z.infer<typeof seriesLookSchema>;
export type FrameOverride = z.infer<typeof frameOverrideSchema>;

/** The file beside the photos of a series. */
export const seriesFileName = 'series.oxgall.json';

export const seriesFormat: DocumentFormat<SeriesDocument> = {
  format: 'oxgall-series',
  word: 'series',
  latest: seriesSchemaVersion,
  schema: seriesSchema,
  migrations: [],
};

/**
 * A series that nobody has worked on yet.
 * @param frames file names in natural order; the first one leads
 */
export function startSeries(
  frames: readonly string[],
  preset: { name: string; state: State },
): SeriesDocument {
  const { name, state } = preset;
  return {
    format: 'oxgall-series',
    schema: seriesSchemaVersion,
    lead: frames[0] ?? null,
    leftOut: [],
    look: { preset: name, stateId: state.id, parameters: state.parameters },
    match: { amount01: 1, parts: { ...allMatchParts } },
    overrides: [],
    output: defaultOutputSettings(),
  };
}

/** The override of a frame; null where it goes with the series. */
export function overrideOf(
  { overrides }: Pick<SeriesSettings, 'overrides'>,
  frame: string,
): FrameOverride | null {
  return overrides.find(({ frames }) => frames.includes(frame))?.override ?? null;
}

/** The same overrides with one for these frames, or without any for them; frames of equal overrides share one entry. */
export function withOverride(
  overrides: SeriesSettings['overrides'],
  frames: readonly string[],
  override: FrameOverride | null,
): SeriesSettings['overrides'] {
  const changed = new Set(frames);
  const rest = overrides
    .map((entry) => ({ ...entry, frames: entry.frames.filter((frame) => !changed.has(frame)) }))
    .filter((entry) => entry.frames.length > 0);
  const isEmpty = override === null || (!override.look && !override.parts);
  if (isEmpty || frames.length === 0) return rest;
  const text = JSON.stringify(override);
  const same = rest.find((entry) => JSON.stringify(entry.override) === text);
  if (!same) return [...rest, { frames: [...frames], override }];
  return rest.map((entry) => (entry === same ? { ...entry, frames: [...entry.frames, ...frames] } : entry));
}

/** The look a frame is painted by. */
export function lookOfFrame(settings: Pick<SeriesSettings, 'look' | 'overrides'>, frame: string): SeriesLook {
  return overrideOf(settings, frame)?.look ?? settings.look;
}

/** The parts of a frame that are matched; none for the lead, which stays as it is. */
export function partsOfFrame(
  settings: Pick<SeriesSettings, 'lead' | 'match' | 'overrides'>,
  frame: string,
): MatchParts {
  if (frame === settings.lead) return { tone: false, noise: false, detail: false, ink: false };
  return overrideOf(settings, frame)?.parts ?? settings.match.parts;
}
