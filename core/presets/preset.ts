import { z } from 'zod';
import type { BuiltInPreset } from './builtInPreset.ts';
import { nameFromTitle, presetNamePattern } from './presetName.ts';
import { makeState, type State, stateSchema } from './state.ts';
import { appendState, type Margin, mergeThreads, stateById } from './thread.ts';

export const presetNameSchema = z
  .string()
  .regex(presetNamePattern)
  .meta({ description: 'Kebab case; stays the same for ever, whatever the title becomes.' });

export const marginsSchema = z
  .record(z.string(), z.looseObject({ note: z.string().optional(), branch: z.string().optional() }))
  .meta({ description: 'Words beside states, by state id. They may change; states may not.' });

/** The newest schema of preset files this version writes. */
export const presetSchemaVersion = 1;

export const presetSchema = z
  .looseObject({
    format: z.literal('oxgall-preset'),
    schema: z.literal(presetSchemaVersion),
    name: presetNameSchema,
    title: z.string().min(1).meta({ description: 'The name as people read it.' }),
    summary: z.string().meta({ description: 'What it is good for.' }),
    states: z.array(stateSchema).min(1).meta({ description: 'Every state ever kept, oldest first.' }),
    margins: marginsSchema,
  })
  .meta({ id: 'preset', title: 'Oxgall preset', description: 'A named look with every state it ever had.' });

/** A name and a thread of states. */
export type Preset = z.infer<typeof presetSchema>;

/** When something is kept, and what would paint it. Clocks are handed in, so that histories can be replayed. */
export interface Moment {
  /** UTC, ISO 8601 with milliseconds. */
  time: string;
  engineVersion: string;
}

/**
 * A built-in preset as a preset like any other, with its one state.
 * @param engineVersion of this version of the app. The state bears no time, so its id is the same wherever
 *   this version runs.
 */
export function presetFromBuiltIn(builtIn: BuiltInPreset, engineVersion: string): Preset {
  const { name, title, summary, parameters } = builtIn;
  const first = makeState({ parameters, engineVersion, note: '', time: '', parent: null }, 1);
  return makePreset({ name, title, summary, states: [first] });
}

/**
 * A new preset.
 * @param start its title and thread; the name is made from the title unless given
 */
export function makePreset(start: {
  name?: string;
  title: string;
  summary?: string;
  states: State[];
}): Preset {
  return {
    format: 'oxgall-preset',
    schema: presetSchemaVersion,
    name: start.name ?? nameFromTitle(start.title),
    title: start.title,
    summary: start.summary ?? '',
    states: start.states,
    margins: {},
  };
}

/** The newest state of a preset: what choosing the preset means. */
export function latestState(preset: Preset): State {
  return preset.states[preset.states.length - 1];
}

/**
 * Appends a state with these parameters.
 * @param preset not modified
 * @param keep parameters in full; the state it follows, the newest unless given
 * @throws RangeError where the preset has no state of that parent id
 */
export function keepInPreset(
  preset: Preset,
  keep: { parameters: State['parameters']; note?: string; parent?: string },
  moment: Moment,
): Preset {
  const parent = requireState(preset, keep.parent ?? latestState(preset).id);
  const content = { parameters: keep.parameters, note: keep.note ?? '', parent: parent.id, ...moment };
  return { ...preset, states: appendState(preset.states, content).states };
}

/**
 * Goes back to a state by appending one equal to it; nothing is taken away.
 * @throws RangeError where the preset has no state of that id
 */
export function returnInPreset(preset: Preset, id: string, moment: Moment): Preset {
  const { parameters } = requireState(preset, id);
  return keepInPreset(preset, { parameters, parent: id }, moment);
}

function requireState(preset: Preset, id: string): State {
  const state = stateById(preset.states, id);
  if (!state) throw new RangeError(`Expected a state of ${preset.title}, received the id ${id}`);
  return state;
}

/** The preset under another title; its name stays, since recipes know it by that. */
export function renamePreset(preset: Preset, title: string): Preset {
  const trimmed = title.trim();
  if (trimmed === '') throw new RangeError('Expected a title of at least one letter, received none');
  return { ...preset, title: trimmed };
}

/** The preset with another summary. */
export function describePreset(preset: Preset, summary: string): Preset {
  return { ...preset, summary };
}

/** A preset of its own with the same thread. */
export function duplicatePreset(preset: Preset, name: string, title: string): Preset {
  return renamePreset({ ...preset, name }, title);
}

/**
 * Writes beside a state.
 * @param margins by state id; not modified
 * @param words fields given as an empty text are wiped
 */
export function writeMargin(margins: Preset['margins'], id: string, words: Margin): Preset['margins'] {
  const margin = Object.entries({ ...margins[id], ...words }).filter(([, text]) => text !== '');
  const { [id]: _old, ...others } = margins;
  return margin.length === 0 ? others : { ...others, [id]: Object.fromEntries(margin) };
}

/**
 * Two versions of one preset as one: every state of both, our words where both have some.
 * @param ours not modified
 * @param theirs not modified
 */
export function mergePresets(ours: Preset, theirs: Preset): Preset {
  return {
    ...theirs,
    ...ours,
    states: mergeThreads(ours.states, theirs.states),
    margins: { ...theirs.margins, ...ours.margins },
  };
}

/** Whether two presets grew from the same first state. */
export function haveOneOrigin(one: Preset, other: Preset): boolean {
  return one.states[0].id === other.states[0].id;
}
