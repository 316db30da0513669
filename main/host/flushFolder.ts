import { open } from 'node:fs/promises';

/** Sends a folder's names to the disk, a new file's among them; Windows knows no such flush and refuses it. */
export async function flushFolder(folder: string): Promise<void> {
  if (process.platform === 'win32') return;
  const handle = await open(folder, 'r');
  try {
    await handle.sync();
  } finally {
    await handle.close();
  }
}
