import { createHash } from 'node:crypto';
import { lstat, readdir } from 'node:fs/promises';
import { join } from 'node:path';
import { fingerprintPhoto } from '../store/photoFingerprint.ts';

/**
 * SHA-256 of a painting's strata: of a file's bytes, or of a folder's names and what each file there holds.
 * @returns null where nothing lies there
 */
export async function hashStrata(path: string): Promise<string | null> {
  const facts = await lstat(path).catch(() => null);
  if (!facts) return null;
  if (!facts.isDirectory()) return hashOf(path);
  const hash = createHash('sha256');
  for (const name of (await readdir(path)).sort())
    hash.update(`${name}\n${await hashOf(join(path, name))}\n`);
  return hash.digest('hex');
}

async function hashOf(path: string): Promise<string> {
  return fingerprintPhoto(path).then(
    ({ sha256 }) => sha256,
    () => '',
  );
}
