import type { ScreenSpace } from '../colour/screenTable.ts';
import type { HostFiles } from './hostParts.ts';

/** So many photos' tables are remembered: more than may be open, few enough to be nothing (216 KB each). */
const mostTables = 8;

/** How a photo's numbers come to a screen: through a table where there is one, and then in which space they are. */
export interface WayToScreen {
  table: Uint16Array | null;
  space: ScreenSpace;
}

/** The tables that bring photos' colours to the screen, by path. */
export class ScreenTables {
  readonly #tables = new Map<string, Promise<Uint16Array | null>>();

  constructor(private readonly loadFiles: () => Promise<HostFiles>) {}

  /** Finds a photo's table anew, for it is being opened and may have changed; nobody waits for it yet. */
  begin(path: string): void {
    const table = this.loadFiles()
      .then((files) => files.readScreenTable(path, 'srgb'))
      // A file that cannot be read is told of by whoever paints it.
      .catch(() => null);
    this.#tables.delete(path);
    this.#tables.set(path, table);
    const [oldest] = this.#tables.keys();
    if (this.#tables.size > mostTables) this.#tables.delete(oldest);
  }

  /** @returns null where the photo's numbers are sRGB as they are */
  async of(path: string): Promise<Uint16Array | null> {
    if (!this.#tables.has(path)) this.begin(path);
    return this.#tables.get(path)!;
  }

  /**
   * The way to a canvas. The two spaces that the browser knows stay as they are on any canvas: it converts them as it
   * draws, ten times as fast as a table. Other photos make use of a wide canvas.
   */
  async wayTo(path: string, screen: ScreenSpace): Promise<WayToScreen> {
    const table = await this.of(path);
    if (!table) return { table, space: 'srgb' };
    const files = await this.loadFiles();
    const wideTable = await files.readScreenTable(path, 'p3');
    if (!wideTable || screen === 'p3') return { table: wideTable, space: 'p3' };
    return { table, space: 'srgb' };
  }
}
