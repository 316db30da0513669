import type { Recipe, Work } from './recipe.ts';

/*
 * Undo and redo, for as long as a photo is open. Only `work` moves: histories, uses and deliveries grow and are
 * never taken back, so a step may be undone after anything was kept or merged in.
 * Invariants: `past` and `future` hold the easel before and after each step; undo followed by redo is identity;
 * a new step empties `future`.
 */

/** Steps less than this apart and of one group count as one: a drag, a run of key presses. */
const groupPauseMs = 800;

/** Steps kept. Works share what they have in common, so a step costs little. */
const mostSteps = 1000;

interface Step {
  /** What was done, in words for the menu. */
  label: string;
  /** Steps of one group melt together; null for a step that stands alone. */
  group: string | null;
  atMs: number;
  before: Work;
  after: Work;
}

/** A recipe with the steps that led to its easel. */
export interface WorkSession {
  recipe: Recipe;
  past: readonly Step[];
  future: readonly Step[];
  /** Named points in the past: number of steps that had been made. */
  marks: Readonly<Record<string, number>>;
}

/** Begins with an opened recipe. */
export function beginSession(recipe: Recipe): WorkSession {
  return { recipe, past: [], future: [], marks: {} };
}

/**
 * Does something to the recipe.
 * @param what label for the menu; group that melts quick repeats together; the clock in milliseconds
 * @param change from recipe to recipe, as in `recipeHistory.ts`
 * @returns the session itself where the easel stayed the same and nothing was kept
 */
export function step(
  session: WorkSession,
  what: { label: string; group?: string; nowMs: number },
  change: (recipe: Recipe) => Recipe,
): WorkSession {
  const recipe = change(session.recipe);
  if (recipe === session.recipe) return session;
  if (recipe.work === session.recipe.work) return { ...session, recipe };
  const { label, nowMs: atMs } = what;
  const group = what.group ?? null;
  const made: Step = { label, group, atMs, before: session.recipe.work, after: recipe.work };
  const last = session.past.at(-1);
  const isSealed = Object.values(session.marks).includes(session.past.length);
  const melts =
    last !== undefined &&
    group !== null &&
    last.group === group &&
    atMs - last.atMs < groupPauseMs &&
    session.future.length === 0 &&
    !isSealed;
  const past = melts
    ? [...session.past.slice(0, -1), { ...made, before: last.before }]
    : [...session.past, made];
  return trim({ recipe, past, future: [], marks: marksUpTo(session.marks, session.past.length) });
}

/** Takes in a recipe that changed elsewhere, such as after a merge; steps stay. */
export function adoptRecipe(session: WorkSession, recipe: Recipe): WorkSession {
  return { ...session, recipe };
}

/** Takes the last step back, or returns the session itself where there is none. */
export function undo(session: WorkSession): WorkSession {
  const last = session.past.at(-1);
  if (!last) return session;
  return {
    ...session,
    recipe: { ...session.recipe, work: last.before },
    past: session.past.slice(0, -1),
    future: [last, ...session.future],
  };
}

/** Does the step that was taken back last again, or returns the session itself. */
export function redo(session: WorkSession): WorkSession {
  const [next, ...future] = session.future;
  if (!next) return session;
  const recipe = { ...session.recipe, work: next.after };
  return { ...session, recipe, past: [...session.past, next], future };
}

/** Names the present point. Steps before and after it never melt together. */
export function placeMark(session: WorkSession, name: string): WorkSession {
  return { ...session, marks: { ...session.marks, [name]: session.past.length } };
}

/**
 * Takes back everything since a mark, so that a dialogue can be called off.
 * @throws RangeError where there is no such mark, or its point was undone and left
 */
export function undoToMark(session: WorkSession, name: string): WorkSession {
  if (!Object.hasOwn(session.marks, name))
    throw new RangeError(`Expected a mark of this session, received ${name}`);
  let back = session;
  while (back.past.length > session.marks[name]) back = undo(back);
  return back;
}

function marksUpTo(marks: WorkSession['marks'], steps: number): WorkSession['marks'] {
  return Object.fromEntries(Object.entries(marks).filter(([, at]) => at <= steps));
}

function trim(session: WorkSession): WorkSession {
  const surplus = session.past.length - mostSteps;
  if (surplus <= 0) return session;
  const marks = Object.entries(session.marks)
    .filter(([, at]) => at >= surplus)
    .map(([name, at]) => [name, at - surplus]);
  return { ...session, past: session.past.slice(surplus), marks: Object.fromEntries(marks) };
}
