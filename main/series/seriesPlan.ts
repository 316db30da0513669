import { readdir, stat } from 'node:fs/promises';
import { join } from 'node:path';
import { baseOf, foldName, outputNames } from '../../core/series/outputNames.ts';
import { extensionOf } from '../files/outputFormat.ts';
import type { OutputFormat } from '../files/photoFile.ts';
import { fileErrorFrom } from '../files/systemErrors.ts';
import { isPhotoName } from '../host/listFolder.ts';
import { recipeBeside } from '../store/recipePlaces.ts';

/** One frame of a run. */
export interface PlannedFrame {
  /** File name of the photo. */
  name: string;
  path: string;
  /** File name of the painting, unless somebody else's file has it already. */
  outputName: string;
}

/** What a folder gives for a run. */
export interface SeriesPlan {
  frames: PlannedFrame[];
  /** What else lies there, by name, and why it is not painted. */
  others: { name: string; reason: string }[];
  /** Frames whose paintings carry more than their base name, and why. */
  renamed: { name: string; reason: string }[];
  /** Photos that have recipes of their own beside them. */
  withRecipe: string[];
}

const naturalOrder = new Intl.Collator('en', { numeric: true, sensitivity: 'base' });
/** What this program itself puts beside photos. */
const ownFile = /\.oxgall(-presets)?\.(json|jsonl)(\.other( \d+)?)?$/;

/**
 * The photos of a folder in natural order of their names, each with the name of its painting. A link that leads nowhere
 * counts as a photo that cannot be read: somebody put it there as one.
 * @throws FileError where the folder cannot be read
 */
export async function planSeries(folder: string, format: OutputFormat): Promise<SeriesPlan> {
  const all = await readdir(folder).catch((failure) => {
    throw fileErrorFrom(folder, failure);
  });
  const names = all
    .filter((name) => !name.startsWith('.') && !ownFile.test(name))
    .sort((a, b) => naturalOrder.compare(a, b) || (a < b ? -1 : 1));
  const kinds = new Map<string, Kind>();
  for (const name of names) kinds.set(name, await kindOf(folder, name));
  const photos = names.filter((name) => kinds.get(name) === 'photo');
  const outputs = outputNames(photos, extensionOf[format]);
  const present = new Set(all);
  return {
    frames: photos.map((name) => ({ name, path: join(folder, name), outputName: outputs.get(name)! })),
    others: names.flatMap((name) => {
      const kind = kinds.get(name);
      if (kind === 'other') return [{ name, reason: 'This is no photo.' }];
      return kind === 'device' ? [{ name, reason: 'This is no regular file.' }] : [];
    }),
    renamed: [...byBase(photos).values()]
      .filter((group) => group.length > 1)
      .flatMap((group) =>
        group.map((name) => ({ name, reason: whyRenamed(name, group, outputs.get(name)!) })),
      ),
    withRecipe: photos.filter((name) => present.has(recipeBeside(name))),
  };
}

type Kind = 'photo' | 'other' | 'device' | 'folder';

async function kindOf(folder: string, name: string): Promise<Kind> {
  const facts = await stat(join(folder, name)).catch(() => null);
  if (facts?.isDirectory()) return 'folder';
  if (!isPhotoName(name)) return 'other';
  // Reading from a pipe would wait for ever.
  return !facts || facts.isFile() ? 'photo' : 'device';
}

function byBase(photos: readonly string[]): Map<string, string[]> {
  const found = new Map<string, string[]>();
  for (const name of photos) {
    const base = foldName(baseOf(name));
    const group = found.get(base);
    if (group) group.push(name);
    else found.set(base, [name]);
  }
  return found;
}

function whyRenamed(name: string, group: readonly string[], output: string): string {
  const others = group.filter((other) => other !== name).join(', ');
  return `The base name is that of ${others} too: painted as ${output}.`;
}
