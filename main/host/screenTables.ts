import type { HostFiles } from './hostParts.ts';

/** So many photos' tables are remembered: more than may be open, few enough to be nothing (108 KB each). */
const mostTables = 8;

/** The tables that bring photos' colours to the screen, by path. */
export class ScreenTables {
  readonly #tables = new Map<string, Promise<Uint8Array | null>>();

  constructor(private readonly loadFiles: () => Promise<HostFiles>) {}

  /** Finds a photo's table anew, for it is being opened and may have changed; nobody waits for it yet. */
  begin(path: string): void {
    const table = this.loadFiles()
      .then((files) => files.readScreenTable(path))
      // A file that cannot be read is told of by whoever paints it.
      .catch(() => null);
    this.#tables.delete(path);
    this.#tables.set(path, table);
    const [oldest] = this.#tables.keys();
    if (this.#tables.size > mostTables) this.#tables.delete(oldest);
  }

  /** @returns null where the photo's numbers are shown as they are */
  async of(path: string): Promise<Uint8Array | null> {
    if (!this.#tables.has(path)) this.begin(path);
    return this.#tables.get(path)!;
  }
}
