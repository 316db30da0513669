import { FileError } from './fileError.ts';

const explanations: Record<string, { problem: string; remedy: string }> = {
  ENOENT: { problem: 'there is no such file', remedy: 'Check the name and the folder.' },
  ENOTDIR: { problem: 'a part of the path is a file, not a folder', remedy: 'Check the path.' },
  EISDIR: { problem: 'is a folder, not a file', remedy: 'Name a file in it.' },
  EACCES: { problem: 'permission denied', remedy: 'Change its permissions, or choose another place.' },
  EPERM: {
    problem: 'the system does not allow it',
    remedy: 'Close other programs that use it, or choose another place.',
  },
  EBUSY: { problem: 'another program is using it', remedy: 'Close that program and try again.' },
  EROFS: { problem: 'the disk is read-only', remedy: 'Choose a folder on another disk.' },
  ENOSPC: { problem: 'the disk is full', remedy: 'Free some space or choose a folder on another disk.' },
  EDQUOT: {
    problem: 'the disk quota is used up',
    remedy: 'Free some space or choose a folder on another disk.',
  },
  EFBIG: {
    problem: 'the disk does not take files this large',
    remedy: 'Choose a folder on another disk or another format.',
  },
  ENAMETOOLONG: { problem: 'the name is too long', remedy: 'Choose a shorter name.' },
  ELOOP: { problem: 'its links lead round in a circle', remedy: 'Repair the link or name the file itself.' },
  EMFILE: { problem: 'too many files are open', remedy: 'Close other programs and try again.' },
};

/** Puts a failure of the file system in words; passes on a FileError or an abort as it is. */
export function fileErrorFrom(path: string, failure: unknown): unknown {
  if (failure instanceof FileError) return failure;
  const code = (failure as NodeJS.ErrnoException | undefined)?.code;
  if (typeof code !== 'string' || (failure as Error).name === 'AbortError') return failure;
  const known = explanations[code];
  return new FileError(
    path,
    known?.problem ?? `the system reports ${code}`,
    known?.remedy ?? 'Try again, or choose another place.',
    { cause: failure },
  );
}
