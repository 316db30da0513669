import { parseParameter } from '../parameters/parse.ts';
import type { Parameters } from '../parameters/table.ts';
import type { LookName } from '../presets/lookName.ts';
import { fullParameters, type StoredParameters } from '../presets/parametersSchema.ts';
import { latestState, type Moment, type Preset, writeMargin } from '../presets/preset.ts';
import type { State } from '../presets/state.ts';
import { appendState, type Margin, mergeThreads, stateById } from '../presets/thread.ts';
import { contentId } from './contentId.ts';
import {
  changedOutput,
  defaultOutputSettings,
  type OutputChange,
  type OutputSettings,
} from './outputSettings.ts';
import {
  type Delivery,
  type PhotoFingerprint,
  type PresetHistory,
  type Recipe,
  recipeSchemaVersion,
} from './recipe.ts';
import type { TightnessStroke } from './tightnessStroke.ts';

/*
 * Every function takes a recipe and returns another; none modifies what it is given. Histories, uses,
 * deliveries and tightness maps only grow; `work` alone is replaced.
 */

/**
 * A recipe for a photo that has none.
 * @param preset the look to begin with, at its newest state
 */
export function createRecipe(
  photo: PhotoFingerprint,
  preset: Preset,
  moment: Moment,
  output: OutputSettings = defaultOutputSettings(),
): Recipe {
  const state = latestState(preset);
  const bare: Recipe = {
    format: 'oxgall-recipe',
    schema: recipeSchemaVersion,
    photo,
    work: { preset: preset.name, stateId: state.id, changes: {}, tightness: [], output },
    histories: [],
    tightnessMaps: {},
  };
  return layPreset(bare, preset, state.id, moment);
}

/** The history of the preset on the easel. */
export function currentHistory(recipe: Recipe): PresetHistory {
  return historyOf(recipe, recipe.work.preset);
}

/** @throws RangeError where the preset was never used on this photo */
export function historyOf(recipe: Recipe, preset: string): PresetHistory {
  const history = recipe.histories.find((candidate) => candidate.preset === preset);
  if (!history) throw new RangeError(`Expected a preset used on this photo, received ${preset}`);
  return history;
}

/** The state on the easel, without the changes over it. */
export function currentState(recipe: Recipe): State {
  return requireState(currentHistory(recipe), recipe.work.stateId);
}

/** What to paint now: the state on the easel with the changes over it. */
export function currentParameters(recipe: Recipe): Parameters {
  return fullParameters({ ...currentState(recipe).parameters, ...recipe.work.changes });
}

/** Whether there are changes that no state holds yet. */
export function hasUnkeptChanges(recipe: Recipe): boolean {
  return Object.keys(recipe.work.changes).length > 0;
}

/**
 * Changes parameters over the state on the easel.
 * @param values by key; a value equal to the state's own is no change any more
 * @throws ParameterError for the first value that cannot be used
 */
export function changeParameters(recipe: Recipe, values: Record<string, unknown>): Recipe {
  const checked = Object.entries(values).map(([key, value]) => [key, parseParameter(key, value)]);
  const base: StoredParameters = { ...currentState(recipe).parameters };
  const full: Record<string, unknown> = { ...base, ...fullParameters(base) };
  const changes = Object.entries({ ...recipe.work.changes, ...Object.fromEntries(checked) }).filter(
    ([key, value]) => full[key] !== value,
  );
  return { ...recipe, work: { ...recipe.work, changes: Object.fromEntries(changes) } };
}

/** Drops the changes over the state on the easel. */
export function dropChanges(recipe: Recipe): Recipe {
  return { ...recipe, work: { ...recipe.work, changes: {} } };
}

/** Replaces the strokes of the tightness map. */
export function setTightness(recipe: Recipe, tightness: TightnessStroke[]): Recipe {
  return { ...recipe, work: { ...recipe.work, tightness } };
}

/** Changes some output settings. */
export function changeOutput(recipe: Recipe, change: OutputChange): Recipe {
  return { ...recipe, work: { ...recipe.work, output: changedOutput(recipe.work.output, change) } };
}

/**
 * Keeps what lies on the easel as a new state.
 * @param note why it is kept
 */
export function keepState(recipe: Recipe, note: string, moment: Moment): Recipe {
  const parent = currentState(recipe);
  const parameters = { ...parent.parameters, ...currentParameters(recipe), ...recipe.work.changes };
  return appendAndLay(recipe, { parameters, note, parent: parent.id }, moment);
}

/**
 * Goes back to a state: appends one equal to it and lays that on the easel, with the strokes it last had.
 * @param stateId a state of the preset on the easel, or of the preset named
 * @throws RangeError where there is no such state
 */
export function returnToState(
  recipe: Recipe,
  stateId: string,
  moment: Moment,
  preset: string = recipe.work.preset,
): Recipe {
  const { parameters } = requireState(historyOf(recipe, preset), stateId);
  const safe = keepUnkept(recipe, moment);
  const strokes = strokesOf(safe, lastTightnessOf(historyOf(safe, preset), stateId) ?? null);
  const onEasel: Recipe = { ...safe, work: { ...safe.work, preset, tightness: strokes, changes: {} } };
  return appendAndLay(onEasel, { parameters, note: '', parent: stateId }, moment);
}

/** Note of a state that was kept because something else was laid on the easel. */
export const setAsideNote = 'Set aside';

/**
 * Keeps what would be lost when something else is laid on the easel: changes or strokes that no state, use or
 * delivery holds. Undo would bring them back, but only for as long as the window is open.
 */
function keepUnkept(recipe: Recipe, moment: Moment): Recipe {
  const { tightness } = recipe.work;
  const hasNewStrokes = tightness.length > 0 && !Object.hasOwn(recipe.tightnessMaps, contentId(tightness));
  return hasUnkeptChanges(recipe) || hasNewStrokes ? keepState(recipe, setAsideNote, moment) : recipe;
}

/**
 * Keeps the state on the easel again under today's engine, with the same parameters.
 * @returns the recipe itself where that state was kept by today's engine
 */
export function repaintWithEngine(recipe: Recipe, moment: Moment): Recipe {
  const { id, parameters, engineVersion } = currentState(recipe);
  if (engineVersion === moment.engineVersion) return recipe;
  const { changes } = recipe.work;
  const repainted = appendAndLay(recipe, { parameters, note: '', parent: id }, moment);
  return { ...repainted, work: { ...repainted.work, changes } };
}

function appendAndLay(
  recipe: Recipe,
  content: Pick<State, 'parameters' | 'note' | 'parent'>,
  moment: Moment,
): Recipe {
  const history = currentHistory(recipe);
  const { states, state } = appendState(history.states, { ...content, ...moment });
  const longer = replaceHistory(recipe, { ...history, states });
  const work = { ...longer.work, stateId: state.id, changes: {} };
  return noteUse({ ...longer, work }, moment);
}

/**
 * Lays a preset's state on the easel; what the photo was before stays in its histories.
 * @param stateId of the preset's thread; the states up to it come along
 * @throws RangeError where the preset has no such state
 */
export function layPreset(recipe: Recipe, preset: Preset, stateId: string, moment: Moment): Recipe {
  const chosen = stateById(preset.states, stateId);
  if (!chosen) throw new RangeError(`Expected a state of ${preset.title}, received the id ${stateId}`);
  const upTo = preset.states.filter((state) => state.number <= chosen.number);
  return layThread(recipe, { preset: preset.name, title: preset.title, states: upTo }, chosen.id, moment);
}

/** Takes the look of another photo's recipe, its unkept changes included; strokes and output stay our own. */
export function takeLook(recipe: Recipe, other: Recipe, moment: Moment): Recipe {
  const { preset, title, states } = currentHistory(other);
  const laid = layThread(recipe, { preset, title, states }, other.work.stateId, moment);
  return { ...laid, work: { ...laid.work, changes: other.work.changes } };
}

function layThread(
  before: Recipe,
  thread: Pick<PresetHistory, 'preset' | 'title' | 'states'>,
  stateId: string,
  moment: Moment,
): Recipe {
  const recipe = before.histories.length > 0 ? keepUnkept(before, moment) : before;
  const known = recipe.histories.find((history) => history.preset === thread.preset);
  const fresh: PresetHistory = { ...thread, margins: {}, uses: [], deliveries: [] };
  const history = known
    ? { ...known, title: thread.title, states: mergeThreads(known.states, thread.states) }
    : fresh;
  const longer = replaceHistory(recipe, history);
  const work = { ...longer.work, preset: thread.preset, stateId, changes: {} };
  return noteUse({ ...longer, work }, moment);
}

/**
 * A delivered file; state and strokes are taken from the recipe. So are the photo and the output settings, unless they
 * are given: the file it was painted from may have other bytes by now than the recipe was begun for, and settings may
 * have been asked for this file alone.
 */
export type DeliveredFile = Pick<Delivery, 'path' | 'sha256' | 'pixelsSha256'> &
  Partial<Pick<Delivery, 'photoSha256' | 'output'>>;

/**
 * Notes a delivered file. Unkept changes are kept as a state first, so that a delivery always names one.
 * @param file as written
 */
export function noteDelivery(recipe: Recipe, file: DeliveredFile, moment: Moment): Recipe {
  const kept = hasUnkeptChanges(recipe) ? keepState(recipe, 'Delivered', moment) : recipe;
  const { maps, tightnessId } = withMap(kept);
  const delivery: Delivery = {
    photoSha256: kept.photo.sha256,
    output: kept.work.output,
    ...file,
    stateId: kept.work.stateId,
    tightnessId,
    ...moment,
  };
  const history = currentHistory(kept);
  const noted = replaceHistory(kept, { ...history, deliveries: [...history.deliveries, delivery] });
  return { ...noted, tightnessMaps: maps };
}

/** Writes beside a state of this photo; the state itself stays as it is. */
export function writeBeside(recipe: Recipe, preset: string, stateId: string, words: Margin): Recipe {
  const history = historyOf(recipe, preset);
  requireState(history, stateId);
  return replaceHistory(recipe, { ...history, margins: writeMargin(history.margins, stateId, words) });
}

function noteUse(recipe: Recipe, moment: Moment): Recipe {
  const { maps, tightnessId } = withMap(recipe);
  const history = currentHistory(recipe);
  const use = { stateId: recipe.work.stateId, tightnessId, ...moment };
  const noted = replaceHistory(recipe, { ...history, uses: [...history.uses, use] });
  return { ...noted, tightnessMaps: maps };
}

function withMap(recipe: Recipe): { maps: Recipe['tightnessMaps']; tightnessId: string | null } {
  const { tightness } = recipe.work;
  if (tightness.length === 0) return { maps: recipe.tightnessMaps, tightnessId: null };
  const tightnessId = contentId(tightness);
  if (Object.hasOwn(recipe.tightnessMaps, tightnessId)) return { maps: recipe.tightnessMaps, tightnessId };
  return { maps: { ...recipe.tightnessMaps, [tightnessId]: tightness }, tightnessId };
}

/** The strokes a state was last seen with; undefined where it was never used. */
function lastTightnessOf(history: PresetHistory, stateId: string): string | null | undefined {
  const seen = [...history.uses, ...history.deliveries].filter((entry) => entry.stateId === stateId);
  return seen.sort(byTime).at(-1)?.tightnessId;
}

/** Orders entries by their moments. UTC in one spelling sorts as text. */
export function byTime(one: { time: string }, other: { time: string }): number {
  if (one.time === other.time) return 0;
  return one.time < other.time ? -1 : 1;
}

/**
 * The strokes of a map the recipe holds.
 * @param tightnessId as a use or a delivery names it
 * @throws RangeError where the recipe holds no such map
 */
export function strokesOf(recipe: Recipe, tightnessId: string | null): TightnessStroke[] {
  if (tightnessId === null) return [];
  const strokes = Object.hasOwn(recipe.tightnessMaps, tightnessId) && recipe.tightnessMaps[tightnessId];
  if (!strokes) throw new RangeError(`Expected a tightness map of this recipe, received ${tightnessId}`);
  return strokes;
}

function replaceHistory(recipe: Recipe, history: PresetHistory): Recipe {
  const isKnown = recipe.histories.some((other) => other.preset === history.preset);
  const histories = isKnown
    ? recipe.histories.map((other) => (other.preset === history.preset ? history : other))
    : [...recipe.histories, history];
  return { ...recipe, histories };
}

function requireState(history: PresetHistory, stateId: string): State {
  const state = stateById(history.states, stateId);
  if (!state) throw new RangeError(`Expected a state of ${history.title}, received the id ${stateId}`);
  return state;
}

/** What lies on the easel, for people. */
export function lookNameOf(recipe: Recipe): LookName {
  return {
    title: currentHistory(recipe).title,
    stateNumber: currentState(recipe).number,
    isChanged: hasUnkeptChanges(recipe),
  };
}
