import { createHash } from 'node:crypto';
import { access, readdir, rm } from 'node:fs/promises';
import { basename, join } from 'node:path';
import { z } from 'zod';
import { FileError } from '../files/fileError.ts';
import type { Draft, DraftNote } from './api/hostCommands.ts';
import { readJsonFile, writeJsonFile } from './jsonFile.ts';

const fileSchema = z.object({
  format: z.literal('oxgall-draft'),
  schema: z.literal(1),
  path: z.string(),
  keptAt: z.string(),
  draft: z.object({
    parameters: z.record(z.string(), z.union([z.string(), z.number()])),
    presetName: z.string().nullable(),
    view: z.record(z.string(), z.union([z.string(), z.number(), z.boolean(), z.null()])),
  }),
});

/** How many drafts the first screen is told of. */
const maximumNotes = 50;

interface Waiting {
  draft: Draft;
  done: Promise<string>;
}

/**
 * Unsaved changes, one small file for each photo in the program's own folder. Writes of one photo follow one
 * another; of several that wait, only the newest is written.
 */
export class Drafts {
  readonly #folder: string;
  readonly #writing = new Map<string, Promise<unknown>>();
  readonly #waiting = new Map<string, Waiting>();

  constructor(dataFolder: string) {
    this.#folder = join(dataFolder, 'drafts');
  }

  /**
   * Keeps a photo's unsaved changes.
   * @returns when they were on the disk, ISO 8601
   * @throws FileError where the program's own folder cannot be written
   */
  keep(path: string, draft: Draft): Promise<string> {
    const waiting = this.#waiting.get(path);
    if (waiting) {
      waiting.draft = draft;
      return waiting.done;
    }
    const entry = { draft } as Waiting;
    entry.done = this.#after(path, () => {
      this.#waiting.delete(path);
      return this.#write(path, entry.draft);
    });
    this.#waiting.set(path, entry);
    return entry.done;
  }

  async read(path: string): Promise<Draft | null> {
    await this.#writing.get(path)?.catch(() => undefined);
    const file = await readJsonFile(this.#fileOf(path), fileSchema);
    // The parameters are checked where they are used, against the table of that day.
    return file ? (file.draft as Draft) : null;
  }

  async drop(path: string): Promise<void> {
    await this.#after(path, () => rm(this.#fileOf(path), { force: true }));
  }

  /** Newest first. */
  async list(): Promise<DraftNote[]> {
    const names = await readdir(this.#folder).catch(() => [] as string[]);
    const ours = names.filter((name) => name.endsWith('.json'));
    const files = await Promise.all(ours.map((name) => readJsonFile(join(this.#folder, name), fileSchema)));
    const found = files.filter((file) => file !== null);
    found.sort((a, b) => b.keptAt.localeCompare(a.keptAt));
    return Promise.all(
      found.slice(0, maximumNotes).map(async ({ path, keptAt }) => ({
        path,
        name: basename(path),
        keptAt,
        present: await access(path).then(
          () => true,
          () => false,
        ),
      })),
    );
  }

  /** Waits until everything kept is on the disk. */
  async flush(): Promise<void> {
    await Promise.allSettled(this.#writing.values());
  }

  #after<T>(path: string, work: () => Promise<T>): Promise<T> {
    const earlier = this.#writing.get(path) ?? Promise.resolve();
    const running = earlier.catch(() => undefined).then(work);
    this.#writing.set(path, running);
    const forget = () => {
      if (this.#writing.get(path) === running) this.#writing.delete(path);
    };
    running.then(forget, forget);
    return running;
  }

  async #write(path: string, draft: Draft): Promise<string> {
    const keptAt = new Date().toISOString();
    const file = { format: 'oxgall-draft', schema: 1, path, keptAt, draft };
    try {
      await writeJsonFile(this.#fileOf(path), file);
    } catch (cause) {
      throw new FileError(
        this.#folder,
        'unsaved changes cannot be kept here',
        'Free some space or make the folder writable; until then save the painting before you close it.',
        { cause },
      );
    }
    return keptAt;
  }

  #fileOf(path: string): string {
    return join(this.#folder, `${createHash('sha256').update(path).digest('hex')}.json`);
  }
}
