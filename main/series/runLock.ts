import { randomUUID } from 'node:crypto';
import { link, open, readdir, readFile, rename, rm, stat, utimes, writeFile } from 'node:fs/promises';
import { hostname } from 'node:os';
import { join } from 'node:path';
import type { Shard } from '../../core/series/shards.ts';
import { FileError } from '../files/fileError.ts';
import { fileErrorFrom } from '../files/systemErrors.ts';
import { temporaryPath } from '../files/unfinishedFile.ts';
import { runLogName } from './runLog.ts';

/** A holder says this often that it is alive, and is taken for gone after that long. */
const beatMs = 10_000;
const goneMs = 60_000;

export interface RunLock {
  /** Aborts where somebody has taken the lock over, as after a machine slept. */
  readonly lost: AbortSignal;
  release(): Promise<void>;
}

/**
 * Keeps two runs from writing into one folder at once. Shards of one count may run together: they share no frame.
 * @throws FileError where another run holds the folder, or nothing can be written there
 */
export async function lockRun(folder: string, shard: Shard | null): Promise<RunLock> {
  const path = join(folder, lockName(shard));
  const token = JSON.stringify({ host: hostname(), processId: process.pid, id: randomUUID() });
  // Written under another name and linked, so that nobody ever reads a lock without its holder's name; its time is
  // that of the disk, which on a network is another machine's clock.
  const own = temporaryPath(folder);
  try {
    await writeFile(own, token, { flag: 'wx' });
    const nowMs = (await stat(own)).mtimeMs;
    await acquire(path, own, token, nowMs);
    if (await hasRival(folder, shard, nowMs)) {
      await rm(path, { force: true });
      throw new Held();
    }
  } catch (failure) {
    if (!(failure instanceof Held)) throw fileErrorFrom(folder, failure);
    throw new FileError(
      folder,
      'another run is writing into this folder',
      'Wait for it to end, or choose another folder.',
    );
  } finally {
    await rm(own, { force: true });
  }
  return hold(path, token);
}

class Held extends Error {}

function lockName(shard: Shard | null): string {
  return `.${runLogName(shard)}.lock`;
}

async function acquire(path: string, own: string, token: string, nowMs: number): Promise<void> {
  for (let attempt = 0; attempt < 5; attempt++) {
    if (await create(path, own, token)) return;
    const seen = await contentOf(path);
    if (seen === null) continue;
    if (!(await isAbandoned(path, seen, nowMs))) break;
    await removeSeen(path, seen);
  }
  throw new Held();
}

/** @returns false where the lock is held */
async function create(path: string, own: string, token: string): Promise<boolean> {
  try {
    await link(own, path);
    return true;
  } catch (failure) {
    const { code } = failure as NodeJS.ErrnoException;
    if (code === 'EEXIST') return false;
    if (code !== 'EPERM' && code !== 'ENOTSUP' && code !== 'ENOSYS' && code !== 'EOPNOTSUPP') throw failure;
  }
  // Memory cards and some network volumes know no hard links.
  const file = await open(path, 'wx').catch((failure: NodeJS.ErrnoException) => {
    if (failure.code === 'EEXIST') return null;
    throw failure;
  });
  await file?.writeFile(token).finally(() => file.close());
  return file !== null;
}

/** Renamed first and looked at again: another may have removed it and taken the lock meanwhile. */
async function removeSeen(path: string, seen: string): Promise<void> {
  const aside = `${path}.${randomUUID()}`;
  const isMoved = await rename(path, aside).then(
    () => true,
    () => false,
  );
  if (!isMoved) return;
  if ((await contentOf(aside)) !== seen) await link(aside, path).catch(() => undefined);
  await rm(aside, { force: true });
}

/** Whether a run paints frames of ours: of the whole series, or in shards of another count. */
async function hasRival(folder: string, shard: Shard | null, nowMs: number): Promise<boolean> {
  for (const name of await readdir(folder)) {
    const [isLock, , countText] = /^\.run(-\d+of(\d+))?\.oxgall\.jsonl\.lock$/.exec(name) ?? [];
    const isCompatible = shard !== null && countText === String(shard.count);
    if (!isLock || isCompatible || name === lockName(shard)) continue;
    const path = join(folder, name);
    const seen = await contentOf(path);
    if (seen === null) continue;
    if (!(await isAbandoned(path, seen, nowMs))) return true;
    await removeSeen(path, seen);
  }
  return false;
}

async function isAbandoned(path: string, content: string, nowMs: number): Promise<boolean> {
  const facts = await stat(path).catch(() => null);
  if (!facts) return true;
  try {
    const { host, processId } = JSON.parse(content);
    if (host === hostname() && !isRunning(processId)) return true;
  } catch {
    // Cut off while it was written: its age decides.
  }
  // The process number may be another program's by now: a holder that is alive says so all the time.
  return nowMs - facts.mtimeMs > goneMs;
}

function isRunning(processId: number): boolean {
  try {
    process.kill(processId, 0);
    return true;
  } catch (failure) {
    return (failure as NodeJS.ErrnoException).code !== 'ESRCH';
  }
}

function contentOf(path: string): Promise<string | null> {
  return readFile(path, 'utf8').catch(() => null);
}

function hold(path: string, token: string): RunLock {
  const lost = new AbortController();
  const beat = async () => {
    const seen = await readFile(path, 'utf8').catch((failure: NodeJS.ErrnoException) =>
      // A disk that is away for a moment has not given the lock to anybody.
      failure.code === 'ENOENT' ? null : token,
    );
    if (seen === token) return utimes(path, new Date(), new Date()).catch(() => undefined);
    clearInterval(timer);
    lost.abort(new FileError(path, 'another run has taken this folder over', 'Go on with --resume later.'));
  };
  const timer = setInterval(() => void beat(), beatMs);
  timer.unref();
  return {
    lost: lost.signal,
    release: async () => {
      clearInterval(timer);
      if ((await contentOf(path)) === token) await rm(path, { force: true });
    },
  };
}
