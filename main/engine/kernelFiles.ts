import { readFile } from 'node:fs/promises';

/** The bundled files of the engine: this module is bundled into dist/main, or into dist/main/chunks. */
const candidates = ['./', '../', '../../dist/main/'];

/** Where dist/main is, as a directory URL. */
function hostFolder(): URL {
  for (const candidate of candidates) {
    const folder = new URL(candidate, import.meta.url);
    if (folder.pathname.endsWith('/dist/main/')) return folder;
  }
  return new URL('../../dist/main/', import.meta.url);
}

/** Address of the bundled paint worker. */
export function paintWorkerUrl(): URL {
  return new URL('paintWorker.js', hostFolder());
}

/** Compiles the kernels' module. */
export async function loadKernelModule(): Promise<WebAssembly.Module> {
  return WebAssembly.compile(await readFile(new URL('../kernels.wasm', hostFolder())));
}
