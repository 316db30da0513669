import { mkdirSync, rmSync } from 'node:fs';
import { lstat, readFile, rename } from 'node:fs/promises';
import { dirname, join } from 'node:path';
import { FileError } from './fileError.ts';
import { fileErrorFrom } from './systemErrors.ts';
import { flushFolder, listUnderWay, temporaryPath } from './unfinishedFile.ts';

/**
 * A folder being filled beside its target. It takes the target's name only when complete, so the target is never
 * seen half-filled. Every folder is either finished or discarded.
 */
export class UnfinishedFolder {
  readonly temporaryPath: string;
  readonly #offTheList: () => boolean;

  private constructor(readonly targetPath: string) {
    this.temporaryPath = temporaryPath(dirname(targetPath));
    // Created in the same turn as it is listed, so that nothing is left behind unlisted.
    mkdirSync(this.temporaryPath);
    this.#offTheList = listUnderWay(this);
  }

  /** @throws FileError where the parent takes no folder */
  static begin(targetPath: string): UnfinishedFolder {
    try {
      return new UnfinishedFolder(targetPath);
    } catch (failure) {
      throw fileErrorFrom(targetPath, failure);
    }
  }

  /** A file in it. */
  path(name: string): string {
    return join(this.temporaryPath, name);
  }

  /**
   * Flushes the folder and gives it its name, in the place of an earlier one of the same kind. The files in it have
   * to be flushed already.
   * @param mark a file in it, and how one of the same kind begins; a folder without it is left alone
   * @throws FileError where the name is taken by anything else
   */
  async finish(mark: { file: string; begins: string }): Promise<void> {
    try {
      await flushFolder(this.temporaryPath);
      await refuseForeign(this.targetPath, mark);
      const aside = temporaryPath(dirname(this.targetPath));
      const wasThere = await renameIfThere(this.targetPath, aside);
      await rename(this.temporaryPath, this.targetPath).catch(async (failure) => {
        if (wasThere) await rename(aside, this.targetPath);
        throw failure;
      });
      this.#offTheList();
      await flushFolder(dirname(this.targetPath));
      if (wasThere) removeFolder(aside);
    } catch (failure) {
      throw fileErrorFrom(this.targetPath, failure);
    }
  }

  /** Removes what was written; harmless after finish. Synchronous, so that it works while the program ends. */
  discard(): void {
    if (this.#offTheList()) removeFolder(this.temporaryPath);
  }
}

/** @throws FileError where the name is taken by anything but a folder with the mark */
export async function refuseForeign(path: string, mark: { file: string; begins: string }): Promise<void> {
  const present = await lstat(path).catch((failure: NodeJS.ErrnoException) => {
    if (failure.code === 'ENOENT') return null;
    throw fileErrorFrom(path, failure);
  });
  if (!present) return;
  const text = present.isDirectory() ? await readFile(join(path, mark.file), 'utf8').catch(() => '') : '';
  if (!text.startsWith(mark.begins))
    throw new FileError(
      path,
      'is there already and holds something else',
      'Choose another name, or move it away.',
    );
}

async function renameIfThere(from: string, to: string): Promise<boolean> {
  try {
    await rename(from, to);
    return true;
  } catch (failure) {
    if ((failure as NodeJS.ErrnoException).code === 'ENOENT') return false;
    throw failure;
  }
}

function removeFolder(path: string): void {
  try {
    rmSync(path, { recursive: true, force: true });
  } catch {
    // What cannot be removed now is cleared away at the next start.
  }
}
