import { access, constants, lstat, realpath, stat } from 'node:fs/promises';
import { basename, dirname, extname, join } from 'node:path';
import { FileError } from './fileError.ts';
import { extensionOf } from './outputFormat.ts';
import type { OutputFormat } from './photoFile.ts';
import { fileErrorFrom } from './systemErrors.ts';
import { removeAbandoned, UnfinishedFile } from './unfinishedFile.ts';

async function statIfThere(path: string) {
  try {
    return await stat(path, { bigint: true });
  } catch (failure) {
    const code = (failure as NodeJS.ErrnoException).code;
    if (code === 'ENOENT' || code === 'ENOTDIR') return undefined;
    throw fileErrorFrom(path, failure);
  }
}

/**
 * Refuses an output that is the photo itself, also by way of a link, another spelling of the path or other case.
 * @throws FileError
 */
export async function refuseOverwritingOriginal(photoPath: string, outPath: string): Promise<void> {
  const out = await statIfThere(outPath);
  const photo = out && (await statIfThere(photoPath));
  if (!out || !photo) return;
  const sameFile = out.dev === photo.dev && out.ino === photo.ino;
  // Some network disks number no files; there the resolved path decides.
  const samePath = (await realpath(photoPath)) === (await realpath(outPath));
  if (sameFile || samePath)
    throw new FileError(
      outPath,
      'is the photo itself, and originals are never overwritten',
      'Choose another name.',
    );
}

/**
 * Finds out before painting whether a file can be written there, by making one beside it and removing it. Also
 * clears away what a killed run may have left in that folder.
 * @throws FileError
 */
export async function assertWritable(outPath: string): Promise<void> {
  const folder = dirname(outPath);
  const folderFacts = await statIfThere(folder);
  if (!folderFacts)
    throw new FileError(
      outPath,
      `there is no folder "${folder}"`,
      'Make the folder first or choose another.',
    );
  if (!folderFacts.isDirectory())
    throw new FileError(outPath, `"${folder}" is not a folder`, 'Choose a folder to write to.');
  const present = await statIfThere(outPath);
  if (present?.isDirectory()) throw new FileError(outPath, 'is a folder', 'Add a file name to it.');
  if (present && !present.isFile())
    throw new FileError(outPath, 'is not a regular file', 'Choose another name.');
  if (present) await refuseWriteProtected(outPath);
  await removeAbandoned(folder);
  const trial = await beginTrial(outPath, folder);
  trial.discard();
}

async function beginTrial(outPath: string, folder: string): Promise<UnfinishedFile> {
  try {
    return await UnfinishedFile.begin(outPath);
  } catch (failure) {
    const code = failure instanceof FileError && (failure.cause as NodeJS.ErrnoException | undefined)?.code;
    // The folder was there a moment ago: a system folder that takes no files says ENOENT.
    if (code === 'EACCES' || code === 'EPERM' || code === 'ENOENT')
      throw new FileError(
        outPath,
        `nothing may be written to "${folder}"`,
        'Change its permissions, or choose another place.',
        { cause: failure },
      );
    throw failure;
  }
}

async function refuseWriteProtected(outPath: string): Promise<void> {
  try {
    await access(outPath, constants.W_OK);
  } catch (failure) {
    throw new FileError(outPath, 'is write-protected', 'Choose another name or lift the protection.', {
      cause: failure,
    });
  }
}

const highestNumber = 10_000;

/**
 * Where a painting goes when no output is named: beside the photo as `<name>.painted.<extension>`, with a number
 * where that is taken (`<name>.painted-2.<extension>`).
 */
export async function defaultOutputPath(photoPath: string, format: OutputFormat): Promise<string> {
  const stem = basename(photoPath, extname(photoPath));
  for (let number = 1; number < highestNumber; number++) {
    const numbered = number === 1 ? '' : `-${number}`;
    const path = join(dirname(photoPath), `${stem}.painted${numbered}${extensionOf[format]}`);
    if (!(await isTaken(path))) return path;
  }
  throw new FileError(photoPath, 'has thousands of paintings beside it', 'Name the output yourself.');
}

/** A link to nowhere takes a name too. */
async function isTaken(path: string): Promise<boolean> {
  try {
    await lstat(path);
    return true;
  } catch (failure) {
    if ((failure as NodeJS.ErrnoException).code === 'ENOENT') return false;
    throw fileErrorFrom(path, failure);
  }
}
