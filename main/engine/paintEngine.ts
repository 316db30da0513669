import { availableParallelism } from 'node:os';
import { blendModeNumber } from '../../core/composition/blendModes.ts';
import { compositionSettingsBytes, writeCompositionSettings } from '../../core/composition/compose.ts';
import { instantiateKernels, type Kernels } from '../../core/kernels/module.ts';
import { defaultPrintLongEdgeMm } from '../../core/parameters/lengths.ts';
import type { Parameters } from '../../core/parameters/table.ts';
import { planBody } from '../../core/pipeline/bodyPlan.ts';
import type { BodyWindow } from '../../core/pipeline/jobs.ts';
import { lineHaloPx, planLine } from '../../core/pipeline/linePlan.ts';
import { planRelief, reliefHaloPx } from '../../core/pipeline/reliefPlan.ts';
import type { DecodedPhoto, Rect, Strata } from '../../core/pixels/photo.ts';
import { BodyPainter, type TileSize } from './bodyPainter.ts';
import type {
  ComposedPicture,
  Engine,
  EnginePhoto,
  OpenOptions,
  PaintOptions,
  StageTimes,
} from './engineApi.ts';
import { HeldPhoto, rowGrid } from './heldPhoto.ts';
import { loadKernelModule, paintWorkerUrl } from './kernelFiles.ts';
import { LinePainter } from './linePainter.ts';
import { ReliefPainter } from './reliefPainter.ts';
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
  readonly #kernels: Kernels;
  readonly #tables: TableStore;
  readonly #body: BodyPainter;
  readonly #line: LinePainter;
  readonly #relief: ReliefPainter;
  #paintings = 0;

  constructor(pool: WorkerPool, heap: SharedHeap, kernels: Kernels, tileSize: TileSize) {
    this.#pool = pool;
    this.#heap = heap;
    this.#kernels = kernels;
    this.#tables = new TableStore(pool, heap, kernels);
    this.#body = new BodyPainter(pool, heap, kernels, this.#tables, tileSize);
    this.#line = new LinePainter(pool, heap, kernels, tileSize);
    this.#relief = new ReliefPainter(pool, heap, kernels, tileSize);
  }

  get workers(): number {
    return this.#pool.size;
  }

  async open(photo: DecodedPhoto, { signal, toneMap }: OpenOptions = {}): Promise<EnginePhoto> {
    const held = new HeldPhoto(photo, this.#heap);
    try {
      await held.use(async () => {
        if (toneMap) await held.mapTones(toneMap, this.#kernels, this.#pool, signal);
        await held.measureNoise(this.#pool, signal);
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
    return this.#painting(held, async (memory) => {
      const { body, line, relief, times } = await this.#paintLayers(
        held,
        parameters,
        level,
        region,
        memory,
        options,
        true,
      );
      const ground = await this.#ground(held, level, region, memory, options.signal);
      const { buffer } = this.#heap.memory;
      const count = region.widthPx * region.heightPx;
      const strata: Strata = {
        widthPx: region.widthPx,
        heightPx: region.heightPx,
        ground,
        groundChannels: held.channels,
        body: croppedBody(buffer, body, region),
        line: new Uint8Array(buffer, line, count).slice(),
        relief: relief ? new Uint8Array(buffer, relief, count).slice() : null,
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
      const layers = await this.#paintLayers(held, parameters, 0, region, memory, options, false);
      const { times } = layers;
      const depth = options.depth ?? held.depth;
      const outBytes = depth === 8 ? 1 : 2;
      const out = this.#heap.allocate(count * held.channels * outBytes);
      try {
        const startMs = performance.now();
        const strata = { body: layers.body.pointer, line: layers.line, relief: layers.relief };
        await this.#compose(held, parameters, strata, out, outBytes, memory, options);
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

  /**
   * Body, line and relief of a region. The body covers the halos of the others too, where they lie inside the
   * picture.
   * @param wantsAll also the body and the line that the parameters' strengths hide: a preview may show them later
   * without asking
   */
  async #paintLayers(
    held: HeldPhoto,
    parameters: Parameters,
    level: number,
    region: Rect,
    memory: PaintingMemory,
    { signal, onProgress, printLongEdgeMm = defaultPrintLongEdgeMm }: PaintOptions,
    wantsAll: boolean,
  ): Promise<{ body: BodyWindow; line: number; relief: number; times: StageTimes }> {
    const scale = { longEdgePx: held.longEdgePx, printLongEdgeMm };
    const bodyPlan = planBody(parameters, scale, level, held.noiseFloor);
    const linePlan = planLine(parameters, scale, level);
    const reliefPlan = planRelief(parameters, scale, level);
    const wantsRelief = parameters['relief.strength'] > 0;
    const wantsLine = wantsAll || parameters['line.strength'] > 0;
    const isDrawnFromBody = wantsLine && linePlan.source === 'body';
    const wantsBody = wantsAll || parameters['body.strength'] > 0 || isDrawnFromBody || wantsRelief;
    const haloPx = Math.max(
      isDrawnFromBody ? lineHaloPx(linePlan) : 0,
      wantsRelief ? reliefHaloPx(reliefPlan) : 0,
    );
    const around = evenAround(region, haloPx, held.levels[level]);
    const body: BodyWindow = {
      pointer: wantsBody ? memory.allocate(around.widthPx * around.heightPx * 6) : 0,
      xPx: around.xPx,
      yPx: around.yPx,
      widthPx: around.widthPx,
    };
    const line = wantsLine ? memory.allocate(region.widthPx * region.heightPx) : 0;
    const relief = wantsRelief ? memory.allocate(region.widthPx * region.heightPx) : 0;
    const stage = (name: 'body' | 'line' | 'relief') =>
      onProgress && ((fraction01: number) => onProgress(fraction01, name));

    const startMs = performance.now();
    await held.level(level, this.#pool, signal);
    const bodyStartMs = performance.now();
    const passes = wantsBody
      ? await this.#body.paint(held, bodyPlan, level, around, body.pointer, {
          signal,
          onProgress: stage('body'),
        })
      : { grainMs: 0, totalMs: 1 };
    const bodyEndMs = performance.now();
    if (wantsLine) {
      await this.#line.paint(held, linePlan, level, region, body, line, {
        signal,
        onProgress: stage('line'),
      });
    }
    const lineEndMs = performance.now();
    if (wantsRelief)
      await this.#relief.paint(held, reliefPlan, level, region, body, relief, {
        signal,
        onProgress: stage('relief'),
      });
    // The grain is found inside the painting passes; its share of the workers' time is its share of the clock.
    const grainShare = passes.grainMs / Math.max(1, passes.totalMs);
    const bodyMs = bodyEndMs - bodyStartMs;
    const times: StageTimes = {
      grainMs: bodyStartMs - startMs + bodyMs * grainShare,
      bodyMs: bodyMs * (1 - grainShare),
      lineMs: lineEndMs - bodyEndMs,
      reliefMs: performance.now() - lineEndMs,
      composeMs: 0,
    };
    return { body, line, relief, times };
  }

  async #ground(
    held: HeldPhoto,
    level: number,
    region: Rect,
    memory: PaintingMemory,
    signal?: AbortSignal,
  ): Promise<Uint8Array | Uint16Array> {
    if (level === 0) return copyOfPhoto(this.#heap.memory.buffer, held, region);
    const samples = region.widthPx * region.heightPx * held.channels;
    const out = memory.allocate(samples);
    const source = await held.level(level, this.#pool, signal);
    const grid = { ...region, tileWidthPx: region.widthPx, tileHeightPx: composeRows };
    await this.#pool.run(
      { kind: 'ground', grid, source, photo: held.photo, level, out, outStride: region.widthPx },
      { signal, scratchBytes: 0 },
    );
    return new Uint8Array(this.#heap.memory.buffer, out, samples).slice();
  }

  async #compose(
    held: HeldPhoto,
    parameters: Parameters,
    strata: { body: number; line: number; relief: number },
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
        relief: strata.relief,
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

function insideOrThrow(rect: Rect, size: { widthPx: number; heightPx: number }): Rect {
  const right = rect.xPx + rect.widthPx;
  const bottom = rect.yPx + rect.heightPx;
  const isInside = rect.xPx >= 0 && rect.yPx >= 0 && right <= size.widthPx && bottom <= size.heightPx;
  if (!isInside || rect.widthPx < 1 || rect.heightPx < 1) {
    throw new RangeError(
      `Expected a region inside ${size.widthPx} × ${size.heightPx} px, received ${rect.widthPx} × ${rect.heightPx} px at ${rect.xPx}, ${rect.yPx}`,
    );
  }
  return rect;
}

/** A region and `haloPx` around it, inside the picture, with an even corner. */
function evenAround(region: Rect, haloPx: number, size: { widthPx: number; heightPx: number }): Rect {
  const xPx = Math.max(0, region.xPx - haloPx) & ~1;
  const yPx = Math.max(0, region.yPx - haloPx) & ~1;
  const right = Math.min(size.widthPx, region.xPx + region.widthPx + haloPx);
  const bottom = Math.min(size.heightPx, region.yPx + region.heightPx + haloPx);
  return { xPx, yPx, widthPx: right - xPx, heightPx: bottom - yPx };
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

function copyOfPhoto(buffer: ArrayBuffer, held: HeldPhoto, region: Rect): Uint8Array | Uint16Array {
  const rowSamples = region.widthPx * held.channels;
  const Samples = held.photo.bytesPerSample === 1 ? Uint8Array : Uint16Array;
  const to = new Samples(rowSamples * region.heightPx);
  const pixelBytes = held.channels * Samples.BYTES_PER_ELEMENT;
  for (let y = 0; y < region.heightPx; y++) {
    const from = held.photo.pointer + ((region.yPx + y) * held.widthPx + region.xPx) * pixelBytes;
    to.set(new Samples(buffer, from, rowSamples), y * rowSamples);
  }
  return to;
}
