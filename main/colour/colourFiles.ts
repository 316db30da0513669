import { existsSync } from 'node:fs';

/** This module is bundled into dist/main or dist/main/chunks; tests run it from its source. */
const hostFolders = ['./', '../', '../../dist/main/'].map((way) => new URL(way, import.meta.url));

function bundled(name: string): URL {
  const found = hostFolders.map((folder) => new URL(name, folder)).find((url) => existsSync(url));
  if (!found) throw new Error(`${name} is missing: build the program again`);
  return found;
}

/** LittleCMS, compiled to WebAssembly. */
export function littleCmsUrl(): URL {
  return bundled('lcms.wasm');
}

export function colourWorkerUrl(): URL {
  return bundled('colourWorker.js');
}
