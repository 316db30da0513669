import { createHash, randomBytes } from 'node:crypto';
import { closeSync, constants, fsync, openSync, unlinkSync, write } from 'node:fs';
import { open, readdir, realpath, rename, rm, stat } from 'node:fs/promises';
import { hostname } from 'node:os';
import { basename, dirname, join } from 'node:path';
import { setTimeout as wait } from 'node:timers/promises';
import { promisify } from 'node:util';
import { fileErrorFrom } from './systemErrors.ts';

const writeBytes = promisify(write);
const flush = promisify(fsync);

const machine = createHash('sha256').update(hostname()).digest('hex').slice(0, 8);
const namePattern = /^\.oxgall-([0-9a-f]{8})-(\d+)-[0-9a-f]+\.part(\.v)?$/;
// Bounded, so that an abort is noticed soon.
const writeAtMostBytes = 8 * 2 ** 20;

/** Whatever leaves a file behind unless it is discarded. */
export interface Discardable {
  discard(): void;
}

const underWay = new Set<Discardable>();

/** Has `discardUnfinished` discard it too, until it is taken off the list. */
export function listUnderWay(file: Discardable): () => boolean {
  underWay.add(file);
  return () => underWay.delete(file);
}

/** A name in a folder that tells whose file it is, so that what a killed run leaves can be cleared away. */
export function temporaryPath(folder: string): string {
  return join(folder, `.oxgall-${machine}-${process.pid}-${randomBytes(6).toString('hex')}.part`);
}

/**
 * A file being written beside its target. It takes the target's name only when complete and flushed, so the
 * target is never seen half-written. Every file is either finished or discarded.
 */
export class UnfinishedFile {
  readonly temporaryPath: string;
  #descriptor: number;
  #bytesWritten = 0;
  #discarded = false;
  #busy = false;

  private constructor(
    readonly targetPath: string,
    private readonly finalPath: string,
  ) {
    this.temporaryPath = temporaryPath(dirname(finalPath));
    // Created in the same turn as it is listed, so that discardUnfinished never misses one.
    this.#descriptor = openSync(
      this.temporaryPath,
      constants.O_CREAT | constants.O_EXCL | constants.O_RDWR,
      0o666,
    );
    underWay.add(this);
  }

  /** @throws FileError where the folder takes no file */
  static async begin(targetPath: string): Promise<UnfinishedFile> {
    try {
      return new UnfinishedFile(targetPath, await behindLinks(targetPath));
    } catch (failure) {
      throw fileErrorFrom(targetPath, failure);
    }
  }

  /** Where the next piece will go. */
  get bytesWritten(): number {
    return this.#bytesWritten;
  }

  /** Appends a piece. */
  async append(piece: Uint8Array, signal?: AbortSignal): Promise<void> {
    await this.#writeAt(piece, this.#bytesWritten, signal);
    this.#bytesWritten += piece.length;
  }

  /** Overwrites bytes written before, such as an offset in the header. */
  async patch(piece: Uint8Array, at: number): Promise<void> {
    await this.#writeAt(piece, at);
  }

  async #writeAt(piece: Uint8Array, at: number, signal?: AbortSignal): Promise<void> {
    try {
      for (let done = 0; done < piece.length; ) {
        signal?.throwIfAborted();
        const length = Math.min(writeAtMostBytes, piece.length - done);
        done += await this.#use((descriptor) =>
          writeBytes(descriptor, piece, done, length, at + done).then((result) => result.bytesWritten),
        );
      }
    } catch (failure) {
      throw fileErrorFrom(this.targetPath, failure);
    }
  }

  /** Keeps the descriptor open while the system works on it: its number might else name another file by then. */
  async #use<T>(work: (descriptor: number) => Promise<T>): Promise<T> {
    this.#requireOpen();
    this.#busy = true;
    try {
      return await work(this.#descriptor);
    } finally {
      this.#busy = false;
      if (this.#discarded) this.#close();
    }
  }

  #requireOpen(): void {
    if (this.#discarded) throw new DOMException('The write was given up', 'AbortError');
  }

  /** Flushes, gives the file its name and flushes the folder. */
  async finish(): Promise<void> {
    try {
      await this.#use((descriptor) => flush(descriptor));
      this.#requireOpen();
      this.#close();
      await renameOver(this.temporaryPath, this.finalPath);
      underWay.delete(this);
      await flushFolder(dirname(this.finalPath));
    } catch (failure) {
      throw fileErrorFrom(this.targetPath, failure);
    }
  }

  /** Removes what was written; harmless after finish. Synchronous, so that it works while the program ends. */
  discard(): void {
    if (!underWay.delete(this)) return;
    this.#discarded = true;
    // Unlinked while open, which Node's way of opening allows on Windows too: a write under way goes nowhere.
    removeQuietly(this.temporaryPath);
    if (!this.#busy) this.#close();
  }

  #close(): void {
    const descriptor = this.#descriptor;
    this.#descriptor = -1;
    if (descriptor >= 0) closeSync(descriptor);
  }
}

/**
 * Removes the temporary files of all writes under way, at once. For the moment before the program ends by a
 * signal. Do not end it by `process.exit` then: Node waits there for the encoder's threads, seconds in the worst
 * case; raise the signal again with its default action instead.
 */
export function discardUnfinished(): void {
  for (const file of [...underWay]) file.discard();
}

/** Removes temporary files and folders in a folder whose writer was killed. Those of other machines are left alone. */
export async function removeAbandoned(folder: string): Promise<void> {
  const names = await readdir(folder).catch(() => []);
  for (const name of names) {
    const match = namePattern.exec(name);
    if (match && match[1] === machine && !isRunning(Number(match[2])))
      await rm(join(folder, name), { force: true, recursive: true }).catch(() => {});
  }
}

function isRunning(processId: number): boolean {
  try {
    process.kill(processId, 0);
    return true;
  } catch (failure) {
    return (failure as NodeJS.ErrnoException).code !== 'ESRCH';
  }
}

export function removeQuietly(path: string): void {
  try {
    unlinkSync(path);
  } catch {
    // Already gone, or the folder is; there is nobody left to tell.
  }
}

/** The file a link leads to, so that writing keeps the link; the path itself where nothing is there yet. */
async function behindLinks(path: string): Promise<string> {
  const exists = await stat(path).then(
    () => true,
    () => false,
  );
  return exists ? realpath(path) : join(await realpath(dirname(path)), basename(path));
}

const lockedCodes = new Set(['EPERM', 'EACCES', 'EBUSY']);
const waitsMs = [20, 50, 100, 200, 400, 800];

/** On Windows a virus scanner or an indexer may hold the target for a moment. */
async function renameOver(from: string, to: string): Promise<void> {
  for (const waitMs of process.platform === 'win32' ? waitsMs : []) {
    try {
      return await rename(from, to);
    } catch (failure) {
      if (!lockedCodes.has((failure as NodeJS.ErrnoException).code ?? '')) throw failure;
      await wait(waitMs);
    }
  }
  return rename(from, to);
}

/** Without this the new name may be lost in a power cut. Windows cannot open folders and needs it not. */
export async function flushFolder(folder: string): Promise<void> {
  if (process.platform === 'win32') return;
  const handle = await open(folder, 'r');
  try {
    await handle.sync();
  } catch (failure) {
    // Some network disks refuse to flush a folder; the file itself is complete.
    if (!['EINVAL', 'ENOTSUP', 'EPERM'].includes((failure as NodeJS.ErrnoException).code ?? ''))
      throw failure;
  } finally {
    await handle.close();
  }
}
