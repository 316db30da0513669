import { fullParameters } from '../presets/parametersSchema.ts';
import type { Moment } from '../presets/preset.ts';
import { mergeThreads, stateById } from '../presets/thread.ts';
import { canonicalJson } from './canonicalJson.ts';
import { contentId } from './contentId.ts';
import type { PresetHistory, Recipe } from './recipe.ts';
import { byTime, currentParameters, keepState } from './recipeHistory.ts';

/** Said of the other side's unkept work when two versions of a recipe become one. */
export const otherWorkNote = 'Kept from the other version';

/**
 * Two versions of one photo's recipe as one that loses nothing of either: every state, use, delivery and map
 * of both. What lies on the easel stays ours; what lay on theirs, where it differs, is kept as a state.
 * @param ours its easel stays; not modified
 * @param theirs not modified
 */
export function mergeRecipes(ours: Recipe, theirs: Recipe, moment: Moment): Recipe {
  const kept = isWorthKeeping(ours, theirs) ? keepState(theirs, otherWorkNote, moment) : theirs;
  const names = new Set([...ours.histories, ...kept.histories].map((history) => history.preset));
  const find = (recipe: Recipe, name: string) => recipe.histories.find((history) => history.preset === name);
  return {
    ...theirs,
    ...ours,
    histories: [...names].map((name) => mergeHistories(find(ours, name), find(kept, name))),
    tightnessMaps: { ...kept.tightnessMaps, ...ours.tightnessMaps },
  };
}

/** Their easel holds something that no state of either side holds: unkept changes, or other strokes. */
function isWorthKeeping(ours: Recipe, theirs: Recipe): boolean {
  const look = ({ work }: Recipe) => canonicalJson([work.preset, work.stateId, work.changes, work.tightness]);
  if (look(ours) === look(theirs)) return false;
  const isUnkept = Object.keys(theirs.work.changes).length > 0;
  const hasOtherStrokes = canonicalJson(ours.work.tightness) !== canonicalJson(theirs.work.tightness);
  return (isUnkept || hasOtherStrokes) && !isKeptAlready(ours, theirs);
}

/** Merging the same version in twice must not keep its easel twice. */
function isKeptAlready(ours: Recipe, theirs: Recipe): boolean {
  const { preset, stateId, tightness } = theirs.work;
  const history = ours.histories.find((candidate) => candidate.preset === preset);
  if (!history) return false;
  const tightnessId = tightness.length === 0 ? null : contentId(tightness);
  const parameters = canonicalJson(currentParameters(theirs));
  return history.states.some(
    (state) =>
      state.parent === stateId &&
      canonicalJson(fullParameters(state.parameters)) === parameters &&
      history.uses.some((use) => use.stateId === state.id && use.tightnessId === tightnessId),
  );
}

function mergeHistories(ours: PresetHistory | undefined, theirs: PresetHistory | undefined): PresetHistory {
  if (!ours) return theirs!;
  if (!theirs) return ours;
  return {
    ...theirs,
    ...ours,
    states: mergeThreads(ours.states, theirs.states),
    margins: { ...theirs.margins, ...ours.margins },
    uses: union(ours.uses, theirs.uses),
    deliveries: union(ours.deliveries, theirs.deliveries),
  };
}

/** Entries of both lists, each once, in the order of their times. */
function union<Entry extends { time: string }>(ours: Entry[], theirs: Entry[]): Entry[] {
  const byContent = new Map([...ours, ...theirs].map((entry) => [canonicalJson(entry), entry]));
  return [...byContent.values()].sort(byTime);
}

/** Whether a recipe holds every state that another holds. */
export function holdsEveryState(recipe: Recipe, other: Recipe): boolean {
  return other.histories.every((history) => {
    const ours = recipe.histories.find((candidate) => candidate.preset === history.preset);
    return history.states.every((state) => ours !== undefined && stateById(ours.states, state.id));
  });
}
