import { existsSync, readdirSync } from 'node:fs';
import { join } from 'node:path';
import { fileURLToPath, pathToFileURL } from 'node:url';
import type { DemoSeries } from './api/hostCommands.ts';
import type { HostParts } from './hostParts.ts';
import { isPhotoName } from './listFolder.ts';

const title = 'The Ferry at Low Water';

/** Plates that are rendered when the demo is first asked for: the ferry and the heron, on two threads. */
const firstPlates = [2, 5];
/** Share of their full size: some ten seconds, and large enough to look at in full. */
const firstScale = 0.4;

/** The bundle lies in dist/main or dist/main/chunks, the source in main/host: each has its own way to dist. */
const waysToRenderer = ['../demoSeries/', '../../demoSeries/', '../../build/demoSeries/'];

/** What is used of the generator, which is a program of its own beside the bundle. */
interface Generator {
  renderDemoSeries(options: { outDir: string; numbers: number[]; scale: number }): Promise<unknown>;
}

/**
 * The demo series: plates that lie ready in a folder, or else plates that are rendered into the user's data folder
 * when they are first asked for.
 * @param dataFolder where rendered plates are kept
 * @param ready a folder of plates; where `OXGALL_DEMO` says, unless given
 */
export function findDemo(
  dataFolder: string,
  ready: string | undefined = process.env.OXGALL_DEMO,
): HostParts['demo'] {
  if (ready && photoNamesIn(ready).length > 0) return { title, prepare: async () => seriesIn(ready) };
  const generator = waysToRenderer
    .map((way) => fileURLToPath(new URL(`${way}render.mjs`, import.meta.url)))
    .find((path) => existsSync(path));
  if (!generator) return null;
  const folder = join(dataFolder, 'demo');
  let rendering: Promise<unknown> | null = null;
  return {
    title,
    prepare: async () => {
      if (photoNamesIn(folder).length < firstPlates.length) {
        rendering ??= render(generator, folder).finally(() => {
          rendering = null;
        });
        await rendering;
      }
      return seriesIn(folder);
    },
  };
}

async function render(generator: string, folder: string): Promise<void> {
  const { renderDemoSeries } = (await import(/* @vite-ignore */ pathToFileURL(generator).href)) as Generator;
  await renderDemoSeries({ outDir: folder, numbers: firstPlates, scale: firstScale });
}

function seriesIn(folder: string): DemoSeries {
  const photos = photoNamesIn(folder).map((name) => ({ name, path: join(folder, name) }));
  return { title, folder, photos };
}

function photoNamesIn(folder: string): string[] {
  try {
    return readdirSync(folder).filter(isPhotoName).sort();
  } catch {
    return [];
  }
}
