/**
 * Undo and redo for the session. Invariants: `past` and `future` hold whole values, oldest and nearest first;
 * undo then redo gives the same value back; a new change clears `future`; changes of one group that follow
 * each other within `joinWithinMs`, or while the group is held open, become one step.
 */
export interface UndoHistory<T> {
  past: readonly Step<T>[];
  present: T;
  future: readonly Step<T>[];
  /** The group that the next change may join. */
  open: { group: string; atMs: number; held: boolean } | null;
}

export interface Step<T> {
  value: T;
  /** What the step did, in words, for the undo button's tooltip. */
  label: string;
}

const joinWithinMs = 700;
const longestPast = 500;

export function startHistory<T>(present: T): UndoHistory<T> {
  return { past: [], present, future: [], open: null };
}

/** How a change may join the one before it. */
export interface ChangeGroup {
  /** Changes of one control share a name; every drag has a name of its own. */
  name: string;
  /** A drag joins however long the hand rests. */
  held: boolean;
}

/**
 * @param group null never joins
 * @param nowMs the clock, given from outside
 */
export function recordChange<T>(
  history: UndoHistory<T>,
  next: T,
  label: string,
  group: ChangeGroup | null,
  nowMs: number,
): UndoHistory<T> {
  const { open } = history;
  const joins =
    open !== null &&
    group !== null &&
    open.group === group.name &&
    (open.held || nowMs - open.atMs <= joinWithinMs);
  const nextOpen = group && { group: group.name, atMs: nowMs, held: group.held };
  if (joins && history.past.length > 0 && history.future.length === 0)
    return { ...history, present: next, open: nextOpen };
  const past = [...history.past, { value: history.present, label }].slice(-longestPast);
  return { past, present: next, future: [], open: nextOpen };
}

/** Ends a drag: the next change is a step of its own. */
export function closeGroup<T>(history: UndoHistory<T>): UndoHistory<T> {
  return history.open ? { ...history, open: null } : history;
}

export function undo<T>(history: UndoHistory<T>): UndoHistory<T> {
  const step = history.past.at(-1);
  if (!step) return history;
  return {
    past: history.past.slice(0, -1),
    present: step.value,
    future: [{ value: history.present, label: step.label }, ...history.future],
    open: null,
  };
}

export function redo<T>(history: UndoHistory<T>): UndoHistory<T> {
  const [step, ...future] = history.future;
  if (!step) return history;
  return {
    past: [...history.past, { value: history.present, label: step.label }],
    present: step.value,
    future,
    open: null,
  };
}
