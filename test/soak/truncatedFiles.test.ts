import { readFile, writeFile } from 'node:fs/promises';
import { join } from 'node:path';
import { expect, it } from 'vitest';
import { defaultParameters } from '../../core/parameters/table.ts';
import { PresetStore } from '../../main/store/presetStore.ts';
import { moment } from '../recipes/sampleRecipes.ts';
import { storeWithPhoto, temporaryFolder } from '../store/storeFolders.ts';

it('a recipe cut off at every byte opens as its last whole copy and is left as it is', async () => {
  const { store, photoPath, photo, recipe, recipePath } = await storeWithPhoto();
  await store.save(photoPath, recipe, { version: null });
  const whole = await readFile(recipePath);
  for (let length = 0; length < whole.length - 1; length++) {
    await writeFile(recipePath, whole.subarray(0, length));
    expect(await store.load(photoPath, photo), `cut at ${length}`).toMatchObject({ kind: 'open', recipe });
    expect(await readFile(recipePath)).toEqual(whole.subarray(0, length));
  }
}, 600_000);

it('a preset cut off at every byte opens as its last whole copy and is left as it is', async () => {
  const dataFolder = await temporaryFolder();
  const store = new PresetStore({ dataFolder, engineVersion: '1' });
  const made = await store.create('Dusk', defaultParameters(), moment(0));
  const path = join(dataFolder, 'presets', 'dusk.json');
  const whole = await readFile(path);
  for (let length = 0; length < whole.length - 1; length++) {
    await writeFile(path, whole.subarray(0, length));
    expect((await store.get('dusk')).preset, `cut at ${length}`).toEqual(made);
    expect(await readFile(path)).toEqual(whole.subarray(0, length));
  }
}, 600_000);
