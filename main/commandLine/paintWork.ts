import { defaultPrintLongEdgeMm } from '../../core/parameters/lengths.ts';
import { parseParameters } from '../../core/parameters/parse.ts';
import type { Parameters } from '../../core/parameters/table.ts';
import { toRoman } from '../../core/presets/roman.ts';
import type { OutputChange } from '../../core/recipes/outputSettings.ts';
import type { Recipe } from '../../core/recipes/recipe.ts';
import {
  changeOutput,
  createRecipe,
  currentHistory,
  currentParameters,
  currentState,
  hasUnkeptChanges,
  layPreset,
} from '../../core/recipes/recipeHistory.ts';
import { findMovedPhotos, hasRecipe } from '../store/movedPhotos.ts';
import { noteWrittenFile, type WrittenFile } from '../store/notedDelivery.ts';
import type { Stores } from '../store/openStores.ts';
import { type ChosenLook, chosenLook, readSettings } from './chosenLook.ts';
import { now, type PhotoRecipe, readRecipe, refuseReadOnly, saveRecipe } from './photoRecipe.ts';

/** What a photo is to be painted by: its own recipe, or a preset. */
export interface PaintWork {
  preset: string;
  /** The preset's name as people read it. */
  title: string;
  /** Number of the state; changes of one's own may lie over it. */
  state: number;
  parameters: Parameters;
  printLongEdgeMm: number;
  /** Plain sentences: that the recipe was used, what is wrong with it. */
  remarks: string[];
  /** The recipe as it was read; null where nobody needs it. */
  read: PhotoRecipe | null;
  look: ChosenLook | null;
}

/**
 * Finds out what to paint a photo by: `--preset` where it is given, else the photo's recipe where it has one, else
 * the default preset; `--set` changes any of them.
 * @param asked.isKept the delivery will be noted, so the recipe is read in any case
 */
export async function choosePaintWork(
  stores: Stores,
  photoPath: string,
  asked: { preset: string | undefined; settings: readonly string[]; isKept: boolean },
): Promise<PaintWork> {
  const isToRead = asked.isKept || (asked.preset === undefined && (await mayHaveRecipe(stores, photoPath)));
  const read = isToRead ? await readRecipe(stores, photoPath) : null;
  // Found out before the painting, not after it.
  if (asked.isKept && read) refuseReadOnly(read);
  if (asked.preset === undefined && read?.recipe) return fromRecipe(read, read.recipe, asked.settings);
  const look = await chosenLook(stores.presets, asked.preset, asked.settings);
  const { preset, state, parameters } = look;
  return {
    preset: preset.name,
    title: preset.title,
    state: state.number,
    parameters,
    printLongEdgeMm: read?.recipe?.work.output.printLongEdgeMm ?? defaultPrintLongEdgeMm,
    remarks: read?.remarks ?? [],
    read,
    look,
  };
}

function fromRecipe(read: PhotoRecipe, recipe: Recipe, settings: readonly string[]): PaintWork {
  const state = currentState(recipe);
  const { title, preset } = currentHistory(recipe);
  const isChanged = hasUnkeptChanges(recipe) || settings.length > 0;
  const changed = isChanged ? ' with changes over it' : '';
  const remark = `Painted by its recipe: ${title}, State ${toRoman(state.number)}${changed}.`;
  return {
    preset,
    title,
    state: state.number,
    parameters: parseParameters(readSettings(settings), currentParameters(recipe)),
    printLongEdgeMm: recipe.work.output.printLongEdgeMm,
    remarks: [remark, ...read.remarks],
    read,
    look: null,
  };
}

/** Found out without reading the photo, unless a recipe was made for one of its size. */
async function mayHaveRecipe({ recipes }: Stores, photoPath: string): Promise<boolean> {
  if (await hasRecipe(recipes, photoPath)) return true;
  const found = await findMovedPhotos(recipes, [photoPath]).catch(() => []);
  return found.some(({ kind }) => kind === 'moved');
}

/**
 * Notes a painted file in the photo's recipe, which is made where there was none.
 * @param kept settings that were asked for: they are the recipe's from now on
 * @returns where the recipe is, and what to tell
 * @throws FileError where it cannot be saved; the painting itself is there
 */
export async function keepPainted(
  stores: Stores,
  photoPath: string,
  { read, look }: PaintWork,
  file: Omit<WrittenFile, 'photoSha256'>,
  kept: OutputChange,
): Promise<{ path: string; remarks: string[] }> {
  const known = read ?? (await readRecipe(stores, photoPath));
  const moment = now();
  let recipe = known.recipe;
  if (look) {
    recipe ??= createRecipe(known.photo, look.preset, moment);
    if (recipe.work.preset !== look.preset.name || recipe.work.stateId !== look.state.id)
      recipe = layPreset(recipe, look.preset, look.state.id, moment);
  }
  const written = { ...file, photoSha256: known.photo.sha256 };
  const noted = noteWrittenFile(changeOutput(recipe!, kept), photoPath, written, moment);
  return saveRecipe(stores, photoPath, known, noted);
}
