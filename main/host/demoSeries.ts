import { existsSync, readdirSync } from 'node:fs';
import { join } from 'node:path';
import { fileURLToPath, pathToFileURL } from 'node:url';
import type { DemoSeries } from './api/hostCommands.ts';
import type { DemoPart, HostParts } from './hostParts.ts';
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
  listDemoSeries(): { number: number; name: string }[];
  renderDemoSeries(options: {
    outDir: string;
    numbers: number[];
    scale: number;
    workers?: number;
    onFrame?: () => void;
  }): Promise<unknown>;
}

/**
 * The demo series: plates that lie ready in a folder, or else plates that are rendered into the user's data folder
 * when they are first asked for: two to begin with, the rest while those are looked at.
 * @param dataFolder where rendered plates are kept
 * @param ready a folder of plates; where `OXGALL_DEMO` says, unless given
 */
export function findDemo(
  dataFolder: string,
  ready: string | undefined = process.env.OXGALL_DEMO,
): HostParts['demo'] {
  if (ready && photoNamesIn(ready).length > 0)
    return { title, prepare: async () => seriesIn(ready), coming: () => 0 };
  const generator = waysToRenderer
    .map((way) => fileURLToPath(new URL(`${way}render.mjs`, import.meta.url)))
    .find((path) => existsSync(path));
  return generator ? new RenderedDemo(generator, join(dataFolder, 'demo')) : null;
}

/** Plates that are rendered once. Invariant: one rendering at a time. */
class RenderedDemo implements DemoPart {
  readonly title = title;
  #first: Promise<unknown> | null = null;
  #rest: Promise<unknown> | null = null;
  #coming = 0;

  constructor(
    private readonly generatorPath: string,
    private readonly folder: string,
  ) {}

  async prepare(onPlate: () => void = () => undefined): Promise<DemoSeries> {
    const generator = (await import(/* @vite-ignore */ pathToFileURL(this.generatorPath).href)) as Generator;
    const there = new Set(photoNamesIn(this.folder));
    const missing = generator.listDemoSeries().filter(({ name }) => !there.has(name));
    const numbers = missing.map(({ number }) => number);
    const first = numbers.filter((number) => firstPlates.includes(number));
    if (first.length > 0 && !this.#rest) {
      this.#first ??= generator
        .renderDemoSeries({ outDir: this.folder, numbers: first, scale: firstScale })
        .finally(() => {
          this.#first = null;
        });
      await this.#first;
    }
    const rest = numbers.filter((number) => !firstPlates.includes(number));
    if (rest.length > 0) this.#renderRest(generator, rest, onPlate);
    return seriesIn(this.folder);
  }

  coming(folder: string): number {
    return folder === this.folder ? this.#coming : 0;
  }

  /** On one thread: the other is for whoever looks at the first plates. A failure leaves those that are there. */
  #renderRest(generator: Generator, numbers: number[], onPlate: () => void): void {
    if (this.#rest) return;
    this.#coming = numbers.length;
    const onFrame = () => {
      this.#coming -= 1;
      onPlate();
    };
    this.#rest = generator
      .renderDemoSeries({ outDir: this.folder, numbers, scale: firstScale, workers: 1, onFrame })
      .catch(() => undefined)
      .finally(() => {
        this.#rest = null;
        this.#coming = 0;
        onPlate();
      });
  }
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
