import { dirname } from 'node:path';
import { engineVersion } from '../../core/engineVersion.ts';
import type { Moment } from '../../core/presets/preset.ts';
import { stateById } from '../../core/presets/thread.ts';
import type { PhotoFingerprint, Recipe } from '../../core/recipes/recipe.ts';
import {
  changeOutput,
  changeParameters,
  currentParameters,
  currentState,
} from '../../core/recipes/recipeHistory.ts';
import { DelayedSaver } from '../store/delayedSaver.ts';
import { noteWrittenFile, type WrittenFile } from '../store/notedDelivery.ts';
import type { Stores } from '../store/openStores.ts';
import { fingerprintPhoto } from '../store/photoFingerprint.ts';
import { recipeBeside } from '../store/recipePlaces.ts';
import type { SavedRecipe } from '../store/storeResults.ts';
import type { PhotoMemory, WorkOnEasel } from './api/memoryCommands.ts';
import type { EventHub } from './eventHub.ts';
import { type LoadedMemory, loadMemory, takeRecipesAlong } from './loadMemory.ts';
import { Refusal } from './refusal.ts';

export { firstPresetName } from './loadMemory.ts';

interface Entry extends LoadedMemory {
  photoId: string;
  path: string;
  /** Of the photo's bytes when it was opened. */
  fingerprint: PhotoFingerprint;
  saved: PhotoMemory['saved'];
  saver: DelayedSaver<Recipe>;
}

/**
 * The recipes of open photos. Each is loaded when its photo is opened, changed in memory, and saved shortly after
 * each change; nothing is written for a photo that was only looked at.
 */
export class PhotoMemories {
  readonly #entries = new Map<string, Promise<Entry>>();
  readonly #closing = new AbortController();
  /** Recipes being brought to photos of opened folders, one folder after the other. */
  #moving: Promise<unknown> = Promise.resolve();

  constructor(
    private readonly parts: { loadStores(): Promise<Stores>; events: EventHub; now?: () => Date },
  ) {}

  /**
   * Loads a photo's recipe; asked twice, it is loaded once.
   * @param fingerprint of the photo, which may still be under way
   * @param depth of the photo, in bits a sample
   */
  open(photoId: string, path: string, fingerprint: Promise<PhotoFingerprint>, depth: 8 | 16): Promise<void> {
    let entry = this.#entries.get(photoId);
    if (!entry) {
      entry = fingerprint.then((known) => this.#load(photoId, path, known, depth));
      this.#entries.set(photoId, entry);
      entry.catch(() => this.#entries.delete(photoId));
    }
    return entry.then(() => undefined);
  }

  async view(photoId: string): Promise<PhotoMemory> {
    return viewOf(await this.#find(photoId));
  }

  /**
   * Changes a photo's recipe and has it saved.
   * @param change from recipe to recipe, as in `core/recipes/recipeHistory.ts`
   * @throws Refusal where the recipe is only for looking
   */
  async change(photoId: string, change: (recipe: Recipe, moment: Moment) => Recipe): Promise<PhotoMemory> {
    const entry = await this.#find(photoId);
    if (entry.access === 'readOnly')
      throw new Refusal(
        'NotAllowed',
        'This recipe was written by a newer version of Oxgall and is only for looking.',
        'Update Oxgall to go on with it. The painting itself can be saved.',
      );
    this.#put(entry, change(entry.recipe, this.moment()));
    return viewOf(entry);
  }

  #put(entry: Entry, recipe: Recipe): void {
    if (recipe === entry.recipe) return;
    // Keeping or delivering means it: the recipe is this photo's from now on, though its bytes were others before.
    const isMeant = entry.photo === 'changed' && recipe.histories !== entry.recipe.histories;
    entry.recipe = isMeant ? { ...recipe, photo: { ...recipe.photo, ...entry.fingerprint } } : recipe;
    entry.saved = { kind: 'waiting', message: '' };
    entry.saver.change(entry.recipe);
  }

  /** Lays work on the easel: a state of the recipe, and the parameters over it. */
  async layWork(photoId: string, work: WorkOnEasel): Promise<PhotoMemory> {
    const entry = await this.#find(photoId);
    // Somebody looks at a newer recipe and tries other values: they are theirs, and gone with the window.
    if (entry.access === 'readOnly') return viewOf(entry);
    const next = withWork(entry.recipe, work);
    return this.change(photoId, () => (isSameWork(next, entry.recipe) ? entry.recipe : next));
  }

  /**
   * Notes a delivered file, also where its photo was closed while it was being written. What was painted is the easel
   * as it was when the painting began, whatever lies there now; where no state holds it, it is kept as one.
   */
  async noteDelivered(
    { photoId, path }: { photoId: string; path: string },
    file: Omit<WrittenFile, 'photoSha256'>,
  ): Promise<PhotoMemory> {
    const open = await this.#entries.get(photoId);
    const entry = open ?? (await this.#load(photoId, path, await fingerprintPhoto(path)));
    if (entry.access === 'readOnly') return viewOf(entry);
    const written = { ...file, photoSha256: entry.fingerprint.sha256 };
    const noted = noteWrittenFile(entry.recipe, path, written, this.moment());
    // Somebody may have gone on while the file was being painted: their work stays on the easel.
    this.#put(entry, changeParameters(noted, currentParameters(entry.recipe)));
    if (!open) await entry.saver.flush();
    return viewOf(entry);
  }

  /** Makes one recipe of ours and of what somebody else saved meanwhile. */
  async keepBoth(photoId: string): Promise<PhotoMemory> {
    const entry = await this.#find(photoId);
    const { recipes } = await this.parts.loadStores();
    const at = { path: entry.recipePath, version: entry.version };
    const { recipe, saved } = await recipes.saveKeepingBoth(entry.path, entry.recipe, at);
    entry.recipe = recipe;
    this.#take(entry, saved);
    return viewOf(entry);
  }

  moment(): Moment {
    const now = this.parts.now?.() ?? new Date();
    return { time: now.toISOString(), engineVersion };
  }

  /** Saves what waits and forgets the photo. */
  async forget(photoId: string): Promise<void> {
    const opening = this.#entries.get(photoId);
    this.#entries.delete(photoId);
    const entry = await opening?.catch(() => null);
    await entry?.saver.flush();
  }

  /** Forgets photos that were closed to make room. */
  async keepOnly(photoIds: readonly string[]): Promise<void> {
    const gone = [...this.#entries.keys()].filter((id) => !photoIds.includes(id));
    await Promise.all(gone.map((id) => this.forget(id)));
  }

  /** A folder was opened: photos that were moved there or renamed get their recipes back. */
  folderOpened(paths: readonly string[]): void {
    this.#moving = this.#moving.then(async () => {
      const { signal } = this.#closing;
      if (signal.aborted) return;
      await takeRecipesAlong(await this.parts.loadStores(), paths, signal).catch(() => undefined);
    });
  }

  /** Stops looking for recipes and waits until everything is on the disk. */
  async close(): Promise<void> {
    this.#closing.abort();
    await Promise.all([this.flush(), this.#moving]);
  }

  /** Waits until everything is on the disk. */
  async flush(): Promise<void> {
    const entries = await Promise.allSettled(this.#entries.values());
    await Promise.all(
      entries.map((entry) => (entry.status === 'fulfilled' ? entry.value.saver.flush() : null)),
    );
  }

  async #find(photoId: string): Promise<Entry> {
    const entry = await this.#entries.get(photoId);
    if (entry) return entry;
    throw new Refusal('NotFound', 'This photo is no longer open.', 'Open it again; its changes are kept.');
  }

  async #load(photoId: string, path: string, fingerprint: PhotoFingerprint, depth?: 8 | 16): Promise<Entry> {
    const loaded = await loadMemory(await this.parts.loadStores(), path, fingerprint, this.moment(), depth);
    const entry: Entry = {
      ...loaded,
      photoId,
      path,
      fingerprint,
      saved: { kind: loaded.whenSaved ? 'waiting' : 'saved', message: '' },
      saver: new DelayedSaver<Recipe>((recipe) => this.#save(entry, recipe)),
    };
    if (loaded.whenSaved) entry.saver.change(entry.recipe);
    return entry;
  }

  async #save(entry: Entry, recipe: Recipe): Promise<void> {
    const { recipes } = await this.parts.loadStores();
    const at = { path: entry.recipePath, version: entry.version };
    const saved = await recipes.save(entry.path, recipe, at);
    if (saved.kind === 'saved' && entry.whenSaved) {
      await entry.whenSaved();
      entry.whenSaved = null;
    }
    this.#take(entry, saved, recipe);
  }

  #take(entry: Entry, saved: SavedRecipe, recipe = entry.recipe): void {
    if (saved.kind === 'saved') {
      entry.version = saved.version;
      entry.recipePath = saved.path;
      entry.isKept = true;
      if (dirname(saved.path) !== dirname(recipeBeside(entry.path))) entry.access = 'mirrored';
      for (const remark of saved.remarks) if (!entry.remarks.includes(remark)) entry.remarks.push(remark);
      entry.saved = { kind: entry.recipe === recipe ? 'saved' : 'waiting', message: '' };
    } else entry.saved = { kind: saved.kind, message: saved.message };
    this.parts.events.send('memoryChanged', { photoId: entry.photoId });
  }
}

/** @throws Refusal where the recipe has no such state */
export function withWork(recipe: Recipe, work: WorkOnEasel): Recipe {
  const history = recipe.histories.find(({ preset }) => preset === work.preset);
  if (!history || !stateById(history.states, work.stateId))
    throw new Refusal('NotFound', 'This photo has no such state.', 'Choose one of its thread.');
  const laid = {
    ...recipe,
    work: { ...recipe.work, preset: work.preset, stateId: work.stateId, changes: {} },
  };
  const changed = changeParameters(laid, work.parameters);
  return work.output ? changeOutput(changed, work.output) : changed;
}

function isSameWork(one: Recipe, other: Recipe): boolean {
  return JSON.stringify(one.work) === JSON.stringify(other.work);
}

function viewOf(entry: Entry): PhotoMemory {
  const { photoId, recipe, recipePath, access, photo, isKept, remarks, saved } = entry;
  const { engineVersion: keptBy } = currentState(recipe);
  const olderEngine = keptBy === engineVersion ? null : { keptBy, today: engineVersion };
  return { photoId, recipe, recipePath, access, photo, isKept, olderEngine, remarks: [...remarks], saved };
}
