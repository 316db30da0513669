import { existsSync, readFileSync } from 'node:fs';
import { join } from 'node:path';
import { fileURLToPath } from 'node:url';
import type { WindowFolders } from '../host/windowFiles.ts';

/** The bundle lies in dist/main or dist/main/chunks, the source in main/shells. */
const waysToDist = ['..', '../..', '../../dist'];

function distFolder(): string {
  const folders = waysToDist.map((way) => fileURLToPath(new URL(way, import.meta.url)));
  return folders.find((folder) => existsSync(join(folder, 'kernels.wasm'))) ?? folders[0];
}

/** Where the built interface and kernels lie. */
export function windowFolders(): WindowFolders {
  const dist = distFolder();
  return { rendererFolder: join(dist, 'renderer'), kernelsFile: join(dist, 'kernels.wasm') };
}

/** The program's version, from its package. */
export function appVersion(): string {
  try {
    const text = readFileSync(join(distFolder(), '..', 'package.json'), 'utf8');
    return String((JSON.parse(text) as { version: string }).version);
  } catch {
    return '0.0.0';
  }
}
