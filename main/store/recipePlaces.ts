import { basename, dirname, join, parse, resolve } from 'node:path';

const ending = '.oxgall.json';

/** Where the recipe of a photo lies: beside it. */
export function recipeBeside(photoPath: string): string {
  return `${photoPath}${ending}`;
}

/**
 * Where it lies when the photo's folder cannot be written: under a folder of the user's choice that repeats the
 * photo's own path, so that photos of one name never meet.
 */
export function recipeInMirror(photoPath: string, mirrorFolder: string): string {
  const absolute = resolve(photoPath);
  const { root } = parse(absolute);
  // A drive letter becomes a folder: C:\heron.jpg → mirror\C\heron.jpg.oxgall.json.
  const drive = root.replace(/[^A-Za-z0-9]/g, '');
  return recipeBeside(join(mirrorFolder, drive, absolute.slice(root.length)));
}

/** Whether a file's name is that of a recipe. */
export function isRecipeName(name: string): boolean {
  return name.endsWith(ending) && name.length > ending.length;
}

/** The photo a recipe lies beside. */
export function photoOfRecipe(recipePath: string): string {
  return join(dirname(recipePath), basename(recipePath).slice(0, -ending.length));
}
