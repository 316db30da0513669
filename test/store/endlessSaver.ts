/** A program that saves one recipe over and over until it is killed; bundled and started by the kill tests. */
import { writeFileSync } from 'node:fs';
import { changeParameters, keepState } from '../../core/recipes/recipeHistory.ts';
import { fingerprintPhoto } from '../../main/store/photoFingerprint.ts';
import { RecipeStore } from '../../main/store/recipeStore.ts';

const [photoPath, dataFolder] = process.argv.slice(2);
const store = new RecipeStore({ dataFolder, engineVersion: '1' });
const loaded = await store.load(photoPath, await fingerprintPhoto(photoPath));
if (loaded.kind !== 'open') throw new Error(`Expected an open recipe, received ${loaded.kind}`);
let { recipe, version } = loaded;
for (let count = 0; ; count++) {
  // Every third save keeps a state; the others move the easel, to and fro.
  const changed = changeParameters(recipe, { 'body.brush': `${1 + (count % 50) / 10}mm` });
  const time = new Date().toISOString();
  recipe = count % 3 === 0 ? keepState(changed, `save ${count}`, { time, engineVersion: '1' }) : changed;
  // What is about to be saved, told before it is: the reader knows then what may be found.
  process.stdout.write(`saving ${recipe.histories[0].states.length}\n`);
  const saved = await store.save(photoPath, recipe, { version });
  if (saved.kind !== 'saved') {
    writeFileSync(2, `${JSON.stringify(saved)}\n`);
    process.exit(3);
  }
  version = saved.version;
  process.stdout.write(`saved ${recipe.histories[0].states.length}\n`);
}
