import { defaultPrintLongEdgeMm } from '../../core/parameters/lengths.ts';
import type { Parameters } from '../../core/parameters/table.ts';
import { planBody } from '../../core/pipeline/bodyPlan.ts';
import type { BodyWindow } from '../../core/pipeline/jobs.ts';
import { type LinePlan, lineHaloPx, planLine } from '../../core/pipeline/linePlan.ts';
import { planRelief, type ReliefPlan, reliefHaloPx } from '../../core/pipeline/reliefPlan.ts';
import type { Rect } from '../../core/pixels/photo.ts';
import type { BodyPainter } from './bodyPainter.ts';
import type { BodyRows } from './bodyRows.ts';
import type { PaintOptions, StageTimes } from './engineApi.ts';
import type { HeldPhoto } from './heldPhoto.ts';
import type { LinePainter } from './linePainter.ts';
import { PaintingMemory } from './paintingMemory.ts';
import { PhotoRows } from './photoRows.ts';
import { grownInside } from './regions.ts';
import type { ReliefPainter } from './reliefPainter.ts';
import type { SharedHeap } from './sharedHeap.ts';
import type { RowReader } from './slidingRows.ts';
import type { WorkerPool } from './workerPool.ts';

/** Who paints. */
export interface StrataPainters {
  pool: WorkerPool;
  heap: SharedHeap;
  body: BodyPainter;
  line: LinePainter;
  relief: ReliefPainter;
}

/** What is painted. */
export interface StrataOrder {
  held: HeldPhoto;
  parameters: Parameters;
  level: number;
  /** Inside the level. */
  region: Rect;
  /**
   * Also the body and the line that the parameters' strengths hide: a preview may show them later without asking.
   */
  wantsAll: boolean;
}

/** The layers of some rows; good until the next rows are painted. */
export interface PaintedLayers {
  /** Covers the halos of line and relief too, where they lie inside the picture; pointer 0 where there is none. */
  body: BodyWindow;
  /** One byte a pixel, or 0. */
  line: number;
  relief: number;
}

/**
 * One painting of a region, row by row from the top or all at once: body, line and relief, each from the rows of
 * the others that it needs. Everything it holds goes back with `close`.
 */
export class StrataPainting {
  readonly times: StageTimes = { grainMs: 0, bodyMs: 0, lineMs: 0, reliefMs: 0, composeMs: 0 };
  readonly #memory: PaintingMemory;
  readonly #photoRows: PhotoRows;
  readonly #linePlan: LinePlan | null;
  readonly #reliefPlan: ReliefPlan | null;
  #body: BodyRows | null = null;
  /** What the line is drawn from where that is the photo. */
  #lineSource: RowReader | null = null;
  #line = 0;
  #relief = 0;
  #layerPixels = 0;
  /** Chooses the ink threshold in place of the plan's, once the line's responses are known. */
  chooseThreshold: ((responses: readonly number[]) => number) | null = null;

  private constructor(
    readonly painters: StrataPainters,
    readonly order: StrataOrder,
    readonly options: PaintOptions,
  ) {
    const { held, parameters, level, wantsAll } = order;
    const scale = this.#scale;
    this.#memory = new PaintingMemory(painters.heap);
    this.#photoRows = new PhotoRows(held, painters.pool, painters.heap, options.signal);
    const wantsLine = wantsAll || parameters['line.strength'] > 0;
    this.#linePlan = wantsLine ? planLine(parameters, scale, level) : null;
    this.#reliefPlan = parameters['relief.strength'] > 0 ? planRelief(parameters, scale, level) : null;
  }

  /** Paints what has to be there before the first row: coarse levels and tables. */
  static async begin(
    painters: StrataPainters,
    order: StrataOrder,
    options: PaintOptions,
  ): Promise<StrataPainting> {
    const painting = new StrataPainting(painters, order, options);
    try {
      await painting.#begin();
      return painting;
    } catch (error) {
      painting.close();
      throw error;
    }
  }

  get #scale() {
    const { printLongEdgeMm = defaultPrintLongEdgeMm } = this.options;
    return { longEdgePx: this.order.held.longEdgePx, printLongEdgeMm };
  }

  /** Pixels of body that line and relief read around what they are made for. */
  get #haloPx(): number {
    const line = this.#linePlan?.source === 'body' ? lineHaloPx(this.#linePlan) : 0;
    return Math.max(line, this.#reliefPlan ? reliefHaloPx(this.#reliefPlan) : 0);
  }

  async #begin(): Promise<void> {
    const { held, parameters, level, region, wantsAll } = this.order;
    const { signal } = this.options;
    const wantsBody = wantsAll || parameters['body.strength'] > 0 || this.#haloPx > 0;
    const startMs = performance.now();
    // What is held whole is made first: it counts as grain.
    await this.#photoRows.level(level);
    const bodyStartMs = performance.now();
    this.times.grainMs += bodyStartMs - startMs;
    if (wantsBody) {
      const plan = planBody(parameters, this.#scale, level, held.noiseFloor);
      const around = grownInside(region, this.#haloPx, held.levels[level]);
      this.#body = await this.painters.body.rows(held, this.#photoRows, plan, level, around, {
        signal,
        onProgress: this.#stage('body'),
      });
    }
    if (this.#linePlan?.source === 'photo')
      this.#lineSource = await this.painters.line.reader(
        held,
        this.#photoRows,
        this.#linePlan,
        level,
        region,
      );
    this.times.bodyMs += performance.now() - bodyStartMs;
  }

  /** Share of the body that was painted before the first row. */
  get coarseShare01(): number {
    return this.#body?.coarseShare01 ?? 0;
  }

  /** A reader of the painted level itself, from the region's first row; before any row is painted. */
  async readSource(): Promise<RowReader> {
    return (await this.#photoRows.level(this.order.level)).reader(this.order.region.yPx);
  }

  /** Has to be called when all readers are known. */
  start(): void {
    this.#photoRows.begin();
  }

  /** Paints the body of the whole picture; a view, good until anything else is painted. */
  async wholeBody(): Promise<Uint16Array> {
    const { widthPx, heightPx } = this.order.region;
    const startMs = performance.now();
    await this.#body!.need(0, heightPx);
    this.times.bodyMs += performance.now() - startMs;
    return new Uint16Array(
      this.painters.heap.memory.buffer,
      this.#body!.window.pointer,
      widthPx * heightPx * 3,
    );
  }

  /** Paints the rows of the region from `top` to `bottom` − 1; rows follow one another. */
  async layers(top: number, bottom: number): Promise<PaintedLayers> {
    const { held, level, region } = this.order;
    const { signal } = this.options;
    const rows: Rect = { ...region, yPx: top, heightPx: bottom - top };
    this.#reserve(rows.widthPx * rows.heightPx);
    const startMs = performance.now();
    const around = grownInside(rows, this.#haloPx, held.levels[level]);
    await this.#body?.need(around.yPx, around.yPx + around.heightPx);
    const body = this.#body?.window ?? { pointer: 0, xPx: 0, yPx: 0, widthPx: 0 };
    const bodyEndMs = performance.now();
    if (this.#linePlan)
      await this.painters.line.paint(held, this.#linePlan, level, rows, body, this.#lineSource, this.#line, {
        signal,
        onProgress: this.#stage('line'),
        chooseThreshold: this.chooseThreshold,
      });
    const lineEndMs = performance.now();
    if (this.#reliefPlan)
      await this.painters.relief.paint(held, this.#reliefPlan, level, rows, body, this.#relief, {
        signal,
        onProgress: this.#stage('relief'),
      });
    this.times.bodyMs += bodyEndMs - startMs;
    this.times.lineMs += lineEndMs - bodyEndMs;
    this.times.reliefMs += performance.now() - lineEndMs;
    return { body, line: this.#line, relief: this.#relief };
  }

  /** Room for the layers of one pixel each; bands are of one size but for the last, which is smaller. */
  #reserve(pixels: number): void {
    if (pixels <= this.#layerPixels) return;
    this.#memory.release();
    this.#layerPixels = pixels;
    if (this.#linePlan) this.#line = this.#memory.allocate(pixels);
    if (this.#reliefPlan) this.#relief = this.#memory.allocate(pixels);
  }

  /** The times so far; the grain's share of the body is told apart by the workers' own account. */
  account(): StageTimes {
    const { grainMs, totalMs } = this.#body?.times ?? { grainMs: 0, totalMs: 0 };
    const share = grainMs / Math.max(1, totalMs);
    const { bodyMs, ...others } = this.times;
    return { ...others, grainMs: others.grainMs + bodyMs * share, bodyMs: bodyMs * (1 - share) };
  }

  #stage(name: 'body' | 'line' | 'relief') {
    const { onProgress } = this.options;
    return onProgress && ((fraction01: number) => onProgress(fraction01, name));
  }

  close(): void {
    this.#body?.close();
    this.#photoRows.close();
    this.#memory.release();
  }
}
