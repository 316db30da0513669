import { engineVersion } from '../../core/engineVersion.ts';
import { PresetStore } from './presetStore.ts';
import { RecipeStore } from './recipeStore.ts';
import { readSettings } from './settings.ts';

/** Where recipes and presets are kept. */
export interface Stores {
  recipes: RecipeStore;
  presets: PresetStore;
  dataFolder: string;
}

/** The stores of a data folder. */
export function openStores(dataFolder: string, builtInFolder?: string): Stores {
  return {
    recipes: new RecipeStore({ dataFolder, ...readSettings(dataFolder), engineVersion }),
    presets: new PresetStore({ dataFolder, engineVersion, builtInFolder }),
    dataFolder,
  };
}
