import { readFileSync } from 'node:fs';
import { mkdir } from 'node:fs/promises';
import { join, resolve } from 'node:path';
import { z } from 'zod';
import { FileError } from '../files/fileError.ts';
import { fileErrorFrom } from '../files/systemErrors.ts';
import { replaceText } from './versionedFile.ts';

const fileSchema = z.looseObject({
  format: z.literal('oxgall-settings'),
  schema: z.literal(1),
  mirrorFolder: z.string().min(1).nullable(),
  earlierMirrorFolders: z.array(z.string()),
});

/** What the user has set once for all photos. */
export interface Settings {
  /** Where recipes go whose photos lie in folders that cannot be written. */
  mirrorFolder: string;
  /** Where they went before; recipes that lie there are still found. */
  earlierMirrorFolders: string[];
}

/** Where recipes go unless the user has chosen another folder. */
export function usualMirrorFolder(dataFolder: string): string {
  return join(dataFolder, 'recipes-elsewhere');
}

/** Reads the settings; a file that is missing or damaged stands for the usual ones. */
export function readSettings(dataFolder: string): Settings {
  const usual = usualMirrorFolder(dataFolder);
  const stored = readFile(dataFolder);
  const mirrorFolder = stored?.mirrorFolder ?? usual;
  const earlier = new Set([...(stored?.earlierMirrorFolders ?? []), usual]);
  earlier.delete(mirrorFolder);
  return { mirrorFolder, earlierMirrorFolders: [...earlier] };
}

/**
 * Chooses where recipes go whose photos lie in folders that cannot be written. Those kept so far stay where they are
 * and are found there.
 * @param folder null for the usual one
 * @throws FileError where the folder or the settings cannot be written
 */
export async function chooseMirrorFolder(dataFolder: string, folder: string | null): Promise<Settings> {
  const before = readSettings(dataFolder);
  const mirrorFolder = folder === null ? null : resolve(folder);
  if (mirrorFolder !== null)
    await mkdir(mirrorFolder, { recursive: true }).catch((failure) => {
      throw asFileError(mirrorFolder, failure);
    });
  const earlierMirrorFolders = [...before.earlierMirrorFolders, before.mirrorFolder];
  const file = {
    ...readFile(dataFolder),
    format: 'oxgall-settings',
    schema: 1,
    mirrorFolder,
    earlierMirrorFolders: [...new Set(earlierMirrorFolders)].filter((earlier) => earlier !== mirrorFolder),
  };
  await mkdir(dataFolder, { recursive: true });
  await replaceText(pathIn(dataFolder), `${JSON.stringify(file, null, 2)}\n`);
  return readSettings(dataFolder);
}

function pathIn(dataFolder: string): string {
  return join(dataFolder, 'settings.json');
}

function readFile(dataFolder: string): z.infer<typeof fileSchema> | null {
  try {
    const checked = fileSchema.safeParse(JSON.parse(readFileSync(pathIn(dataFolder), 'utf8')));
    return checked.success ? checked.data : null;
  } catch {
    return null;
  }
}

function asFileError(path: string, failure: unknown): unknown {
  // Asked to make a folder, the system says so of a file that has its name.
  if ((failure as NodeJS.ErrnoException).code === 'EEXIST')
    return new FileError(path, 'is a file, not a folder', 'Name a folder.', { cause: failure });
  return fileErrorFrom(path, failure);
}
