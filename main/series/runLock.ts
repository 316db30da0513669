import { open, readFile, rm, stat, utimes } from 'node:fs/promises';
import { hostname } from 'node:os';
import { join } from 'node:path';
import { FileError } from '../files/fileError.ts';

/** A holder on another machine says this often that it is alive, and is taken for gone after that long. */
const beatMs = 10_000;
const goneMs = 60_000;

/**
 * Keeps two runs from writing into one folder at once.
 * @param name one for each shard: different shards may run together
 * @returns gives the lock back
 * @throws FileError where another run holds it
 */
export async function lockRun(folder: string, name: string): Promise<() => Promise<void>> {
  const path = join(folder, `.${name}.lock`);
  const own = JSON.stringify({ host: hostname(), processId: process.pid });
  for (let attempt = 0; attempt < 3; attempt++) {
    const file = await open(path, 'wx').catch(() => null);
    if (file) {
      await file.writeFile(own).finally(() => file.close());
      const beat = setInterval(
        () => void utimes(path, new Date(), new Date()).catch(() => undefined),
        beatMs,
      );
      beat.unref();
      return async () => {
        clearInterval(beat);
        await rm(path, { force: true });
      };
    }
    if (!(await isAbandoned(path))) break;
    await rm(path, { force: true });
  }
  throw new FileError(
    folder,
    'another run is writing into this folder',
    'Wait for it to end, or choose another folder.',
  );
}

async function isAbandoned(path: string): Promise<boolean> {
  const facts = await stat(path).catch(() => null);
  if (!facts) return true;
  try {
    const { host, processId } = JSON.parse(await readFile(path, 'utf8'));
    if (host === hostname()) return !isRunning(processId);
  } catch {
    // Cut off while it was written: its age decides.
  }
  return Date.now() - facts.mtimeMs > goneMs;
}

function isRunning(processId: number): boolean {
  try {
    process.kill(processId, 0);
    return true;
  } catch (failure) {
    return (failure as NodeJS.ErrnoException).code !== 'ESRCH';
  }
}
