import { readFile } from 'node:fs/promises';
import { lookCaption } from '../../core/presets/lookName.ts';
import { placeFrame } from '../../core/print/printPlan.ts';
import { figureWords } from '../../core/proof/captionWords.ts';
import type { ProofCaption } from '../../core/proof/proofPage.ts';
import { recipeFormat } from '../../core/recipes/documentFormats.ts';
import { openDocument } from '../../core/recipes/openDocument.ts';
import type { Recipe } from '../../core/recipes/recipe.ts';
import { currentParameters, lookNameOf } from '../../core/recipes/recipeHistory.ts';
import { type FrameFigures, figureTable } from '../../core/series/frameFigures.ts';
import { FileError } from '../files/fileError.ts';
import { readPhotoSize } from '../files/photoHeader.ts';
import { listFolder } from '../host/listFolder.ts';
import { readRunLogs } from '../series/runLog.ts';
import { fingerprintPhoto } from '../store/photoFingerprint.ts';
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
 * paints it; every other picture as it is, with what the log of a run says of it.
 * @throws FileError where the folder cannot be read or holds no picture
 */
export async function folderSources(folder: string, painter: ProofPainter): Promise<FolderSources> {
  const [listing, logged] = await Promise.all([listFolder(folder), loggedPaintings(folder)]);
  const remarks: string[] = [];
  const sources: ProofSource[] = [];
  for (const { name, path } of listing.photos) {
    if (earlierSheet.test(name)) continue;
    const recipe = await recipeOf(path, remarks);
    if (recipe) sources.push(await paintedSource(path, name, recipe, painter));
    else sources.push({ picture: { path }, caption: await loggedCaption(path, name, logged.get(name)) });
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

type LoggedPainting = Extract<Awaited<ReturnType<typeof readRunLogs>>[number], { kind: 'painted' }>;

/** What runs into this folder painted last, by file name. */
async function loggedPaintings(folder: string): Promise<Map<string, LoggedPainting>> {
  const entries = await readRunLogs(folder);
  return new Map(entries.flatMap((entry) => (entry.kind === 'painted' ? [[entry.output, entry]] : [])));
}

/** The log speaks of the file it saw: one that has changed since gets its name alone. */
async function loggedCaption(path: string, name: string, logged?: LoggedPainting): Promise<ProofCaption> {
  const plain: ProofCaption = { name, preset: '', figures: [], note: '' };
  const file = logged && (await fingerprintPhoto(path).catch(() => null));
  if (!logged || file?.sha256 !== logged.sha256) return plain;
  const { preset = '', remarks = [] } = logged;
  const after = (logged.figures as { after?: unknown } | null | undefined)?.after;
  return {
    name,
    preset,
    figures: areFigures(after) ? [figureWords(after)] : [],
    note: remarks.join(' '),
  };
}

function areFigures(found: unknown): found is FrameFigures {
  const figures = found as Record<string, unknown> | null | undefined;
  return Object.keys(figureTable).every((key) => Number.isFinite(figures?.[key]));
}

async function paintedSource(
  path: string,
  name: string,
  recipe: Recipe,
  painter: ProofPainter,
): Promise<ProofSource> {
  const caption: ProofCaption = { name, preset: lookCaption(lookNameOf(recipe)), figures: [], note: '' };
  // A photo that cannot be read shows what is wrong with it when the sheet is made.
  const size = await readPhotoSize(path).catch(() => null);
  if (!size) return { picture: { path }, caption };
  const { printLongEdgeMm, cropFrame: crop } = recipe.work.output;
  const look = { parameters: currentParameters(recipe), printLongEdgeMm, crop };
  const { widthPx, heightPx } = crop ? placeFrame(size, crop) : size;
  const paint = (needed: { widthPx: number; heightPx: number }, signal?: AbortSignal) =>
    painter.paint(path, look, needed, signal);
  return { picture: { path, widthPx, heightPx, paint }, caption };
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
