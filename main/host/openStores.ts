import { join } from 'node:path';
import { engineVersion } from '../../core/engineVersion.ts';
import { PresetStore } from '../store/presetStore.ts';
import { RecipeStore } from '../store/recipeStore.ts';
import type { Stores } from './photoMemories.ts';

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
