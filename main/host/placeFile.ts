import { link, lstat, rename, rm } from 'node:fs/promises';
import { basename, dirname, extname, join } from 'node:path';
import { FileError } from '../files/fileError.ts';
import { fileErrorFrom } from '../files/systemErrors.ts';
import { removeAbandoned, temporaryPath } from '../files/unfinishedFile.ts';
import { flushFolder } from './flushFolder.ts';

const maximumNumber = 9999;

/**
 * Writes a file under `target`'s name, or under that name with the first number that is free; never over a
 * file that is there, not even one that appears meanwhile.
 * @param write makes the whole file at the path it is given, in the same folder
 * @returns where the file is now
 */
export async function placeNew(
  target: string,
  write: (path: string) => Promise<unknown>,
  signal?: AbortSignal,
): Promise<string> {
  return withPart(target, write, async (part) => {
    signal?.throwIfAborted();
    for (let number = 1; number <= maximumNumber; number += 1) {
      const path = numbered(target, number);
      if (await placeUnlessTaken(part, path)) return path;
    }
    throw allTaken(target);
  });
}

/** Writes a file over `target`: the old one or the new one is there at every moment. */
export async function placeOver(target: string, write: (path: string) => Promise<unknown>): Promise<string> {
  return withPart(target, write, async (part) => {
    await rename(part, target);
    return target;
  });
}

/** The name that `placeNew` would take if nothing appears meanwhile. */
export async function firstFree(target: string): Promise<string> {
  for (let number = 1; number <= maximumNumber; number += 1) {
    const path = numbered(target, number);
    if (!(await isTaken(path))) return path;
  }
  throw allTaken(target);
}

/** `plate.png`, `plate 2.png`, `plate 3.png` … */
export function numbered(target: string, number: number): string {
  if (number === 1) return target;
  const extension = extname(target);
  return join(dirname(target), `${basename(target, extension)} ${number}${extension}`);
}

async function withPart(
  target: string,
  write: (path: string) => Promise<unknown>,
  place: (part: string) => Promise<string>,
): Promise<string> {
  const folder = dirname(target);
  const part = temporaryPath(folder);
  await removeAbandoned(folder);
  try {
    await write(part);
    const path = await place(part);
    await flushFolder(folder);
    return path;
  } catch (error) {
    // The part's name means nothing to anyone; the error names what was asked for.
    if (error instanceof FileError && error.path === part)
      throw new FileError(target, error.problem, error.remedy, { cause: error });
    throw fileErrorFrom(target, error);
  } finally {
    await rm(part, { force: true });
  }
}

/**
 * Gives a finished file its name, but takes nobody's: a hard link fails where the name is taken, which a rename does
 * not. The part may still be there afterwards.
 */
export async function placeUnlessTaken(part: string, path: string): Promise<boolean> {
  try {
    await link(part, path);
    return true;
  } catch (error) {
    const code = (error as NodeJS.ErrnoException).code;
    if (code === 'EEXIST') return false;
    if (code !== 'EPERM' && code !== 'ENOTSUP' && code !== 'ENOSYS' && code !== 'EOPNOTSUPP') throw error;
  }
  // Memory cards and some network volumes know no hard links: look, then rename.
  const taken = await isTaken(path);
  if (!taken) await rename(part, path);
  return !taken;
}

/** A link that leads nowhere takes a name too. */
async function isTaken(path: string): Promise<boolean> {
  return lstat(path).then(
    () => true,
    () => false,
  );
}

function allTaken(target: string): FileError {
  return new FileError(target, 'this name and all its numbers are taken', 'Choose another name.');
}
