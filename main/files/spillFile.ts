import { closeSync, constants, fstatSync, openSync, read, write } from 'node:fs';
import { constants as access, access as mayUse, mkdir } from 'node:fs/promises';
import { tmpdir } from 'node:os';
import { promisify } from 'node:util';
import { fileErrorFrom } from './systemErrors.ts';
import { listUnderWay, removeAbandoned, removeQuietly, temporaryPath } from './unfinishedFile.ts';

const readBytes = promisify(read);
const writeBytes = promisify(write);
// Bounded, so that an abort is noticed soon.
const atMostBytes = 8 * 2 ** 20;

/**
 * The folder for pixels that do not fit in memory. The system's temporary folder is often held in memory itself on
 * Linux; what is large belongs in /var/tmp there (Filesystem Hierarchy Standard 3.0, 5.15). TMPDIR overrules.
 */
export async function spillFolder(): Promise<string> {
  const onDisk = '/var/tmp';
  if (process.platform !== 'linux' || process.env.TMPDIR) return tmpdir();
  return mayUse(onDisk, access.W_OK).then(
    () => onDisk,
    () => tmpdir(),
  );
}

/** Clears away the pixels that a killed run may have left. */
export async function removeAbandonedSpills(): Promise<void> {
  await removeAbandoned(await spillFolder());
}

/** A file for pixels that do not fit in memory. It goes with `discard`, or when the program is ended by a signal. */
export class SpillFile {
  #descriptor = -1;
  #busy = 0;
  #isDiscarded = false;
  readonly #offTheList: () => boolean;

  private constructor(readonly path: string) {
    // Created in the same turn as it is listed, so that nothing is left behind unlisted.
    this.#descriptor = openSync(path, constants.O_CREAT | constants.O_EXCL | constants.O_RDWR, 0o600);
    this.#offTheList = listUnderWay(this);
  }

  /**
   * An empty file.
   * @param ending an extension that the image library tells the format by
   * @throws FileError where the folder takes none
   */
  static async create(ending: '' | '.v' = ''): Promise<SpillFile> {
    const folder = await spillFolder();
    const path = `${temporaryPath(folder)}${ending}`;
    try {
      await mkdir(folder, { recursive: true });
      return new SpillFile(path);
    } catch (failure) {
      throw fileErrorFrom(path, failure);
    }
  }

  get bytes(): number {
    return fstatSync(this.#descriptor).size;
  }

  /** Writes a piece at an offset; several may be under way. */
  async write(piece: Uint8Array, at: number, signal?: AbortSignal): Promise<void> {
    await this.#move(piece, signal, (done, length) =>
      writeBytes(this.#descriptor, piece, done, length, at + done).then((result) => result.bytesWritten),
    );
  }

  /** Fills `to` from an offset. */
  async read(to: Uint8Array, at: number, signal?: AbortSignal): Promise<void> {
    await this.#move(to, signal, (done, length) =>
      readBytes(this.#descriptor, to, done, length, at + done).then((result) => result.bytesRead),
    );
  }

  async #move(
    bytes: Uint8Array,
    signal: AbortSignal | undefined,
    step: (done: number, length: number) => Promise<number>,
  ): Promise<void> {
    this.#busy += 1;
    try {
      for (let done = 0; done < bytes.length; ) {
        signal?.throwIfAborted();
        if (this.#isDiscarded) throw new DOMException('The temporary file was given up', 'AbortError');
        const moved = await step(done, Math.min(atMostBytes, bytes.length - done));
        if (moved === 0) throw new Error(`The temporary file ${this.path} is shorter than expected`);
        done += moved;
      }
    } catch (failure) {
      throw fileErrorFrom(this.path, failure);
    } finally {
      this.#busy -= 1;
      this.#closeIfDone();
    }
  }

  /** Removes the file; more than once does nothing. Synchronous, so that it works while the program ends. */
  discard(): void {
    if (!this.#offTheList()) return;
    this.#isDiscarded = true;
    // Unlinked while open, which Node's way of opening allows on Windows too.
    removeQuietly(this.path);
    this.#closeIfDone();
  }

  /** Discards it though the library, which cannot be stopped, still writes there: what it makes anew goes too. */
  discardBehind(writing: Promise<unknown>): void {
    this.discard();
    const removeAgain = () => removeQuietly(this.path);
    void writing.then(removeAgain, removeAgain);
  }

  /** The descriptor stays while the system works on it: its number might else name another file by then. */
  #closeIfDone(): void {
    if (!this.#isDiscarded || this.#busy > 0 || this.#descriptor < 0) return;
    closeSync(this.#descriptor);
    this.#descriptor = -1;
  }
}
