import type { Kernels } from '../../core/kernels/module.ts';
import { type BodyWindow, evenUp, type InkJob, type LineJob } from '../../core/pipeline/jobs.ts';
import { edgeEmphasis, type LinePlan, streamlineStepPx } from '../../core/pipeline/linePlan.ts';
import { lineRegion, lineScratchBytes } from '../../core/pipeline/lineTile.ts';
import type { Rect } from '../../core/pixels/photo.ts';
import { countCoverage, highestThreshold, softPen, softPhi } from '../../core/series/inkHistogram.ts';
import type { HeldPhoto } from './heldPhoto.ts';
import type { PhotoRows } from './photoRows.ts';
import { cutIntoTiles, type TileSize } from './regions.ts';
import type { SharedHeap } from './sharedHeap.ts';
import type { RowReader } from './slidingRows.ts';
import type { WorkerPool } from './workerPool.ts';

export interface LineOptions {
  signal?: AbortSignal;
  onProgress?: (fraction01: number) => void;
  /** Chooses ε in place of the plan's, from the line's responses. */
  chooseThreshold?: ((responses: readonly number[]) => number) | null;
}

/** Draws ink lines: S at the line's own level, then coverage at the painted one. */
export class LinePainter {
  constructor(
    readonly pool: WorkerPool,
    readonly heap: SharedHeap,
    readonly kernels: Kernels,
    readonly tileSize: TileSize,
  ) {}

  /** What a line that is drawn from the photo reads. */
  async reader(
    photo: HeldPhoto,
    levels: PhotoRows,
    plan: LinePlan,
    level: number,
    region: Rect,
  ): Promise<RowReader> {
    const shift = shiftFor(plan, photo, level);
    const area = lineRegion(region, shift, photo.levels[level]);
    return (await levels.level(level + shift)).reader(area.yPx - readHaloPx(plan));
  }

  /**
   * @param body the painted body, which covers the region and the line's halo around it; not read where the plan
   *   draws from the photo
   * @param fromPhoto what `reader` gave where it does
   * @param line receives coverage, one byte a pixel of the region
   */
  async paint(
    photo: HeldPhoto,
    plan: LinePlan,
    level: number,
    region: Rect,
    body: BodyWindow,
    fromPhoto: RowReader | null,
    line: number,
    options: LineOptions = {},
  ): Promise<void> {
    const { chooseThreshold, ...run } = options;
    const picture = photo.levels[level];
    const shift = shiftFor(plan, photo, level);
    const area = lineRegion(region, shift, picture);
    const haloPx = readHaloPx(plan);
    await fromPhoto?.need(area.yPx - haloPx, evenUp(area.yPx + area.heightPx) + haloPx);
    const tables = this.#makeTables(plan);
    const field = this.heap.allocate(area.widthPx * area.heightPx * 4);
    try {
      const job: LineJob = {
        kind: 'line',
        grid: cutIntoTiles(area, this.tileSize),
        pictureWidthPx: picture.widthPx,
        pictureHeightPx: picture.heightPx,
        shift,
        body: fromPhoto ? null : body,
        photo: fromPhoto?.picture ?? null,
        // Where no ink can come S is not worked out.
        plan: chooseThreshold ? { ...plan, threshold: highestThreshold(plan.threshold) } : plan,
        tables,
        out: field,
      };
      await this.pool.run(job, { ...run, scratchBytes: lineScratchBytes(job) });
      const ink: InkJob = {
        kind: 'ink',
        grid: { ...region, tileWidthPx: region.widthPx, tileHeightPx: 64 },
        source: field,
        sourceWidthPx: area.widthPx,
        sourceHeightPx: area.heightPx,
        originX: area.xPx,
        originY: area.yPx,
        shift,
        threshold: plan.threshold,
        phi: plan.phi,
        out: line,
      };
      const inkRun = { signal: options.signal, scratchBytes: 0 };
      if (chooseThreshold) {
        await this.pool.run({ ...ink, threshold: softPen['line.threshold'], phi: softPhi }, inkRun);
        const coverage = new Uint8Array(this.heap.memory.buffer, line, region.widthPx * region.heightPx);
        ink.threshold = chooseThreshold(countCoverage(coverage));
      }
      await this.pool.run(ink, inkRun);
    } finally {
      for (const pointer of [field, tables.gaussian, tables.dog, tables.streamline]) this.heap.free(pointer);
    }
  }

  /** A few hundred numbers: made here rather than on a worker. */
  #makeTables(plan: LinePlan): LineJob['tables'] {
    const tables = {
      gaussian: this.heap.allocate((2 * plan.tensorRadiusBlocks + 1) * 4),
      dog: this.heap.allocate(this.kernels.dogTableBytes(plan.sigmaPx)),
      streamline: this.heap.allocate((plan.streamlineSteps + 1) * 4),
    };
    this.kernels.gaussianTable(plan.tensorSigmaBlocks, plan.tensorRadiusBlocks, tables.gaussian);
    this.kernels.dogTable(plan.sigmaPx, edgeEmphasis, tables.dog);
    this.kernels.streamlineTable(
      plan.alongSigmaPx,
      streamlineStepPx,
      plan.streamlineSteps,
      tables.streamline,
    );
    return tables;
  }
}

/** The line's level is never beyond the coarsest. */
function shiftFor(plan: LinePlan, photo: HeldPhoto, level: number): number {
  return Math.min(plan.shift, photo.levels.length - 1 - level);
}

/** Pixels of the line's level that are read around what is drawn of it. */
function readHaloPx(plan: LinePlan): number {
  return plan.marginPx + plan.lumaHaloPx + 4;
}
