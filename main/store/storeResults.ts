import type { Recipe } from '../../core/recipes/recipe.ts';
import type { FileError } from '../files/fileError.ts';
import type { FileVersion } from './versionedFile.ts';

/** What opening a photo's recipe came to. None of these is an error to stop at. */
export type LoadedRecipe =
  /** There is none yet. */
  | { kind: 'none'; path: string; version: null }
  | {
      kind: 'open';
      recipe: Recipe;
      path: string;
      /** Hand it back when saving; it tells whether the file changed meanwhile. */
      version: FileVersion;
      /** Whether the photo still has the bytes that the recipe was made for. */
      photo: 'same' | 'changed';
      /** Plain sentences for the user: recovered, migrated, changed outside. Usually empty. */
      remarks: string[];
    }
  /** Written by a newer version: for looking only. `recipe` is null where we do not understand it. */
  | { kind: 'newer'; recipe: Recipe | null; path: string; message: string }
  /** No whole recipe and no copy of one. Saving puts the damaged file aside and never overwrites it. */
  | { kind: 'damaged'; path: string; version: FileVersion; message: string };

/** What saving came to. Whatever it is, the recipe is safe: in its place, or where `rescuedTo` says. */
export type SavedRecipe =
  | { kind: 'saved'; path: string; version: FileVersion; remarks: string[] }
  /** The file was changed elsewhere since it was read; it was left as it is. */
  | {
      kind: 'conflict';
      path: string;
      theirs: Recipe | null;
      theirVersion: FileVersion;
      rescuedTo: string | null;
      message: string;
    }
  | { kind: 'failed'; path: string; error: FileError; rescuedTo: string | null; message: string };
