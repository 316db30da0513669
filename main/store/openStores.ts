import { join } from 'node:path';
import { engineVersion } from '../../core/engineVersion.ts';
import { PresetStore } from './presetStore.ts';
import { RecipeStore } from './recipeStore.ts';

/** Where recipes and presets are kept. */
export interface Stores {
  recipes: RecipeStore;
  presets: PresetStore;
  dataFolder: string;
  /** Recipes of photos whose folders cannot be written. */
  mirrorFolder: string;
}

/** The stores of a data folder. */
export function openStores(dataFolder: string, builtInFolder?: string): Stores {
  const mirrorFolder = join(dataFolder, 'recipes-elsewhere');
  return {
    recipes: new RecipeStore({ dataFolder, mirrorFolder, engineVersion }),
    presets: new PresetStore({ dataFolder, engineVersion, builtInFolder }),
    dataFolder,
    mirrorFolder,
  };
}
