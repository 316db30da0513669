import { join } from 'node:path';
import { expect } from 'vitest';
import {
  keepInPreset,
  type Moment,
  type Preset,
  renamePreset,
  returnInPreset,
} from '../../core/presets/preset.ts';
import { isUntouched, type State } from '../../core/presets/state.ts';
import { threadFaults } from '../../core/presets/thread.ts';
import { canonicalJson } from '../../core/recipes/canonicalJson.ts';
import type { PhotoFingerprint, Recipe, Work } from '../../core/recipes/recipe.ts';
import {
  changeOutput,
  changeParameters,
  createRecipe,
  currentHistory,
  currentParameters,
  keepState,
  layPreset,
  noteDelivery,
  repaintWithEngine,
  returnToState,
  setTightness,
  takeLook,
} from '../../core/recipes/recipeHistory.ts';
import {
  adoptRecipe,
  beginSession,
  redo,
  step,
  undo,
  type WorkSession,
} from '../../core/recipes/workSession.ts';
import { fingerprintPhoto } from '../../main/store/photoFingerprint.ts';
import { PresetStore } from '../../main/store/presetStore.ts';
import { RecipeStore } from '../../main/store/recipeStore.ts';
import type { FileVersion } from '../../main/store/versionedFile.ts';
import { samplePreset } from '../recipes/sampleRecipes.ts';

/** The moves a random history is made of. */
export const moves = {
  inMemory: [
    'change',
    'stroke',
    'output',
    'keep',
    'return',
    'undo',
    'redo',
    'lay',
    'look',
    'deliver',
    'repaint',
  ],
  onDisk: [
    'save',
    'reload',
    'otherWindow',
    'keepInPreset',
    'renamePreset',
    'deletePreset',
    'restorePreset',
    'importPreset',
  ],
} as const;

export interface Move {
  name: (typeof moves)['inMemory' | 'onDisk'][number];
  /** Which state, value or preset; taken modulo what there is. */
  pick: number;
  other: number;
}

/**
 * A history under test beside a plain model of it: every state ever kept as text, and the easels that undo must
 * bring back, as whole texts and not as steps.
 */
export class FuzzedHistory {
  readonly #photoPath: string;
  readonly #recipes: RecipeStore;
  readonly #presets: PresetStore;
  readonly #photo: PhotoFingerprint;
  #session: WorkSession;
  #version: FileVersion = null;
  #clock = 0;
  readonly #kept = new Map<string, string>();
  readonly #keptInPresets = new Map<string, string>();
  #past: string[] = [];
  #future: string[] = [];

  private constructor(folder: string, photo: PhotoFingerprint) {
    this.#photoPath = join(folder, 'heron.jpg');
    this.#photo = photo;
    const dataFolder = join(folder, 'data');
    this.#recipes = new RecipeStore({ dataFolder, engineVersion: '1', now: () => new Date(this.#nextMs()) });
    this.#presets = new PresetStore({ dataFolder, engineVersion: '1' });
    this.#session = beginSession(createRecipe(photo, samplePreset(), this.#moment()));
  }

  static async begin(folder: string): Promise<FuzzedHistory> {
    return new FuzzedHistory(folder, await fingerprintPhoto(join(folder, 'heron.jpg')));
  }

  #nextMs(): number {
    // Now and then the clock stands still, or a whole history falls into one millisecond.
    this.#clock += this.#clock % 3;
    return Date.UTC(2031, 3, 5) + ++this.#clock;
  }

  #moment(engineVersion = '1'): Moment {
    return { time: new Date(this.#nextMs()).toISOString(), engineVersion };
  }

  async make(move: Move): Promise<void> {
    const { name, pick, other } = move;
    switch (name) {
      case 'undo':
        return this.#undo();
      case 'redo':
        return this.#redo();
      case 'save':
        return this.#save();
      case 'reload':
        return this.#reload();
      case 'otherWindow':
        return this.#otherWindow(pick);
      case 'keepInPreset':
      case 'renamePreset':
      case 'deletePreset':
      case 'restorePreset':
      case 'importPreset':
        return this.#workOnPresets(name, pick, other);
      default:
        return this.#step((recipe) => this.#changed(name, recipe, pick, other));
    }
  }

  #changed(name: Move['name'], recipe: Recipe, pick: number, other: number): Recipe {
    switch (name) {
      case 'change':
        return changeParameters(
          recipe,
          pick % 2 ? { 'body.brush': `${1 + (other % 9)}mm` } : { 'body.coats': other % 7 },
        );
      case 'stroke':
        return setTightness(recipe, strokes(pick));
      case 'output':
        return changeOutput(recipe, { printLongEdgeMm: 200 + (pick % 5) });
      case 'keep':
        return keepState(recipe, `note ${pick % 3}`, this.#moment());
      case 'return': {
        const history = recipe.histories[other % recipe.histories.length];
        const state = history.states[pick % history.states.length];
        return returnToState(recipe, state.id, this.#moment(), history.preset);
      }
      case 'lay': {
        const preset = somePreset(pick);
        return layPreset(recipe, preset, preset.states[other % preset.states.length].id, this.#moment());
      }
      case 'look': {
        const donor = changeParameters(createRecipe(this.#photo, somePreset(pick), this.#moment()), {
          'body.hold': 0.4,
        });
        return takeLook(recipe, keepState(donor, 'donor', this.#moment()), this.#moment());
      }
      case 'deliver':
        return noteDelivery(recipe, { path: `painted/${pick}.tif`, sha256: 'cd'.repeat(32) }, this.#moment());
      default:
        return repaintWithEngine(recipe, this.#moment(String(1 + (pick % 3))));
    }
  }

  #step(change: (recipe: Recipe) => Recipe): void {
    const before = this.#session.recipe.work;
    this.#session = step(this.#session, { label: 'step', nowMs: this.#nextMs() }, change);
    if (this.#session.recipe.work === before) return;
    this.#past.push(textOf(before));
    this.#future = [];
  }

  #undo(): void {
    const now = textOf(this.#session.recipe.work);
    this.#session = undo(this.#session);
    const expected = this.#past.pop();
    if (expected !== undefined) this.#future.push(now);
    expect(textOf(this.#session.recipe.work)).toBe(expected ?? now);
  }

  #redo(): void {
    const now = textOf(this.#session.recipe.work);
    this.#session = redo(this.#session);
    const expected = this.#future.pop();
    if (expected !== undefined) this.#past.push(now);
    expect(textOf(this.#session.recipe.work)).toBe(expected ?? now);
  }

  async #save(): Promise<void> {
    const { recipe, saved } = await this.#recipes.saveKeepingBoth(this.#photoPath, this.#session.recipe, {
      version: this.#version,
    });
    if (saved.kind !== 'saved') throw new Error(JSON.stringify(saved));
    this.#version = saved.version;
    this.#session = adoptRecipe(this.#session, recipe);
  }

  async #reload(): Promise<void> {
    await this.#save();
    const work = textOf(this.#session.recipe.work);
    const loaded = await this.#recipes.load(this.#photoPath, this.#photo);
    if (loaded.kind !== 'open') throw new Error(JSON.stringify(loaded));
    expect(loaded.remarks).toEqual([]);
    expect(canonicalJson(loaded.recipe)).toBe(canonicalJson(this.#session.recipe));
    expect(textOf(loaded.recipe.work)).toBe(work);
    this.#session = beginSession(loaded.recipe);
    this.#version = loaded.version;
    this.#past = [];
    this.#future = [];
  }

  /** Another window changes the file; the next save meets its changes. */
  async #otherWindow(pick: number): Promise<void> {
    await this.#save();
    const kept = keepState(this.#session.recipe, `other window ${pick}`, this.#moment());
    const theirs = pick % 2 ? changeParameters(kept, { 'body.brush': '11mm' }) : kept;
    const saved = await this.#recipes.save(this.#photoPath, theirs, { version: this.#version });
    expect(saved.kind).toBe('saved');
    this.#remember(
      theirs.histories.flatMap((history) => history.states),
      this.#kept,
    );
    // What the model now knows must be in the recipe from the next check on.
    await this.#save();
    if (pick % 2) expect(this.#brushes()).toContain('11mm');
  }

  #brushes(): unknown[] {
    return currentHistory(this.#session.recipe).states.map((state) => state.parameters['body.brush']);
  }

  async #workOnPresets(name: Move['name'], pick: number, other: number): Promise<void> {
    const own = (await this.#presets.list()).presets.filter(({ isBuiltIn }) => !isBuiltIn);
    if (own.length === 0) {
      const made = await this.#presets.create(
        'Dusk',
        currentParameters(this.#session.recipe),
        this.#moment(),
      );
      return this.#remember(made.states, this.#keptInPresets);
    }
    const { preset } = own[pick % own.length];
    if (name === 'deletePreset') await this.#presets.remove(preset.name);
    else if (name === 'renamePreset') await this.#presets.save(renamePreset(preset, `Dusk ${other % 4}`));
    else if (name === 'restorePreset') await this.#restore(pick);
    else if (name === 'keepInPreset') await this.#keepIn(preset, other);
    else await this.#presets.importText(await this.#exportGrown(preset), 'presets.json');
  }

  async #keepIn(preset: Preset, other: number): Promise<void> {
    const state = preset.states[other % preset.states.length];
    const grown =
      other % 2
        ? returnInPreset(preset, state.id, this.#moment())
        : keepInPreset(
            preset,
            { parameters: currentParameters(this.#session.recipe), parent: state.id },
            this.#moment(),
          );
    this.#remember((await this.#presets.save(grown)).states, this.#keptInPresets);
  }

  async #restore(pick: number): Promise<void> {
    const binned = await this.#presets.listBin();
    if (binned.length > 0) await this.#presets.restore(binned[pick % binned.length].binId);
  }

  /** As a friend would send it back: with a state more. */
  async #exportGrown(preset: Preset): Promise<string> {
    const bundle = JSON.parse(await this.#presets.exportText([preset.name]));
    const grown = keepInPreset(
      bundle.presets[0],
      { parameters: preset.states[0].parameters, note: 'sent back' },
      this.#moment(),
    );
    this.#remember(grown.states, this.#keptInPresets);
    return JSON.stringify({ ...bundle, presets: [grown] });
  }

  #remember(states: readonly State[], model: Map<string, string>): void {
    for (const state of states) if (!model.has(state.id)) model.set(state.id, contentText(state));
  }

  /** Every state ever kept on the photo is there, and is what it was. */
  check(): void {
    const { recipe } = this.#session;
    const states = recipe.histories.flatMap((history) => history.states);
    const byId = new Map(states.map((state) => [state.id, state]));
    for (const [id, text] of this.#kept) expect(contentText(byId.get(id)!)).toBe(text);
    this.#remember(states, this.#kept);
    if (this.#session.past.length > 0)
      expect(redo(undo(this.#session)).recipe.work).toBe(this.#session.recipe.work);
    expect(this.#session.past.length).toBe(this.#past.length);
  }

  /** At the end: threads are whole, and every state ever kept in a preset is on the shelf or in the bin. */
  async checkDisk(): Promise<void> {
    for (const history of this.#session.recipe.histories) {
      expect(threadFaults(history.states)).toEqual([]);
      expect(history.states.every(isUntouched)).toBe(true);
    }
    await this.#reload();
    this.check();
    if (this.#keptInPresets.size === 0) return;
    const { presets, problems } = await this.#presets.list();
    expect(problems).toEqual([]);
    for (const { remarks } of presets) expect(remarks).toEqual([]);
    const all = [...presets, ...(await this.#presets.listBin())].flatMap(({ preset }) => preset.states);
    const byId = new Map(all.map((state) => [state.id, state]));
    for (const [id, text] of this.#keptInPresets) expect(contentText(byId.get(id)!)).toBe(text);
  }
}

function strokes(pick: number): Work['tightness'] {
  return Array.from({ length: pick % 3 }, (_, at) => ({
    points: [[at / 4, (pick % 5) / 5] as [number, number]],
    radiusPermille: 10,
    value: 1,
    hardness: 0.5,
  }));
}

function somePreset(pick: number): Preset {
  const preset = samplePreset(['Low Water', 'Dusk', 'Far Bank'][pick % 3], `${2 + (pick % 4)}mm`);
  return keepInPreset(
    preset,
    { parameters: preset.states[0].parameters, note: 'second' },
    { time: '2031-01-01T00:00:00.000Z', engineVersion: '1' },
  );
}

const textOf = (work: Work): string => canonicalJson(work);

/** All of a state but its number, which is its place in the thread. */
function contentText(state: State): string {
  return canonicalJson({ ...state, number: 0 });
}
