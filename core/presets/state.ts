import { z } from 'zod';
import { contentId, contentIdPattern } from '../recipes/contentId.ts';
import { type StoredParameters, storedParametersSchema } from './parametersSchema.ts';

export const stateIdSchema = z
  .string()
  .regex(contentIdPattern)
  .meta({ description: "SHA-256 of the state's content as canonical JSON (RFC 8785)." });

/** A moment in UTC, such as 2031-04-05T06:07:08.000Z. */
export const timeSchema = z.iso.datetime();

export const stateSchema = z
  .looseObject({
    id: stateIdSchema,
    number: z.int().min(1).meta({ description: 'Place in its thread, from 1; shown in Roman numerals.' }),
    parameters: storedParametersSchema,
    engineVersion: z.string().meta({ description: 'Engine that painted it when it was kept.' }),
    note: z.string().meta({ description: 'Why it was kept, in the words of whoever kept it.' }),
    time: z
      .union([z.literal(''), timeSchema])
      .meta({ description: 'When it was kept; empty for the first state of a built-in preset.' }),
    parent: z.union([stateIdSchema, z.null()]).meta({ description: 'The state it follows; null for none.' }),
  })
  .meta({
    id: 'state',
    description: 'One version of a preset. The id is the hash of everything here except id and number.',
  });

/**
 * One numbered version of a preset. A state is never edited, only followed by another. Its number is its place
 * in the thread at hand and no part of its content: the same state may be III in one thread and V in another.
 */
export type State = z.infer<typeof stateSchema>;

/** What a state consists of. */
export interface StateContent {
  parameters: StoredParameters;
  engineVersion: string;
  note: string;
  /** UTC, ISO 8601; empty for the first state of a built-in preset. */
  time: string;
  parent: string | null;
}

/**
 * Makes a state and names it.
 * @param content parameters in full, checked; not modified
 * @param number place in the thread, from 1
 */
export function makeState(content: StateContent, number: number): State {
  const state = { number, ...content, parameters: { ...content.parameters } };
  return { id: stateIdOf(state), ...state };
}

/**
 * The id that a state's content gives.
 * @param state with or without an id of its own; not modified
 * @returns SHA-256 of everything but `id` and `number`. Fields of a later version count too.
 */
export function stateIdOf(state: Omit<State, 'id'> & { id?: string }): string {
  const { id: _id, number: _number, ...content } = state;
  return contentId(content);
}

/** Whether a state still is what it was when it was kept. */
export function isUntouched(state: State): boolean {
  return stateIdOf(state) === state.id;
}
