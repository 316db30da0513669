import { readdir } from 'node:fs/promises';
import { extname, join } from 'node:path';
import { extensionOf } from '../files/outputFormat.ts';
import type { OutputFormat } from '../files/photoFile.ts';
import { fileErrorFrom } from '../files/systemErrors.ts';
import { isPhotoName } from '../host/listFolder.ts';

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
  /** Files that are no photos, by name. */
  others: string[];
}

const naturalOrder = new Intl.Collator('en', { numeric: true, sensitivity: 'base' });
/** What this program itself puts beside photos. */
const ownFile = /\.oxgall(-presets)?\.(json|jsonl)$/;

/**
 * The photos of a folder in natural order of their names, each with the name of its painting: the photo's base name,
 * or its whole name where two photos share the base.
 * @throws FileError where the folder cannot be read
 */
export async function planSeries(folder: string, format: OutputFormat): Promise<SeriesPlan> {
  const entries = await readdir(folder, { withFileTypes: true }).catch((failure) => {
    throw fileErrorFrom(folder, failure);
  });
  const names = entries
    .filter((entry) => !entry.isDirectory() && !entry.name.startsWith('.') && !ownFile.test(entry.name))
    .map(({ name }) => name)
    .sort((a, b) => naturalOrder.compare(a, b) || (a < b ? -1 : 1));
  const photos = names.filter(isPhotoName);
  const bases = new Map<string, number>();
  const baseOf = (name: string) => name.slice(0, name.length - extname(name).length);
  // Some disks do not tell capitals from small letters.
  const fold = (name: string) => baseOf(name).toLowerCase();
  for (const name of photos) bases.set(fold(name), (bases.get(fold(name)) ?? 0) + 1);
  return {
    frames: photos.map((name) => {
      const isShared = (bases.get(fold(name)) ?? 0) > 1;
      return {
        name,
        path: join(folder, name),
        outputName: `${isShared ? name : baseOf(name)}${extensionOf[format]}`,
      };
    }),
    others: names.filter((name) => !isPhotoName(name)),
  };
}

/** A part of a run: every `count`-th frame from the `index`-th on, from 1. */
export interface Shard {
  index: number;
  count: number;
}

/** The frames of a shard: disjoint, and together all of them. */
export function framesOfShard<Frame>(frames: readonly Frame[], shard: Shard | null): Frame[] {
  return shard ? frames.filter((_, at) => at % shard.count === shard.index - 1) : [...frames];
}
