import { mkdtemp, rm, writeFile } from 'node:fs/promises';
import { tmpdir } from 'node:os';
import { join } from 'node:path';
import { afterAll, beforeAll } from 'vitest';

/** A folder for the tests of one file, removed after them. */
export function temporaryFolder() {
  let folder = '';
  beforeAll(async () => {
    folder = await mkdtemp(join(tmpdir(), 'oxgall-files-'));
  });
  afterAll(async () => {
    await rm(folder, { recursive: true, force: true });
  });
  return {
    path: (name: string) => join(folder, name),
    async file(name: string, bytes: Uint8Array | string): Promise<string> {
      const path = join(folder, name);
      await writeFile(path, bytes);
      return path;
    },
  };
}
