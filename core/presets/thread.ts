import { toRoman } from './roman.ts';
import { makeState, type State, type StateContent, stateIdOf } from './state.ts';

/*
 * A thread is the list of states of one preset, in the order they were kept. Invariants: it only grows;
 * ids are unique; numbers run 1, 2, 3 …; a parent stands before its followers.
 */

/**
 * Appends a state.
 * @param states the thread; not modified
 * @param content of the new state
 * @returns the longer thread and its new last state. Where that very state is there already (kept twice within a
 *   millisecond) the new one is dated a millisecond later, so that nothing asked to be kept is swallowed.
 */
export function appendState(
  states: readonly State[],
  content: StateContent,
): { states: State[]; state: State } {
  const taken = new Set(states.map((state) => state.id));
  const number = nextNumber(states);
  let state = makeState(content, number);
  while (taken.has(state.id))
    state = makeState({ ...content, time: oneMillisecondAfter(state.time) }, number);
  return { states: [...states, state], state };
}

function nextNumber(states: readonly State[]): number {
  return states.reduce((highest, state) => Math.max(highest, state.number), 0) + 1;
}

function oneMillisecondAfter(time: string): string {
  const ms = time === '' ? 0 : Date.parse(time);
  return new Date(ms + 1).toISOString();
}

/**
 * Brings the states of another thread in.
 * @param ours keeps its states and numbers; not modified
 * @param theirs states that ours lacks are appended in their order and numbered on; not modified
 */
export function mergeThreads(ours: readonly State[], theirs: readonly State[]): State[] {
  const merged = [...ours];
  const taken = new Set(ours.map((state) => state.id));
  let number = nextNumber(ours);
  for (const state of theirs) {
    if (taken.has(state.id)) continue;
    taken.add(state.id);
    merged.push({ ...state, number: number++ });
  }
  return merged;
}

/** The state of that id, or undefined. */
export function stateById(states: readonly State[], id: string): State | undefined {
  return states.find((state) => state.id === id);
}

/** The state of that number, or undefined. */
export function stateByNumber(states: readonly State[], number: number): State | undefined {
  return states.find((state) => state.number === number);
}

/** Words beside a state that may change, since they are no part of it. */
export interface Margin {
  /** Said about the state later on. */
  note?: string;
  /** Name of the branch that begins with the state. */
  branch?: string;
}

/** A parting of the ways: a state with two followers or more. */
export interface Parting {
  from: State;
  followers: { state: State; branch: string }[];
}

/**
 * Finds where a thread parts.
 * @param states the thread; not modified
 * @param margins the words beside the states, by state id
 * @returns the partings in the order of their states; a branch nobody named is called after the state it leaves
 *   and a letter, such as `II b`
 */
export function partings(
  states: readonly State[],
  margins: Readonly<Record<string, Margin>> = {},
): Parting[] {
  const followers = new Map<string, State[]>();
  for (const state of states) {
    if (state.parent === null) continue;
    const known = followers.get(state.parent);
    if (known) known.push(state);
    else followers.set(state.parent, [state]);
  }
  return states
    .filter((state) => (followers.get(state.id)?.length ?? 0) > 1)
    .map((from) => ({
      from,
      followers: followers.get(from.id)!.map((state, at) => ({
        state,
        branch: margins[state.id]?.branch ?? `${toRoman(from.number)} ${letters(at)}`,
      })),
    }));
}

/** 0 → a … 25 → z, 26 → aa … */
function letters(at: number): string {
  const last = String.fromCharCode(97 + (at % 26));
  return at < 26 ? last : letters(Math.floor(at / 26) - 1) + last;
}

/** A state that is not what its id says, or an order that no thread can have. */
export interface ThreadFault {
  state: State;
  problem: string;
}

/**
 * Checks a thread that came from a file.
 * @returns faults in plain words; an empty list for a thread as we write it
 * Cost: one hash per state, about 0.05 ms each.
 */
export function threadFaults(states: readonly State[]): ThreadFault[] {
  const faults: ThreadFault[] = [];
  const seen = new Set<string>();
  states.forEach((state, at) => {
    const name = `State ${toRoman(state.number)}`;
    const note = (problem: string) => faults.push({ state, problem: `${name} ${problem}` });
    if (stateIdOf(state) !== state.id)
      note('is not what it was when it was kept: it was changed outside Oxgall');
    if (seen.has(state.id)) note('is there twice');
    if (state.number !== at + 1) note(`stands in place ${at + 1}`);
    if (state.parent !== null && !seen.has(state.parent)) note('follows a state that is not there');
    seen.add(state.id);
  });
  return faults;
}
