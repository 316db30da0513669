import { addNotice } from '../state/noticeStore.ts';
import { photoStore } from '../state/photoStore.ts';
import { roomStore } from '../wall/wallStore.ts';
import { takeLookOf } from './memoryWork.ts';
import { importPresets } from './presetWork.ts';

/**
 * Takes in a file that Oxgall wrote: a recipe gives its look to the photo on the easel, presets go to the shelf.
 * @returns false where the name is of neither kind
 */
export async function takeDocument(file: File): Promise<boolean> {
  const name = file.name.toLowerCase();
  if (name.endsWith('.oxgall-presets.json')) {
    await importPresets(file);
    return true;
  }
  if (!name.endsWith('.oxgall.json')) return false;
  if (photoStore.get() && roomStore.get() === 'easel') await takeLookOf(file.name, await file.text());
  else addNotice(`${file.name} is a recipe: with a photograph on the easel, it gives it its look.`);
  return true;
}
