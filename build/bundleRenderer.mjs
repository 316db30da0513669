// Bundles the interface into dist/renderer.
import { existsSync } from 'node:fs';
import { dirname, join } from 'node:path';
import { fileURLToPath } from 'node:url';
import react from '@vitejs/plugin-react';
import { build } from 'vite';

const root = join(dirname(fileURLToPath(import.meta.url)), '..');

export async function buildRenderer() {
  if (!existsSync(join(root, 'renderer/index.html'))) return;
  await build({
    root: join(root, 'renderer'),
    configFile: false,
    logLevel: 'warn',
    plugins: [react()],
    worker: { format: 'es' },
    build: {
      outDir: join(root, 'dist/renderer'),
      emptyOutDir: true,
      target: 'chrome120',
      assetsInlineLimit: 0,
    },
  });
}
