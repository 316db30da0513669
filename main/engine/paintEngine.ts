import { availableParallelism } from 'node:os';
import { blendModeNumber } from '../../core/composition/blendModes.ts';
import { compositionSettingsBytes, writeCompositionSettings } from '../../core/composition/compose.ts';
import { instantiateKernels, type Kernels } from '../../core/kernels/module.ts';
import { defaultPrintLongEdgeMm } from '../../core/parameters/lengths.ts';
import type { Parameters } from '../../core/parameters/table.ts';
import { planBody } from '../../core/pipeline/bodyPlan.ts';
import type { DecodedPhoto, Rect, Strata } from '../../core/pixels/photo.ts';
import { BodyPainter, type TileSize } from './bodyPainter.ts';
import type { ComposedPicture, Engine, EnginePhoto, PaintOptions, StageTimes } from './engineApi.ts';
import { HeldPhoto, rowGrid } from './heldPhoto.ts';
import { loadKernelModule, paintWorkerUrl } from './kernelFiles.ts';
import { SharedHeap } from './sharedHeap.ts';
import { TableStore } from './tableStore.ts';
import { WorkerPool } from './workerPool.ts';

/** Rows composed at a time. */
const composeRows = 64;
/** Tiles of half a thousand pixels: their halo costs little, their rows fit the second-level cache. */
const defaultTileSize: TileSize = { widthPx: 512, heightPx: 256 };

export interface EngineOptions {
  /** Worker threads; as many as the machine has processors unless given. */
  workers?: number;
  /** How pictures are cut; both even. Any size gives the same pixels. */
  tileSize?: TileSize;
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
  );
  return new PaintEngine(pool, heap, kernels, options.tileSize ?? defaultTileSize);
}

class PaintEngine implements Engine {
  readonly #pool: WorkerPool;
  readonly #heap: SharedHeap;
  readonly #tables: TableStore;
  readonly #body: BodyPainter;
  #paintings = 0;

  constructor(pool: WorkerPool, heap: SharedHeap, kernels: Kernels, tileSize: TileSize) {
    this.#pool = pool;
    this.#heap = heap;
    this.#tables = new TableStore(pool, heap, kernels);
    this.#body = new BodyPainter(pool, heap, kernels, this.#tables, tileSize);
  }

  get workers(): number {
    return this.#pool.size;
  }

  async open(photo: DecodedPhoto, { signal }: { signal?: AbortSignal } = {}): Promise<EnginePhoto> {
    const held = new HeldPhoto(photo, this.#heap);
    try {
      await held.use(() => held.measureNoise(this.#pool, signal));
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
    const asked = where.region ?? { xPx: 0, yPx: 0, ...size };
    const region = evenInside(asked, size);
    return this.#painting(held, async (memory) => {
      const count = region.widthPx * region.heightPx;
      const body = memory.allocate(count * 6);
      const line = memory.allocate(count);
      const times = await this.#paintLayers(held, parameters, level, region, { body, line }, options);
      const groundBytes = level === 0 && held.depth === 16 ? 2 : 1;
      const ground = memory.allocate(count * held.channels * groundBytes);
      await this.#makeGround(held, level, region, ground, options.signal);
      const crop = {
        x: asked.xPx - region.xPx,
        y: asked.yPx - region.yPx,
        width: asked.widthPx,
        height: asked.heightPx,
      };
      const copyU8 = (pointer: number, channels: number) =>
        cropped(
          new Uint8Array(this.#heap.memory.buffer, pointer, count * channels),
          region.widthPx,
          channels,
          crop,
        );
      const copyU16 = (pointer: number, channels: number) =>
        cropped(
          new Uint16Array(this.#heap.memory.buffer, pointer, count * channels),
          region.widthPx,
          channels,
          crop,
        );
      const strata: Strata = {
        widthPx: asked.widthPx,
        heightPx: asked.heightPx,
        ground: groundBytes === 2 ? copyU16(ground, held.channels) : copyU8(ground, held.channels),
        groundChannels: held.channels,
        body: copyU16(body, 3),
        line: copyU8(line, 1),
      };
      return { strata, times };
    });
  }

  paintPicture(
    photo: EnginePhoto,
    parameters: Parameters,
    options: PaintOptions & { depth?: 8 | 16 } = {},
  ): Promise<ComposedPicture> {
    const held = photo as HeldPhoto;
    return this.#painting(held, async (memory) => {
      const region: Rect = { xPx: 0, yPx: 0, widthPx: held.widthPx, heightPx: held.heightPx };
      const count = region.widthPx * region.heightPx;
      const body = memory.allocate(count * 6);
      const line = memory.allocate(count);
      const times = await this.#paintLayers(held, parameters, 0, region, { body, line }, options);
      const depth = options.depth ?? held.depth;
      const outBytes = depth === 8 ? 1 : 2;
      const out = this.#heap.allocate(count * held.channels * outBytes);
      try {
        const startMs = performance.now();
        await this.#compose(held, parameters, { body, line }, out, outBytes, memory, options);
        times.composeMs = performance.now() - startMs;
      } catch (error) {
        this.#heap.free(out);
        throw error;
      }
      const { buffer } = this.#heap.memory;
      const samples = count * held.channels;
      const pixels =
        outBytes === 1 ? new Uint8Array(buffer, out, samples) : new Uint16Array(buffer, out, samples);
      return { pixels, times, release: () => this.#heap.free(out) };
    });
  }

  async close(): Promise<void> {
    await this.#pool.close();
  }

  /** Body and line of a region, into memory that is there already. */
  async #paintLayers(
    held: HeldPhoto,
    parameters: Parameters,
    level: number,
    region: Rect,
    into: { body: number; line: number },
    { signal, onProgress, printLongEdgeMm = defaultPrintLongEdgeMm }: PaintOptions,
  ): Promise<StageTimes> {
    const scale = { longEdgePx: held.longEdgePx, printLongEdgeMm };
    const plan = planBody(parameters, scale, level, held.noiseFloor);
    const startMs = performance.now();
    await held.level(level, this.#pool, signal);
    const bodyStartMs = performance.now();
    const passes = await this.#body.paint(held, plan, level, region, into.body, {
      signal,
      onProgress: onProgress && ((fraction01) => onProgress(fraction01, 'body')),
    });
    const bodyEndMs = performance.now();
    // The grain is found inside the painting passes; its share of the workers' time is its share of the clock.
    const grainShare = passes.grainMs / Math.max(1, passes.totalMs);
    const bodyMs = bodyEndMs - bodyStartMs;
    return {
      grainMs: bodyStartMs - startMs + bodyMs * grainShare,
      bodyMs: bodyMs * (1 - grainShare),
      lineMs: performance.now() - bodyEndMs,
      composeMs: 0,
    };
  }

  async #makeGround(
    held: HeldPhoto,
    level: number,
    region: Rect,
    out: number,
    signal?: AbortSignal,
  ): Promise<void> {
    if (level === 0) {
      copyRows(this.#heap.memory.buffer, held, region, out);
      return;
    }
    const source = await held.level(level, this.#pool, signal);
    await this.#pool.run(
      {
        kind: 'ground',
        grid: { ...region, tileWidthPx: region.widthPx, tileHeightPx: composeRows },
        source,
        photo: held.photo,
        level,
        out,
        outStride: region.widthPx,
      },
      { signal, scratchBytes: 0 },
    );
  }

  async #compose(
    held: HeldPhoto,
    parameters: Parameters,
    strata: { body: number; line: number },
    out: number,
    outBytes: 1 | 2,
    memory: PaintingMemory,
    options: PaintOptions,
  ): Promise<void> {
    const settings = memory.allocate(compositionSettingsBytes);
    writeCompositionSettings(
      new Float32Array(this.#heap.memory.buffer, settings, compositionSettingsBytes / 4),
      parameters,
    );
    await this.#pool.run(
      {
        kind: 'compose',
        grid: rowGrid(held.widthPx, held.heightPx, composeRows),
        ground: held.photo,
        body: parameters['body.strength'] > 0 ? strata.body : 0,
        line: parameters['line.strength'] > 0 ? strata.line : 0,
        settings,
        blendMode: blendModeNumber[parameters['line.blend']],
        out,
        outBytesPerSample: outBytes,
        outChannels: held.channels,
      },
      {
        signal: options.signal,
        scratchBytes: 0,
        onProgress: options.onProgress && ((fraction01) => options.onProgress!(fraction01, 'compose')),
      },
    );
  }

  /** Runs a painting with memory of its own, given back at the end whatever happens. */
  #painting<T>(held: HeldPhoto, work: (memory: PaintingMemory) => Promise<T>): Promise<T> {
    return held.use(async () => {
      const memory = new PaintingMemory(this.#heap);
      this.#paintings++;
      try {
        return await work(memory);
      } finally {
        memory.release();
        this.#paintings--;
        if (this.#paintings === 0) this.#tables.trim();
      }
    });
  }
}

/** Pieces of shared memory that go back together. */
class PaintingMemory {
  readonly #pointers: number[] = [];
  constructor(readonly heap: SharedHeap) {}

  allocate(bytes: number): number {
    const pointer = this.heap.allocate(bytes);
    this.#pointers.push(pointer);
    return pointer;
  }

  release(): void {
    for (const pointer of this.#pointers.splice(0)) this.heap.free(pointer);
  }
}

/** The smallest rectangle around `rect` that starts at even coordinates. */
function evenInside(rect: Rect, size: { widthPx: number; heightPx: number }): Rect {
  const xPx = rect.xPx & ~1;
  const yPx = rect.yPx & ~1;
  if (
    rect.xPx < 0 ||
    rect.yPx < 0 ||
    rect.xPx + rect.widthPx > size.widthPx ||
    rect.yPx + rect.heightPx > size.heightPx
  ) {
    throw new RangeError(
      `Expected a region inside ${size.widthPx} × ${size.heightPx} px, received ${rect.widthPx} × ${rect.heightPx} px at ${rect.xPx}, ${rect.yPx}`,
    );
  }
  return { xPx, yPx, widthPx: rect.widthPx + (rect.xPx - xPx), heightPx: rect.heightPx + (rect.yPx - yPx) };
}

function cropped<T extends Uint8Array | Uint16Array>(
  from: T,
  widthPx: number,
  channels: number,
  crop: { x: number; y: number; width: number; height: number },
): T {
  const rowSamples = crop.width * channels;
  const to = (
    from.BYTES_PER_ELEMENT === 1
      ? new Uint8Array(rowSamples * crop.height)
      : new Uint16Array(rowSamples * crop.height)
  ) as T;
  for (let y = 0; y < crop.height; y++) {
    const start = ((crop.y + y) * widthPx + crop.x) * channels;
    to.set(from.subarray(start, start + rowSamples), y * rowSamples);
  }
  return to;
}

function copyRows(buffer: ArrayBufferLike, held: HeldPhoto, region: Rect, out: number): void {
  const bytes = new Uint8Array(buffer);
  const pixelBytes = held.channels * (held.depth / 8);
  const rowBytes = region.widthPx * pixelBytes;
  for (let y = 0; y < region.heightPx; y++) {
    const from = held.photo.pointer + ((region.yPx + y) * held.widthPx + region.xPx) * pixelBytes;
    bytes.copyWithin(out + y * rowBytes, from, from + rowBytes);
  }
}
