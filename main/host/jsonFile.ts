import { randomUUID } from 'node:crypto';
import { mkdir, open, readFile, rename, rm } from 'node:fs/promises';
import { dirname, join } from 'node:path';
import type { z } from 'zod';
import { flushFolder } from './flushFolder.ts';

/**
 * Reads a small JSON file of ours.
 * @returns null where there is none, or where what is there is not what we write: recents and drafts are
 *   conveniences, and a broken one must never keep the program from starting
 */
export async function readJsonFile<T>(path: string, schema: z.ZodType<T>): Promise<T | null> {
  try {
    const checked = schema.safeParse(JSON.parse(await readFile(path, 'utf8')));
    return checked.success ? checked.data : null;
  } catch {
    return null;
  }
}

/** Replaces a small JSON file: whatever happens meanwhile, the old text or the new one is there. */
export async function writeJsonFile(path: string, value: unknown): Promise<void> {
  const folder = dirname(path);
  await mkdir(folder, { recursive: true });
  const beside = join(folder, `.${randomUUID()}.part`);
  try {
    const file = await open(beside, 'wx', 0o600);
    try {
      await file.writeFile(`${JSON.stringify(value)}\n`);
      await file.sync();
    } finally {
      await file.close();
    }
    await rename(beside, path);
    await flushFolder(folder);
  } catch (error) {
    await rm(beside, { force: true });
    throw error;
  }
}
