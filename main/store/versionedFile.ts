import { createHash } from 'node:crypto';
import { readFile, stat } from 'node:fs/promises';
import { FileError } from '../files/fileError.ts';
import { fileErrorFrom } from '../files/systemErrors.ts';
import { UnfinishedFile } from '../files/unfinishedFile.ts';

/** Tells one content of a file from another: SHA-256 of its bytes; null for no file. */
export type FileVersion = string | null;

export interface VersionedText {
  text: string;
  version: FileVersion;
}

/**
 * Reads a text with the version it has.
 * @returns null where there is no such file, or no such folder
 * @throws FileError where it cannot be read, or is no UTF-8 (which decoding would silently alter)
 */
export async function readVersioned(path: string): Promise<VersionedText | null> {
  const bytes = await readFile(path).catch((failure) => {
    if (isMissing(failure)) return null;
    throw fileErrorFrom(path, failure);
  });
  if (bytes === null) return null;
  const version = versionOf(bytes);
  try {
    return { text: new TextDecoder('utf-8', { fatal: true, ignoreBOM: true }).decode(bytes), version };
  } catch (cause) {
    throw new UnreadableText(path, version, { cause });
  }
}

/** A file whose bytes are no text; it still has a version. */
export class UnreadableText extends FileError {
  constructor(
    path: string,
    readonly version: FileVersion,
    options?: ErrorOptions,
  ) {
    super(path, 'this is no text', 'It was damaged or is another kind of file; put it aside.', options);
  }
}

/** The version that a text would have on the disk. */
export function versionOf(content: Uint8Array | string): FileVersion {
  return createHash('sha256').update(content).digest('hex');
}

/** The version on the disk now. */
export async function versionOnDisk(path: string): Promise<FileVersion> {
  try {
    return versionOf(await readFile(path));
  } catch (failure) {
    if (isMissing(failure)) return null;
    throw fileErrorFrom(path, failure);
  }
}

/**
 * Replaces a text, whole or not at all: a temporary file in the same folder, flushed, renamed, folder flushed.
 * @returns the new version
 * @throws FileError where it cannot be written; the old text is there then
 */
export async function replaceText(path: string, text: string): Promise<FileVersion> {
  await refuseReadOnlyFile(path);
  const file = await UnfinishedFile.begin(path);
  try {
    await file.append(Buffer.from(text, 'utf8'));
    await file.finish();
  } catch (failure) {
    file.discard();
    // The name may be given and the flush of the folder refused: then the text is there all the same.
    if ((await versionOnDisk(path).catch(() => null)) !== versionOf(text)) throw failure;
  }
  return versionOf(text);
}

/** A rename would replace a file that someone has set read-only, as if they had not meant it. */
async function refuseReadOnlyFile(path: string): Promise<void> {
  const facts = await stat(path).catch(() => null);
  if (facts?.isFile() && (facts.mode & 0o222) === 0)
    throw new FileError(path, 'the file is set read-only', 'Allow writing to it, then save again.');
}

function isMissing(failure: unknown): boolean {
  const { code } = failure as NodeJS.ErrnoException;
  return code === 'ENOENT' || code === 'ENOTDIR';
}
