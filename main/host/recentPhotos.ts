import { access } from 'node:fs/promises';
import { basename, dirname, join } from 'node:path';
import { z } from 'zod';
import type { Recent } from './api/hostCommands.ts';
import { readJsonFile, writeJsonFile } from './jsonFile.ts';

const maximumRecents = 24;

const fileSchema = z.object({
  format: z.literal('oxgall-recents'),
  schema: z.literal(1),
  recents: z.array(
    z.object({
      path: z.string(),
      widthPx: z.number(),
      heightPx: z.number(),
      openedAt: z.string(),
      frames: z.number().optional(),
    }),
  ),
});

type Stored = z.infer<typeof fileSchema>['recents'][number];

/** The photos and series opened last, newest first, kept across sessions. */
export class RecentPhotos {
  readonly #file: string;
  #recents: Promise<Stored[]> | null = null;
  /** Writes follow one another, so that an older list never lands on a newer one. */
  #writing: Promise<void> = Promise.resolve();

  constructor(dataFolder: string) {
    this.#file = join(dataFolder, 'recents.json');
  }

  async list(): Promise<Recent[]> {
    const recents = await this.#load();
    return Promise.all(
      recents.map(async (recent) => ({
        ...recent,
        name: basename(recent.path),
        folder: dirname(recent.path),
        present: await isThere(recent.path),
      })),
    );
  }

  /** @param opened a photo with its size, or a folder with the number of its photos */
  add(
    opened: { path: string; widthPx: number; heightPx: number } | { path: string; frames: number },
  ): Promise<void> {
    const { path } = opened;
    const size =
      'frames' in opened
        ? { widthPx: 0, heightPx: 0, frames: opened.frames }
        : { widthPx: opened.widthPx, heightPx: opened.heightPx };
    const added = { path, ...size, openedAt: new Date().toISOString() };
    return this.#change((recents) =>
      [added, ...recents.filter((recent) => recent.path !== path)].slice(0, maximumRecents),
    );
  }

  forget(path: string): Promise<void> {
    return this.#change((recents) => recents.filter((recent) => recent.path !== path));
  }

  /** Waits until the list is on the disk. */
  async flush(): Promise<void> {
    await this.#writing;
  }

  #load(): Promise<Stored[]> {
    this.#recents ??= readJsonFile(this.#file, fileSchema).then((file) => file?.recents ?? []);
    return this.#recents;
  }

  #change(change: (recents: Stored[]) => Stored[]): Promise<void> {
    this.#writing = this.#writing.then(async () => {
      const recents = change(await this.#load());
      this.#recents = Promise.resolve(recents);
      const file: z.infer<typeof fileSchema> = { format: 'oxgall-recents', schema: 1, recents };
      // A list that cannot be kept is no reason to stop work.
      await writeJsonFile(this.#file, file).catch(() => undefined);
    });
    return this.#writing;
  }
}

async function isThere(path: string): Promise<boolean> {
  return access(path).then(
    () => true,
    () => false,
  );
}
