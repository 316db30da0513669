// Bundles everything that runs in Node into dist/main: command line, paint worker, shells.

import { existsSync } from 'node:fs';
import { cp, mkdir } from 'node:fs/promises';
import { dirname, join } from 'node:path';
import { fileURLToPath } from 'node:url';
import { build } from 'vite';

const root = join(dirname(fileURLToPath(import.meta.url)), '..');

/** Entry name in dist/main → source file. Each is a program or a worker of its own. */
const entries = {
  commandLine: 'main/commandLine/commandLine.ts',
  paintWorker: 'main/engine/paintWorker.ts',
  colourWorker: 'main/colour/colourWorker.ts',
  loopbackShell: 'main/shells/loopbackShell.ts',
  electronShell: 'main/shells/electronShell.ts',
  bench: 'test/benchmarks/bench.ts',
};

/** A sandboxed preload cannot be a module: it is built on its own, as CommonJS. */
async function buildPreload() {
  const file = join(root, 'main/shells/electronPreload.ts');
  if (!existsSync(file)) return;
  await build({
    root,
    configFile: false,
    logLevel: 'warn',
    publicDir: false,
    build: {
      ssr: true,
      target: 'node20',
      outDir: join(root, 'dist/main'),
      emptyOutDir: false,
      minify: false,
      rollupOptions: {
        input: { electronPreload: file },
        external: ['electron'],
        output: { entryFileNames: '[name].cjs', format: 'cjs' },
      },
    },
    ssr: { noExternal: true, external: ['electron'] },
  });
}

export async function buildHost() {
  const input = Object.fromEntries(
    Object.entries(entries)
      .filter(([, file]) => existsSync(join(root, file)))
      .map(([name, file]) => [name, join(root, file)]),
  );
  await build({
    root,
    configFile: false,
    logLevel: 'warn',
    publicDir: false,
    build: {
      ssr: true,
      target: 'node20',
      outDir: join(root, 'dist/main'),
      emptyOutDir: true,
      minify: false,
      rollupOptions: {
        input,
        external: ['sharp', 'electron', 'bullmq'],
        output: { entryFileNames: '[name].js', chunkFileNames: 'chunks/[name]-[hash].js', format: 'es' },
      },
    },
    ssr: { noExternal: true, external: ['sharp', 'electron', 'bullmq'] },
  });
  await buildPreload();
  await cp(join(root, 'node_modules/lcms-wasm/dist/lcms.wasm'), join(root, 'dist/main/lcms.wasm'));
  // The demo's generator stays a program of its own: it starts its own threads, and is seldom wanted.
  await cp(join(root, 'build/demoSeries'), join(root, 'dist/demoSeries'), { recursive: true });
  await mkdir(join(root, 'dist/presets'), { recursive: true });
  await cp(join(root, 'presets'), join(root, 'dist/presets'), { recursive: true });
}
