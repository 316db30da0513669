import { spawn } from 'node:child_process';
import { readdir, readFile } from 'node:fs/promises';
import { join } from 'node:path';
import { setTimeout as wait } from 'node:timers/promises';
import { fileURLToPath } from 'node:url';
import { build } from 'vite';
import { expect } from 'vitest';
import { threadFaults } from '../../core/presets/thread.ts';
import { recipeFormat } from '../../core/recipes/documentFormats.ts';
import { openDocument } from '../../core/recipes/openDocument.ts';
import { newStore, storeWithPhoto, temporaryFolder } from './storeFolders.ts';

/** Bundles the saver, since Node runs no TypeScript. */
async function bundleSaver(): Promise<string> {
  const outDir = await temporaryFolder();
  await build({
    configFile: false,
    logLevel: 'warn',
    build: {
      ssr: fileURLToPath(new URL('./endlessSaver.ts', import.meta.url)),
      outDir,
      emptyOutDir: true,
      target: 'node20',
      rollupOptions: { output: { entryFileNames: 'saver.mjs' } },
    },
    ssr: { noExternal: true },
  });
  return join(outDir, 'saver.mjs');
}

/** Runs the saver for so long after its first save, kills it, and says how many states it had saved. */
async function runAndKill(script: string, photoPath: string, dataFolder: string, afterMs: number) {
  const child = spawn(process.execPath, [script, photoPath, dataFolder], {
    stdio: ['ignore', 'pipe', 'pipe'],
  });
  let said = '';
  let complaint = '';
  child.stderr.on('data', (piece) => {
    complaint += piece;
  });
  const ended = new Promise((resolve) => child.once('close', resolve));
  const begun = new Promise<void>((resolve) => {
    child.stdout.on('data', (piece) => {
      said += piece;
      resolve();
    });
    child.once('close', () => resolve());
  });
  await begun;
  await wait(afterMs);
  child.kill('SIGKILL');
  await ended;
  expect(complaint).toBe('');
  // The last line may be cut off.
  const lines = said.slice(0, said.lastIndexOf('\n')).split('\n');
  const last = (word: string) =>
    Number(
      lines
        .filter((line) => line.startsWith(`${word} `))
        .at(-1)
        ?.split(' ')[1],
    );
  return { saved: last('saved') || 0, saving: last('saving') || 0 };
}

/**
 * Kills a saving program again and again. After every kill the sidecar must be whole, hold all that was saved,
 * and nothing that was never to be saved; its states unharmed; the next program must go on.
 * @returns how many kills fell between the beginning and the end of a save
 */
export async function killSaver(rounds: number): Promise<number> {
  const script = await bundleSaver();
  const { store, photos, photoPath, photo, recipe, recipePath, dataFolder } = await storeWithPhoto();
  expect((await store.save(photoPath, recipe, { version: null })).kind).toBe('saved');
  let midway = 0;
  for (let round = 0; round < rounds; round++) {
    const { saved, saving } = await runAndKill(script, photoPath, dataFolder, (round * 7919) % 60);
    const bytes = await readFile(recipePath, 'utf8');
    const opened = openDocument(bytes, recipeFormat);
    if (opened.kind !== 'usable') throw new Error(`round ${round}: ${JSON.stringify(opened)}`);
    const { states } = opened.document.histories[0];
    expect(threadFaults(states)).toEqual([]);
    expect(states.length, `round ${round}`).toBeGreaterThanOrEqual(saved);
    // Its last line may not have reached us, so it may have begun one save more than we know of.
    expect(states.length, `round ${round}`).toBeLessThanOrEqual(Math.max(saving, saved) + 1);
    if ((await readdir(photos)).some((name) => name.endsWith('.part'))) midway++;
    const loaded = await newStore({ dataFolder }).load(photoPath, photo);
    expect(loaded).toMatchObject({ kind: 'open', remarks: [] });
    expect((await readdir(photos)).sort()).toEqual(['heron.jpg', 'heron.jpg.oxgall.json']);
    if (states.length > 120)
      await store.save(photoPath, recipe, { version: (loaded as { version: string }).version });
  }
  return midway;
}
