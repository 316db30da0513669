import { evenUp, type SourcePicture } from '../../core/pipeline/jobs.ts';
import type { Rect } from '../../core/pixels/photo.ts';
import { RowWindow } from './rowWindow.ts';
import type { SharedHeap } from './sharedHeap.ts';

/** Reads the rows of a picture from top to bottom. */
export interface RowReader {
  /** Brings rows `from` to `to` − 1 to hand, clipped to the picture. What lies above `from` is not asked for again. */
  need(from: number, to: number): Promise<void>;
  /** The picture, of which the rows needed last may be read. Ask anew after every `need` of anything: rows move. */
  readonly picture: SourcePicture;
}

/** A picture that may be read by several readers, each at its own pace. */
export interface PictureRows {
  /** @param firstRow none above is ever needed by this reader */
  reader(firstRow: number): RowReader;
  close(): void;
}

/** A picture that is in the memory as a whole and is not ours to give back. */
export function wholeRows(picture: SourcePicture): PictureRows {
  return { reader: () => ({ need: async () => {}, picture }), close: () => {} };
}

/**
 * A picture that is made from top to bottom as its readers ask for it, of which only the rows are kept that
 * some reader may still ask for. Readers take turns: one `need` at a time.
 */
export abstract class SlidingRows implements PictureRows {
  protected readonly window: RowWindow;
  readonly #cursors: number[] = [];

  /**
   * @param region what will be made: whole rows where the picture is to be read, even corner
   * @param chunkRows rows are made in multiples of this, even; exactly those that are asked for where it is null
   */
  constructor(
    heap: SharedHeap,
    rowBytes: number,
    readonly region: Rect,
    readonly chunkRows: number | null = null,
  ) {
    this.window = new RowWindow(heap, rowBytes);
  }

  abstract get picture(): SourcePicture;

  /** Makes rows top … bottom − 1, for which the window has room. */
  protected abstract produce(top: number, bottom: number): Promise<void>;

  reader(firstRow: number): RowReader {
    const rows = this;
    const at = this.#cursors.push(this.#inside(firstRow)) - 1;
    return {
      async need(from, to) {
        rows.#cursors[at] = Math.max(rows.#cursors[at], rows.#inside(from));
        await rows.#reach(to);
      },
      get picture() {
        return rows.picture;
      },
    };
  }

  protected get hasReaders(): boolean {
    return this.#cursors.length > 0;
  }

  /** The first row that any reader may still ask for. */
  protected get firstRow(): number {
    return Math.min(...this.#cursors);
  }

  #inside(row: number): number {
    return Math.max(this.region.yPx, row & ~1);
  }

  /** By chunks, where there are any, so that what this is made from need not be at hand for more than a chunk. */
  async #reach(to: number): Promise<void> {
    const { chunkRows, region, window } = this;
    const wanted = chunkRows ? Math.ceil(to / chunkRows) * chunkRows : evenUp(to);
    const last = Math.min(region.yPx + region.heightPx, wanted);
    if (last <= window.bottom) return;
    window.slide(this.firstRow, last);
    while (window.bottom < last) {
      const top = window.bottom;
      const bottom = chunkRows ? Math.min(last, (Math.floor(top / chunkRows) + 1) * chunkRows) : last;
      await this.produce(top, bottom);
      window.bottom = bottom;
    }
  }

  close(): void {
    this.window.free();
  }
}
