import { availableParallelism } from 'node:os';
import { instantiateKernels, type Kernels } from '../../core/kernels/module.ts';
import type { Parameters } from '../../core/parameters/table.ts';
import type { BodyWindow } from '../../core/pipeline/jobs.ts';
import type { DecodedPhoto, Rect, Strata } from '../../core/pixels/photo.ts';
import { BandComposer } from './bandComposer.ts';
import { BodyPainter } from './bodyPainter.ts';
import type {
  BandOptions,
  ComposedPicture,
  Engine,
  EnginePhoto,
  OpenOptions,
  PaintedBand,
  PaintOptions,
  PaintReview,
  RowSource,
  StageTimes,
} from './engineApi.ts';
import { groundOf } from './ground.ts';
import { HeldPhoto } from './heldPhoto.ts';
import { loadKernelModule, paintWorkerUrl } from './kernelFiles.ts';
import { LinePainter } from './linePainter.ts';
import { insideOrThrow, type TileSize } from './regions.ts';
import { ReliefPainter } from './reliefPainter.ts';
import { SharedHeap } from './sharedHeap.ts';
import { type StrataOrder, type StrataPainters, StrataPainting } from './strataPainting.ts';
import { TableStore } from './tableStore.ts';
import { WorkerPool } from './workerPool.ts';

/** Levels of more pixels are not kept whole, 16 bytes a pixel, but made again by each painting that reads them. */
const defaultWholeLevelPixels = 9_000_000;
/**
 * Rows of a band: two tiles at the finest level, half a tile at the third. Halos are kept from one band to the next,
 * so a higher one would gain little.
 */
const defaultBandRows = 512;
/** Tiles of half a thousand pixels: their halo costs little, their rows fit the second-level cache. */
const defaultTileSize: TileSize = { widthPx: 512, heightPx: 256 };

export interface EngineOptions {
  /** Worker threads; as many as the machine has processors unless given. */
  workers?: number;
  /** Lets a window of the same machine go first: painting then takes what is left. */
  givesWay?: boolean;
  /** How pictures are cut; both even. Any size gives the same pixels. */
  tileSize?: TileSize;
  /** Coarse levels of more pixels are made as they are read; any number gives the same pixels. */
  wholeLevelPixels?: number;
}

/** Starts an engine with its workers. */
export async function createEngine(options: EngineOptions = {}): Promise<Engine> {
  const module = await loadKernelModule();
  const heap = new SharedHeap();
  const kernels = await instantiateKernels(module, heap.memory);
  const pool = await WorkerPool.start(
    options.workers ?? availableParallelism(),
    paintWorkerUrl(),
    module,
    heap,
    options.givesWay,
  );
  return new PaintEngine(pool, heap, kernels, options);
}

class PaintEngine implements Engine {
  readonly #painters: StrataPainters;
  readonly #kernels: Kernels;
  readonly #tables: TableStore;
  readonly #wholeLevelPixels: number;
  #paintings = 0;

  constructor(
    pool: WorkerPool,
    heap: SharedHeap,
    kernels: Kernels,
    { tileSize = defaultTileSize, wholeLevelPixels = defaultWholeLevelPixels }: EngineOptions,
  ) {
    this.#kernels = kernels;
    this.#tables = new TableStore(pool, heap, kernels);
    this.#wholeLevelPixels = wholeLevelPixels;
    this.#painters = {
      pool,
      heap,
      body: new BodyPainter(pool, heap, kernels, this.#tables, tileSize),
      line: new LinePainter(pool, heap, kernels, tileSize),
      relief: new ReliefPainter(pool, heap, kernels, tileSize),
    };
  }

  get workers(): number {
    return this.#painters.pool.size;
  }

  async open(photo: DecodedPhoto, options: OpenOptions = {}): Promise<EnginePhoto> {
    return this.#take(HeldPhoto.ofPixels(photo, this.#painters.heap, this.#wholeLevelPixels), options);
  }

  async openRows(source: RowSource, options: OpenOptions = {}): Promise<EnginePhoto> {
    return this.#take(HeldPhoto.ofRows(source, this.#painters.heap, this.#wholeLevelPixels), options);
  }

  async #take(held: HeldPhoto, { signal, toneMap }: OpenOptions): Promise<EnginePhoto> {
    const { pool } = this.#painters;
    try {
      await held.use(async () => {
        if (toneMap) await held.mapTones(toneMap, this.#kernels, pool, signal);
        await held.measureNoise(pool, signal);
      });
      return held;
    } catch (error) {
      held.close();
      throw error;
    }
  }

  paintStrata(
    photo: EnginePhoto,
    parameters: Parameters,
    where: { level: number; region?: Rect },
    options: PaintOptions = {},
  ): Promise<{ strata: Strata; times: StageTimes }> {
    const held = photo as HeldPhoto;
    const { level } = where;
    const size = held.levels[level];
    const region = insideOrThrow(where.region ?? { xPx: 0, yPx: 0, ...size }, size);
    const order = { held, parameters, level, region, wantsAll: true };
    return this.#painting(held, order, options, async (painting) => {
      painting.start();
      const { body, line, relief } = await painting.layers(region.yPx, region.yPx + region.heightPx);
      const { buffer } = this.#painters.heap.memory;
      const count = region.widthPx * region.heightPx;
      const layers = {
        body: croppedBody(buffer, body, region),
        line: new Uint8Array(buffer, line, count).slice(),
        relief: relief ? new Uint8Array(buffer, relief, count).slice() : null,
      };
      const ground = await groundOf(held, level, region, this.#painters, options.signal);
      const { widthPx, heightPx } = region;
      const strata: Strata = { widthPx, heightPx, ground, groundChannels: held.channels, ...layers };
      return { strata, times: painting.account() };
    });
  }

  async paintPicture(
    photo: EnginePhoto,
    parameters: Parameters,
    options: PaintOptions & { depth?: 8 | 16; review?: PaintReview } = {},
  ): Promise<ComposedPicture> {
    const held = photo as HeldPhoto;
    for (let tried = parameters; ; ) {
      const made = await this.#paintAndCompose(held, tried, options);
      if (typeof made !== 'number') return made;
      tried = { ...tried, 'body.hold': made };
    }
  }

  /** A composed picture, or the hold that its review would rather have it painted with. */
  #paintAndCompose(
    held: HeldPhoto,
    parameters: Parameters,
    { depth, review, ...options }: PaintOptions & { depth?: 8 | 16; review?: PaintReview },
  ): Promise<ComposedPicture | number> {
    const { heap } = this.#painters;
    const order = { ...wholePicture(held, parameters), wantsAll: review !== undefined };
    return this.#painting<ComposedPicture | number>(held, order, options, async (painting) => {
      const composing = await BandComposer.begin(painting, depth ?? held.depth);
      let out = 0;
      try {
        if (review) {
          const hold = await review.body(await painting.wholeBody());
          options.signal?.throwIfAborted();
          if (hold !== null) return hold;
          painting.chooseThreshold = (responses) => review.ink(responses);
        }
        out = heap.allocate(composing.bytesOf(held.heightPx));
        await composing.compose(0, held.heightPx, out);
      } catch (error) {
        heap.free(out);
        throw error;
      } finally {
        composing.close();
      }
      const pixels = composing.view(out, held.heightPx);
      return { pixels, times: painting.account(), release: () => heap.free(out) };
    });
  }

  paintBands(
    photo: EnginePhoto,
    parameters: Parameters,
    receive: (band: PaintedBand) => Promise<void> | void,
    { onProgress, depth, bandRows = defaultBandRows, withStrata, ...options }: BandOptions = {},
  ): Promise<StageTimes> {
    const held = photo as HeldPhoto;
    const { heap } = this.#painters;
    let hasBegun = false;
    // Before the first band the coarse levels tell how far the whole is; then the bands do.
    const before = (fraction01: number) => hasBegun || onProgress?.(fraction01);
    const inner: PaintOptions = { ...options, onProgress: onProgress && before };
    return this.#painting(held, wholePicture(held, parameters), inner, async (painting) => {
      hasBegun = true;
      const composing = await BandComposer.begin(painting, depth ?? held.depth);
      const out = heap.allocate(composing.bytesOf(Math.min(bandRows, held.heightPx)));
      try {
        for (let top = 0; top < held.heightPx; top += bandRows) {
          const rowCount = Math.min(bandRows, held.heightPx - top);
          await composing.compose(top, top + rowCount, out);
          const strata = withStrata ? composing.strata(rowCount) : undefined;
          await receive({ topRow: top, rowCount, pixels: composing.view(out, rowCount), strata });
          options.signal?.throwIfAborted();
          const done = (top + rowCount) / held.heightPx;
          onProgress?.(painting.coarseShare01 + (1 - painting.coarseShare01) * done);
        }
      } finally {
        composing.close();
        heap.free(out);
      }
      return painting.account();
    });
  }

  async close(): Promise<void> {
    await this.#painters.pool.close();
  }

  /** Runs a painting and gives back what it held at the end, whatever happens. */
  #painting<T>(
    held: HeldPhoto,
    order: StrataOrder,
    options: PaintOptions,
    work: (painting: StrataPainting) => Promise<T>,
  ): Promise<T> {
    return held.use(async () => {
      this.#paintings++;
      let painting: StrataPainting | null = null;
      try {
        painting = await StrataPainting.begin(this.#painters, order, options);
        return await work(painting);
      } finally {
        painting?.close();
        this.#paintings--;
        if (this.#paintings === 0) this.#tables.trim();
      }
    });
  }
}

function wholePicture(held: HeldPhoto, parameters: Parameters): StrataOrder {
  const region = { xPx: 0, yPx: 0, widthPx: held.widthPx, heightPx: held.heightPx };
  return { held, parameters, level: 0, region, wantsAll: false };
}

function croppedBody(buffer: ArrayBufferLike, body: BodyWindow, region: Rect): Uint16Array {
  const rowSamples = region.widthPx * 3;
  const to = new Uint16Array(rowSamples * region.heightPx);
  for (let y = 0; y < region.heightPx; y++) {
    const first = (region.yPx - body.yPx + y) * body.widthPx + region.xPx - body.xPx;
    to.set(new Uint16Array(buffer, body.pointer + first * 6, rowSamples), y * rowSamples);
  }
  return to;
}
