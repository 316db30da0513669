import type { SourcePicture } from '../../core/pipeline/jobs.ts';
import { halveScratchBytes } from '../../core/pipeline/runTile.ts';
import type { RowSource } from './engineApi.ts';
import type { Size } from './regions.ts';
import { rowGrid } from './regions.ts';
import type { SharedHeap } from './sharedHeap.ts';
import { type PictureRows, type RowReader, SlidingRows, wholeRows } from './slidingRows.ts';
import type { WorkerPool } from './workerPool.ts';

/** Side of a tile when a picture is halved. */
export const halveTilePx = 256;
/** Rows read at a time. */
const readRows = 256;
/** Rows halved at a time. */
const halvedRows = 128;
/** Rows of a band when colours are mapped. */
const toneRows = 32;

/** Tables of a tone map in the shared memory. */
export interface ToneTables {
  settings: number;
  table: number;
}

const whole = ({ widthPx, heightPx }: Size) => ({ xPx: 0, yPx: 0, widthPx, heightPx });

/** The photo itself, read from where its rows are kept, its tones mapped on the way where that is asked. */
export class SourceRows extends SlidingRows {
  constructor(
    readonly source: RowSource,
    readonly tone: ToneTables | null,
    readonly pool: WorkerPool,
    readonly heap: SharedHeap,
    readonly signal?: AbortSignal,
  ) {
    const bytesPerSample = tone ? 2 : source.bytesPerSample;
    super(heap, source.widthPx * source.channels * bytesPerSample, whole(source), readRows);
  }

  get picture(): SourcePicture {
    const { widthPx, heightPx, channels, bytesPerSample } = this.source;
    return {
      pointer: this.window.origin,
      widthPx,
      heightPx,
      channels,
      bytesPerSample: this.tone ? 2 : bytesPerSample,
    };
  }

  protected async produce(top: number, bottom: number): Promise<void> {
    const { window, source } = this;
    const to = window.pointer + (top - window.top) * window.rowBytes;
    if (!this.tone) return this.#read(top, bottom, to);
    const { widthPx, heightPx, channels, bytesPerSample } = source;
    const own = this.heap.allocate(widthPx * channels * bytesPerSample * (bottom - top));
    try {
      await this.#read(top, bottom, own);
      await this.pool.run(
        {
          kind: 'tone',
          grid: rowGrid(widthPx, bottom - top, toneRows),
          source: { pointer: own, widthPx, heightPx, channels, bytesPerSample },
          ...this.tone,
          out: to,
        },
        { signal: this.signal, scratchBytes: 0 },
      );
    } finally {
      this.heap.free(own);
    }
  }

  async #read(top: number, bottom: number, to: number): Promise<void> {
    const { widthPx, channels, bytesPerSample } = this.source;
    const bytes = widthPx * channels * bytesPerSample * (bottom - top);
    await this.source.readRows(
      top,
      bottom - top,
      new Uint8Array(this.heap.memory.buffer, to, bytes),
      this.signal,
    );
    this.signal?.throwIfAborted();
  }
}

/** A level of the pyramid, made from the next finer one. */
export class HalvedRows extends SlidingRows {
  #finer: RowReader | null = null;

  constructor(
    readonly size: Size,
    readonly finerRows: { reader(firstRow: number): RowReader },
    readonly pool: WorkerPool,
    heap: SharedHeap,
    readonly signal?: AbortSignal,
  ) {
    super(heap, size.widthPx * 16, whole(size), halvedRows);
  }

  get picture(): SourcePicture {
    return { pointer: this.window.origin, ...this.size, bytesPerSample: 0, channels: 4 };
  }

  /** Begins to read the finer level; after every reader of this one is known and before any row is asked for. */
  start(): void {
    if (this.hasReaders) this.#finer = this.finerRows.reader(2 * this.firstRow);
  }

  protected async produce(top: number, bottom: number): Promise<void> {
    const finer = this.#finer!;
    await finer.need(2 * top, 2 * bottom);
    const { widthPx } = this.size;
    await runHalving(
      this.pool,
      finer.picture,
      this.window,
      { ...this.size, top, bottom, widthPx },
      this.signal,
    );
  }
}

/** Halves rows top … bottom − 1 of the coarser picture into place. */
export async function runHalving(
  pool: WorkerPool,
  source: SourcePicture,
  to: { pointer: number; top: number },
  rows: { widthPx: number; top: number; bottom: number },
  signal?: AbortSignal,
): Promise<void> {
  const { widthPx, top, bottom } = rows;
  await pool.run(
    {
      kind: 'halve',
      grid: {
        xPx: 0,
        yPx: top,
        widthPx,
        heightPx: bottom - top,
        tileWidthPx: halveTilePx,
        tileHeightPx: halveTilePx,
      },
      source,
      destination: {
        kind: 'quads',
        pointer: to.pointer,
        strideElements: widthPx,
        originX: 0,
        originY: to.top,
      },
      strideElements: 2 * halveTilePx,
    },
    { signal, scratchBytes: halveScratchBytes(halveTilePx, halveTilePx) },
  );
}

/** What the levels of a photo are read from. */
export interface LevelSource {
  readonly levels: readonly Size[];
  /** Levels from here on, and perhaps the photo itself, are held whole; those between are made as they are read. */
  readonly firstWholeLevel: number;
  level(index: number, pool: WorkerPool, signal?: AbortSignal): Promise<SourcePicture>;
  /** The photo's rows where it is not held whole. */
  sourceRows(pool: WorkerPool, signal?: AbortSignal): SlidingRows | null;
}

/** The levels of a photo as one painting reads them: whole where they are held, else sliding along together. */
export class PhotoRows {
  readonly #rows = new Map<number, PictureRows>();

  constructor(
    readonly photo: LevelSource,
    readonly pool: WorkerPool,
    readonly heap: SharedHeap,
    readonly signal?: AbortSignal,
  ) {}

  /** All that are wanted have to be asked for before `begin`. */
  async level(index: number): Promise<PictureRows> {
    const known = this.#rows.get(index);
    if (known) return known;
    const made = await this.#make(index);
    this.#rows.set(index, made);
    return made;
  }

  async #make(index: number): Promise<PictureRows> {
    const { photo, pool, heap, signal } = this;
    const own = index === 0 ? photo.sourceRows(pool, signal) : null;
    if (own) return own;
    if (index === 0 || index >= photo.firstWholeLevel)
      return wholeRows(await photo.level(index, pool, signal));
    return new HalvedRows(photo.levels[index], await this.level(index - 1), pool, heap, signal);
  }

  /** Lets every level know from where it will be read; after this no reader may be added. */
  begin(): void {
    // Coarse to fine: the coarser ones are readers of the finer ones.
    for (let index = this.photo.levels.length - 1; index > 0; index--) {
      const rows = this.#rows.get(index);
      if (rows instanceof HalvedRows) rows.start();
    }
  }

  close(): void {
    for (const rows of this.#rows.values()) rows.close();
    this.#rows.clear();
  }
}
