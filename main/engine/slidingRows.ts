import type { SourcePicture } from '../../core/pipeline/jobs.ts';
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
   * @param chunkRows rows are made in multiples of this; even
   */
  constructor(
    heap: SharedHeap,
    rowBytes: number,
    readonly region: Rect,
    readonly chunkRows: number,
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

  /** The first row that any reader has asked to begin with. */
  protected get firstRow(): number {
    return Math.min(...this.#cursors);
  }

  #inside(row: number): number {
    return Math.max(this.region.yPx, row & ~1);
  }

  async #reach(to: number): Promise<void> {
    const wanted = Math.ceil(to / this.chunkRows) * this.chunkRows;
    const bottom = Math.min(this.region.yPx + this.region.heightPx, wanted);
    if (bottom <= this.window.bottom) return;
    this.window.slide(Math.min(...this.#cursors), bottom);
    await this.produce(this.window.bottom, bottom);
    this.window.bottom = bottom;
  }

  close(): void {
    this.window.free();
  }
}
