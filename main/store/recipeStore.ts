import { constants, copyFile, mkdir } from 'node:fs/promises';
import { basename, dirname, join, resolve } from 'node:path';
import type { Moment } from '../../core/presets/preset.ts';
import { threadFaults } from '../../core/presets/thread.ts';
import { recipeFormat } from '../../core/recipes/documentFormats.ts';
import { mergeRecipes } from '../../core/recipes/mergeRecipes.ts';
import { documentText, type Opened, openDocument } from '../../core/recipes/openDocument.ts';
import type { PhotoFingerprint, Recipe } from '../../core/recipes/recipe.ts';
import { FileError } from '../files/fileError.ts';
import { fileErrorFrom } from '../files/systemErrors.ts';
import { removeAbandoned } from '../files/unfinishedFile.ts';
import { withFileLock } from './fileLock.ts';
import { freePath } from './freePath.ts';
import { placeOf, RecipeCopies } from './recipeCopies.ts';
import { recipeBeside, recipeInMirror } from './recipePlaces.ts';
import type { LoadedRecipe, SavedRecipe } from './storeResults.ts';
import { type FileVersion, readVersioned, replaceText, UnreadableText, versionOf } from './versionedFile.ts';

export interface RecipeStoreOptions {
  /** The user's own folder of this program: copies, locks, rescued work. */
  dataFolder: string;
  /** Where recipes go when the photo's folder cannot be written; null for nowhere. */
  mirrorFolder?: string | null;
  /** Where they went before; those that lie there stay there. */
  earlierMirrorFolders?: readonly string[];
  engineVersion: string;
  /** The clock; the system's unless given. */
  now?: () => Date;
}

interface OnDisk {
  path: string;
  version: FileVersion;
  opened: Opened<Recipe>;
}

const cannotWriteCodes = new Set(['EROFS', 'EACCES', 'EPERM']);

/** How often two windows may outrun each other before one gives up. */
const mostRounds = 20;

/**
 * The recipes of photos on disk. Saving is all or nothing and never over a change it has not seen; what cannot
 * be saved is rescued into the data folder and comes back at the next opening.
 */
export class RecipeStore {
  readonly copies: RecipeCopies;
  readonly #options: RecipeStoreOptions;
  /** Rescued files whose content came back with an opened recipe, by recipe path. */
  readonly #broughtBack = new Map<string, Set<string>>();

  constructor(options: RecipeStoreOptions) {
    this.#options = options;
    this.copies = new RecipeCopies(options.dataFolder);
  }

  /**
   * Opens the recipe of a photo. One that cannot be read counts as damaged: the photo can be worked on all the same,
   * and saving never goes over what could not be read.
   * @param photo the photo's fingerprint, to tell whether it is still the one the recipe was made for
   */
  async load(photoPath: string, photo: PhotoFingerprint): Promise<LoadedRecipe> {
    const path = recipeBeside(photoPath);
    await removeAbandoned(dirname(path));
    const beside = await lookAtPlace(path);
    const mirrored = await this.#readMirror(photoPath);
    // The mirror was only ever written because the photo's folder could not be: its easel is the later one.
    const onDisk = mirrored ?? beside;
    const rescued = await this.copies.rescued(path);
    if (!onDisk && rescued.length === 0) return { kind: 'none', path, version: null };
    const base = onDisk
      ? await this.#fromDisk(onDisk, path)
      : { recipe: null, remarks: [], path, version: null };
    if ('kind' in base && !(base.kind === 'damaged' && rescued.length > 0)) return base;
    let recipe = 'kind' in base ? null : base.recipe;
    const remarks = 'kind' in base ? [base.message] : [...base.remarks];
    if (mirrored && beside?.opened.kind === 'usable' && recipe)
      recipe = mergeRecipes(recipe, beside.opened.document, this.#moment());
    for (const { file, copy } of rescued) {
      recipe = recipe ? mergeRecipes(recipe, copy.recipe, this.#moment()) : copy.recipe;
      this.#noteBroughtBack(path, file);
      remarks.push('Work that could not be saved earlier was brought back.');
    }
    if (!recipe) return { kind: 'none', path, version: null };
    for (const history of recipe.histories)
      for (const fault of threadFaults(history.states)) remarks.push(`${history.title}: ${fault.problem}.`);
    const isSame = recipe.photo.sha256 === photo.sha256 && recipe.photo.sizeBytes === photo.sizeBytes;
    if (!isSame) remarks.push('The photo is not the one this recipe was made for: its bytes have changed.');
    return {
      kind: 'open',
      recipe,
      path: base.path,
      version: base.version,
      photo: isSame ? 'same' : 'changed',
      remarks,
    };
  }

  /** Everywhere the recipe of a photo may lie: beside it, and in mirrors, today's first. */
  placesOf(photoPath: string): [beside: string, ...mirrored: string[]] {
    const { mirrorFolder, earlierMirrorFolders = [] } = this.#options;
    const mirrors = mirrorFolder ? [mirrorFolder, ...earlierMirrorFolders] : earlierMirrorFolders;
    return [recipeBeside(photoPath), ...mirrors.map((folder) => recipeInMirror(photoPath, folder))];
  }

  async #readMirror(photoPath: string): Promise<OnDisk | null> {
    const [, ...mirrored] = this.placesOf(photoPath);
    for (const path of mirrored) {
      const found = await lookAtPlace(path);
      if (found) return found;
    }
    return null;
  }

  /** The recipe a place holds, or else the copy of the last one that was whole. */
  async #fromDisk(
    { path, version, opened }: OnDisk,
    besidePath: string,
  ): Promise<{ recipe: Recipe; remarks: string[]; path: string; version: FileVersion } | LoadedRecipe> {
    if (opened.kind === 'usable') return { recipe: opened.document, remarks: [], path, version };
    if (opened.kind === 'newer')
      return { kind: 'newer', recipe: opened.document, path, message: `${path}: ${opened.message}` };
    const copy = (await this.copies.forRecipe(path)) ?? (await this.copies.forRecipe(besidePath));
    const message = `${path}: ${opened.message}.`;
    if (!copy) return { kind: 'damaged', path, version, message: `${message} There is no earlier copy.` };
    const remark = `${message} The last whole copy was opened; the damaged file is put aside when you save.`;
    return { recipe: copy.recipe, remarks: [remark], path, version };
  }

  /**
   * Saves a recipe where it lies, or in the mirror where that cannot be written.
   * @param at the path and version it was loaded with
   */
  async save(
    photoPath: string,
    recipe: Recipe,
    at: { path?: string; version: FileVersion },
  ): Promise<SavedRecipe> {
    const path = at.path ?? recipeBeside(photoPath);
    const saved = await this.#saveAt(photoPath, path, recipe, at.version);
    const { mirrorFolder } = this.#options;
    if (saved.kind !== 'failed' || !mirrorFolder || !cannotWriteCodes.has(codeOf(saved.error))) return saved;
    const mirror = recipeInMirror(photoPath, mirrorFolder);
    if (mirror === path) return saved;
    await mkdir(dirname(mirror), { recursive: true }).catch(() => {});
    const mirrored = await this.#saveAt(photoPath, mirror, recipe, null);
    if (mirrored.kind !== 'saved') return mirrored;
    const remark = `${dirname(path)} cannot be written: the recipe is in ${mirror}.`;
    return { ...mirrored, remarks: [...mirrored.remarks, remark] };
  }

  /**
   * Saves, and where the file changed elsewhere makes one recipe of both: every state, use and delivery of
   * either; the easel stays ours, and what lay on theirs is kept as a state.
   * @returns what was saved, for the window to go on with
   */
  async saveKeepingBoth(
    photoPath: string,
    recipe: Recipe,
    at: { path?: string; version: FileVersion },
  ): Promise<{ recipe: Recipe; saved: SavedRecipe }> {
    let ours = recipe;
    let place = at;
    for (let round = 1; ; round++) {
      const saved = await this.save(photoPath, ours, place);
      if (saved.kind !== 'conflict' || saved.theirs === null || round === mostRounds)
        return { recipe: ours, saved };
      ours = mergeRecipes(ours, saved.theirs, this.#moment());
      place = { path: saved.path, version: saved.theirVersion };
    }
  }

  async #saveAt(
    photoPath: string,
    path: string,
    recipe: Recipe,
    expected: FileVersion,
  ): Promise<SavedRecipe> {
    const text = documentText(recipe);
    // Whoever reads the copy may stand in another folder.
    const copy = { photoPath: resolve(photoPath), recipePath: resolve(path), recipe };
    try {
      refuseUnfit(path, text);
      const lock = join(this.#options.dataFolder, 'locks', placeOf(path));
      const result = await withFileLock(lock, () => this.#replace(path, text, expected));
      if ('conflict' in result) {
        const rescuedTo = await this.#rescue(copy);
        return { ...conflictOf(result.conflict), path, rescuedTo };
      }
      const remarks = [...result.remarks];
      await this.copies.keep(copy).catch((failure) => {
        remarks.push(`No second copy could be kept: ${wordsOf(failure)}`);
      });
      await this.#dropRescued(recipeBeside(photoPath));
      return { kind: 'saved', path, version: result.version, remarks };
    } catch (failure) {
      const error = asFileError(path, failure);
      const rescuedTo = await this.#rescue(copy);
      const safe = rescuedTo ? ` Your work is safe in ${rescuedTo}.` : ' Keep this window open.';
      return { kind: 'failed', path, error, rescuedTo, message: `${error.message}${safe}` };
    }
  }

  async #replace(
    path: string,
    text: string,
    expected: FileVersion,
  ): Promise<{ version: FileVersion; remarks: string[] } | { conflict: OnDisk }> {
    const onDisk = await readPlace(path);
    const remarks: string[] = [];
    // The same text by another hand is no conflict.
    if (onDisk && onDisk.version === versionOf(text)) return { version: onDisk.version, remarks };
    if (onDisk && (onDisk.version !== expected || onDisk.opened.kind === 'newer')) {
      if (onDisk.opened.kind !== 'damaged') return { conflict: onDisk };
    }
    if (onDisk?.opened.kind === 'damaged') {
      // Copied, not moved: the name must never be without a file in between.
      const aside = await freePath(`${path}.damaged`);
      await copyFile(path, aside, constants.COPYFILE_EXCL).catch((failure) => {
        throw fileErrorFrom(path, failure);
      });
      remarks.push(`The damaged recipe was put aside as ${basename(aside)}.`);
    }
    return { version: await replaceText(path, text), remarks };
  }

  async #rescue(copy: { photoPath: string; recipePath: string; recipe: Recipe }): Promise<string | null> {
    // Rescued under the place beside the photo, which is where opening looks.
    const recipePath = recipeBeside(copy.photoPath);
    return this.copies.rescue({ ...copy, recipePath }).catch(() => null);
  }

  #noteBroughtBack(path: string, file: string): void {
    const files = this.#broughtBack.get(path) ?? new Set();
    this.#broughtBack.set(path, files.add(file));
  }

  async #dropRescued(path: string): Promise<void> {
    await this.copies.dropRescued(path, this.#broughtBack.get(path)).catch(() => {});
    this.#broughtBack.delete(path);
  }

  #moment(): Moment {
    const now = this.#options.now?.() ?? new Date();
    return { time: now.toISOString(), engineVersion: this.#options.engineVersion };
  }
}

async function readPlace(path: string): Promise<OnDisk | null> {
  try {
    const read = await readVersioned(path);
    return read ? { path, version: read.version, opened: openDocument(read.text, recipeFormat) } : null;
  } catch (failure) {
    if (!(failure instanceof UnreadableText)) throw failure;
    return { path, version: failure.version, opened: { kind: 'damaged', message: failure.problem } };
  }
}

/** As `readPlace`, for opening: what cannot be read counts as damaged. */
function lookAtPlace(path: string): Promise<OnDisk | null> {
  return readPlace(path).catch((failure) => {
    const { problem } = asFileError(path, failure);
    return { path, version: null, opened: { kind: 'damaged', message: problem } };
  });
}

/** What we could not open again must not be written. */
function refuseUnfit(path: string, text: string): void {
  const opened = openDocument(text, recipeFormat);
  if (opened.kind === 'usable') return;
  throw new FileError(path, opened.message, 'The file was left as it is.');
}

function conflictOf({ opened, version }: OnDisk): {
  kind: 'conflict';
  theirs: Recipe | null;
  theirVersion: FileVersion;
  message: string;
} {
  const theirs = opened.kind === 'usable' ? opened.document : null;
  const message =
    opened.kind === 'newer'
      ? opened.message
      : 'The recipe was changed elsewhere since it was opened; it was left as it is. Both can be kept.';
  return { kind: 'conflict', theirs, theirVersion: version, message };
}

function asFileError(path: string, failure: unknown): FileError {
  const known = fileErrorFrom(path, failure);
  if (known instanceof FileError) return known;
  return new FileError(path, wordsOf(failure), 'Try again.', { cause: failure });
}

function wordsOf(failure: unknown): string {
  return failure instanceof Error ? failure.message : String(failure);
}

function codeOf(error: FileError): string {
  return String((error.cause as NodeJS.ErrnoException | undefined)?.code ?? '');
}
