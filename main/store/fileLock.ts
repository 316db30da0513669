import { randomUUID } from 'node:crypto';
import { link, mkdir, open, readFile, rename, rm, stat } from 'node:fs/promises';
import { hostname } from 'node:os';
import { dirname } from 'node:path';
import { setTimeout as wait } from 'node:timers/promises';

/** A lock this old was left behind: what it guards takes milliseconds. */
const abandonedMs = 20_000;
const pollMs = 8;
const patienceMs = 30_000;

/**
 * Runs something while no other window or command of this user's runs it.
 *
 * The check for outside changes and the rename that follows are two steps; this closes the gap between them for
 * everything that shares a data folder. Programs that do not are caught by the check alone, a gap of about a
 * millisecond. The lock lies in the data folder and never beside the photos; where even that cannot be written
 * the work runs unguarded, since refusing to save would be worse.
 *
 * @param lockPath the file that stands for the lock
 */
export async function withFileLock<Result>(lockPath: string, work: () => Promise<Result>): Promise<Result> {
  const token = await acquire(lockPath);
  try {
    return await work();
  } finally {
    if (token !== null && (await contentOf(lockPath)) === token) await rm(lockPath, { force: true });
  }
}

async function acquire(lockPath: string): Promise<string | null> {
  const token = JSON.stringify({ host: hostname(), processId: process.pid, id: randomUUID() });
  const untilMs = Date.now() + patienceMs;
  await mkdir(dirname(lockPath), { recursive: true }).catch(() => {});
  while (Date.now() < untilMs) {
    const created = await create(lockPath, token);
    if (created === 'created') return token;
    if (created === 'impossible') return null;
    await removeAbandoned(lockPath);
    await wait(pollMs);
  }
  return null;
}

/** Written under another name and linked, so that nobody ever reads a lock without its holder's name. */
async function create(lockPath: string, token: string): Promise<'created' | 'held' | 'impossible'> {
  const own = `${lockPath}.${randomUUID()}`;
  try {
    const file = await open(own, 'wx');
    await file.writeFile(token).finally(() => file.close());
    await link(own, lockPath);
    return 'created';
  } catch (failure) {
    return (failure as NodeJS.ErrnoException).code === 'EEXIST' ? 'held' : 'impossible';
  } finally {
    await rm(own, { force: true }).catch(() => {});
  }
}

async function removeAbandoned(lockPath: string): Promise<void> {
  const seen = await contentOf(lockPath);
  if (seen === null || !(await isAbandoned(lockPath, seen))) return;
  // Renamed first and looked at again: another waiter may have removed it and taken the lock meanwhile.
  const aside = `${lockPath}.${randomUUID()}`;
  const moved = await rename(lockPath, aside).then(
    () => true,
    () => false,
  );
  if (!moved) return;
  if ((await contentOf(aside)) !== seen) await link(aside, lockPath).catch(() => {});
  await rm(aside, { force: true });
}

async function isAbandoned(lockPath: string, content: string): Promise<boolean> {
  const facts = await stat(lockPath).catch(() => null);
  if (facts && Date.now() - facts.mtimeMs > abandonedMs) return true;
  try {
    const { host, processId } = JSON.parse(content);
    return host === hostname() && !isRunning(processId);
  } catch {
    return false;
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

async function contentOf(path: string): Promise<string | null> {
  return readFile(path, 'utf8').catch(() => null);
}
