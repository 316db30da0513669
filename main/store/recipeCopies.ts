import { createHash, randomUUID } from 'node:crypto';
import { mkdir, readdir, rm, stat } from 'node:fs/promises';
import { join, resolve } from 'node:path';
import { recipeFormat } from '../../core/recipes/documentFormats.ts';
import { documentText, openDocument } from '../../core/recipes/openDocument.ts';
import type { Recipe } from '../../core/recipes/recipe.ts';
import { readVersioned, replaceText } from './versionedFile.ts';

/** A recipe kept in the data folder, with where it belongs. */
export interface RecipeCopy {
  photoPath: string;
  recipePath: string;
  recipe: Recipe;
}

/**
 * Copies of recipes in the data folder, one for each recipe saved: what is read where a sidecar was damaged, and
 * how a photo that was moved finds its recipe again. The names hold the photo's size and hash, so that a folder of
 * photos is compared with all copies by reading one list of names.
 */
export class RecipeCopies {
  readonly #folder: string;
  readonly #rescueFolder: string;
  readonly #session = randomUUID();

  constructor(dataFolder: string) {
    this.#folder = join(dataFolder, 'recipes');
    this.#rescueFolder = join(dataFolder, 'rescued');
  }

  /** Keeps the copy of a recipe that was just saved. */
  async keep(copy: RecipeCopy): Promise<void> {
    const { sizeBytes, sha256 } = copy.recipe.photo;
    await mkdir(this.#folder, { recursive: true });
    const name = `${sizeBytes}-${sha256}-${placeOf(copy.recipePath)}.json`;
    await replaceText(join(this.#folder, name), copyText(copy));
  }

  /** The newest copy of the recipe that lay at that path, or null. */
  async forRecipe(recipePath: string): Promise<RecipeCopy | null> {
    const names = (await this.#names()).filter((name) => name.endsWith(`-${placeOf(recipePath)}.json`));
    return this.#newest(names.map((name) => join(this.#folder, name)));
  }

  /** Sizes of all photos there are copies for: a photo of another size need not be hashed. */
  async knownSizes(): Promise<Set<number>> {
    return new Set((await this.#names()).map((name) => Number(name.split('-')[0])));
  }

  /** Every copy made for a photo of these bytes, wherever it lay; the one kept last first. */
  async forPhoto(sizeBytes: number, sha256: string): Promise<RecipeCopy[]> {
    const names = (await this.#names()).filter((name) => name.startsWith(`${sizeBytes}-${sha256}-`));
    const paths = await newestFirst(names.map((name) => join(this.#folder, name)));
    const copies = await Promise.all(paths.map(readCopy));
    return copies.filter((copy) => copy !== null);
  }

  /**
   * Puts a recipe that could not be saved where it is safe. A later rescue by the same program takes its place;
   * those of other programs stay.
   * @returns the file it is in
   */
  async rescue(copy: RecipeCopy): Promise<string> {
    await mkdir(this.#rescueFolder, { recursive: true });
    const path = join(this.#rescueFolder, `${placeOf(copy.recipePath)}-${this.#session}.json`);
    await replaceText(path, copyText(copy));
    return path;
  }

  /** Everything rescued that belongs at that path, with the files it is in. */
  async rescued(recipePath: string): Promise<{ file: string; copy: RecipeCopy }[]> {
    const names = await readdir(this.#rescueFolder).catch(() => []);
    const ours = names.filter((name) => name.startsWith(`${placeOf(recipePath)}-`) && name.endsWith('.json'));
    const read = await Promise.all(
      ours.map(async (name) => {
        const file = join(this.#rescueFolder, name);
        return { file, copy: await readCopy(file) };
      }),
    );
    return read.filter((entry): entry is { file: string; copy: RecipeCopy } => entry.copy !== null);
  }

  /** Forgets what this program rescued for that path, and the files named, once all that is saved. */
  async dropRescued(recipePath: string, files: Iterable<string> = []): Promise<void> {
    const own = join(this.#rescueFolder, `${placeOf(recipePath)}-${this.#session}.json`);
    for (const file of [own, ...files]) await rm(file, { force: true });
  }

  async #names(): Promise<string[]> {
    return (await readdir(this.#folder).catch(() => [])).filter((name) => /^\d+-.*\.json$/.test(name));
  }

  async #newest(paths: string[]): Promise<RecipeCopy | null> {
    for (const path of await newestFirst(paths)) {
      const copy = await readCopy(path);
      if (copy) return copy;
    }
    return null;
  }
}

async function newestFirst(paths: readonly string[]): Promise<string[]> {
  const dated = await Promise.all(
    paths.map(async (path) => ({ path, atMs: (await stat(path).catch(() => null))?.mtimeMs ?? 0 })),
  );
  return dated.sort((one, other) => other.atMs - one.atMs).map(({ path }) => path);
}

/** Stands for a path in a file name. */
export function placeOf(path: string): string {
  return createHash('sha256').update(resolve(path)).digest('hex').slice(0, 24);
}

function copyText({ photoPath, recipePath, recipe }: RecipeCopy): string {
  return documentText({ format: 'oxgall-recipe-copy', photoPath, recipePath, recipe });
}

/** A copy that is damaged itself counts as none: it is a second line. */
async function readCopy(path: string): Promise<RecipeCopy | null> {
  try {
    const read = await readVersioned(path);
    if (!read) return null;
    const { photoPath, recipePath, recipe } = JSON.parse(read.text);
    const opened = openDocument(JSON.stringify(recipe), recipeFormat);
    if (opened.kind !== 'usable' || typeof photoPath !== 'string' || typeof recipePath !== 'string')
      return null;
    return { photoPath, recipePath, recipe: opened.document };
  } catch {
    return null;
  }
}
