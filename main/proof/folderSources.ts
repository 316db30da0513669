import { readFile } from 'node:fs/promises';
import { presetWords } from '../../core/proof/captionWords.ts';
import type { ProofCaption } from '../../core/proof/proofPage.ts';
import { recipeFormat } from '../../core/recipes/documentFormats.ts';
import { openDocument } from '../../core/recipes/openDocument.ts';
import type { Recipe } from '../../core/recipes/recipe.ts';
import {
  currentHistory,
  currentParameters,
  currentState,
  hasUnkeptChanges,
} from '../../core/recipes/recipeHistory.ts';
import { FileError } from '../files/fileError.ts';
import { readPhotoSize } from '../files/photoHeader.ts';
import { listFolder } from '../host/listFolder.ts';
import { recipeBeside } from '../store/recipePlaces.ts';
import type { ProofPainter } from './proofPainter.ts';
import type { ProofSource } from './proofSource.ts';

/** What a folder gives for a sheet. */
export interface FolderSources {
  sources: ProofSource[];
  /** What was not as expected, in plain sentences. */
  remarks: string[];
}

/** Sheets that were made here before: `ferry.proof.png`, `ferry.proof-2.png`, and the pages of one, `ferry.proof-02.png`. */
const earlierSheet = /\.proof(-\d+)*\.png$/i;

/**
 * The pictures of a folder in natural order of their names. A photo with a recipe beside it is shown as the recipe
 * paints it; every other picture as it is.
 * @throws FileError where the folder cannot be read or holds no picture
 */
export async function folderSources(folder: string, painter: ProofPainter): Promise<FolderSources> {
  const listing = await listFolder(folder);
  const remarks: string[] = [];
  const sources: ProofSource[] = [];
  for (const { name, path } of listing.photos) {
    if (earlierSheet.test(name)) continue;
    const recipe = await recipeOf(path, remarks);
    sources.push(recipe ? await paintedSource(path, name, recipe, painter) : plainSource(path, name));
  }
  if (sources.length === 0)
    throw new FileError(
      folder,
      'holds no pictures',
      'Name a folder of paintings, or of photos with recipes.',
    );
  if (listing.truncated) remarks.push(`${folder}: holds too many files, so the last ones were left out.`);
  return { sources, remarks };
}

function plainSource(path: string, name: string): ProofSource {
  return { picture: { path }, caption: { name, preset: '', figures: [], note: '' } };
}

async function paintedSource(
  path: string,
  name: string,
  recipe: Recipe,
  painter: ProofPainter,
): Promise<ProofSource> {
  const caption: ProofCaption = { name, preset: presetOf(recipe), figures: [], note: '' };
  // A photo that cannot be read shows what is wrong with it when the sheet is made.
  const size = await readPhotoSize(path).catch(() => null);
  if (!size) return { picture: { path }, caption };
  const look = {
    parameters: currentParameters(recipe),
    printLongEdgeMm: recipe.work.output.printLongEdgeMm,
  };
  const { widthPx, heightPx } = size;
  const paint = (needed: { widthPx: number; heightPx: number }, signal?: AbortSignal) =>
    painter.paint(path, look, needed, signal);
  return { picture: { path, widthPx, heightPx, paint }, caption };
}

function presetOf(recipe: Recipe): string {
  const words = presetWords(currentHistory(recipe).title, currentState(recipe).number);
  return hasUnkeptChanges(recipe) ? `${words}, with changes` : words;
}

async function recipeOf(photoPath: string, remarks: string[]): Promise<Recipe | null> {
  const path = recipeBeside(photoPath);
  let text: string;
  try {
    text = await readFile(path, 'utf8');
  } catch (failure) {
    if ((failure as NodeJS.ErrnoException).code !== 'ENOENT')
      remarks.push(`${path}: could not be read, so the photo is shown as it is.`);
    return null;
  }
  const opened = openDocument(text, recipeFormat);
  if (opened.kind === 'usable') return opened.document;
  remarks.push(`${path}: ${opened.message}`);
  return opened.kind === 'newer' ? opened.document : null;
}
