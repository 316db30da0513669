import type { Kernels } from '../../core/kernels/module.ts';
import { type BodyPlan, leastFixedPointFloor, passHaloPx } from '../../core/pipeline/bodyPlan.ts';
import {
  type Destination,
  evenUp,
  type PaintJob,
  type SourcePicture,
  type TensorPlanes,
} from '../../core/pipeline/jobs.ts';
import { closingFloorShare } from '../../core/pipeline/paintTile.ts';
import { layOutScratch } from '../../core/pipeline/scratch.ts';
import type { Rect } from '../../core/pixels/photo.ts';
import { BodyRows, stackRows } from './bodyRows.ts';
import { CoarseLevel } from './coarseLevel.ts';
import type { HeldPhoto } from './heldPhoto.ts';
import type { PhotoRows } from './photoRows.ts';
import { cutIntoTiles, type TileSize } from './regions.ts';
import type { SharedHeap } from './sharedHeap.ts';
import type { TableStore, Tables } from './tableStore.ts';
import type { WorkerPool } from './workerPool.ts';

/** Milliseconds, summed over the workers. */
export interface PassTimes {
  grainMs: number;
  totalMs: number;
}

export interface BodyOptions {
  signal?: AbortSignal;
  onProgress?: (fraction01: number) => void;
}

/** One pass over a region of a level. */
export interface Pass {
  source: SourcePicture;
  region: Rect;
  destination: Destination;
  /** Coarser level to merge with; coats go over finished paint and have none. */
  coarse: SourcePicture | null;
  /** The coarser level's tensor, which flat areas take their orientation from. */
  orientation: TensorPlanes | null;
  /** Receives the tensor for the finer level. */
  tensorOut: TensorPlanes | null;
  noiseFloor: number;
}

/**
 * Noise floor of the coats as a factor of their level's: a coat is to join what lies close together. On six
 * photographs at 64 px it raised the share of flat pixels by .003 to .007.
 */
const coatFloorFactor = 1.5;

/**
 * Paints bodies: coarse levels first, each merged into the next finer one. The pixels of a level depend only on
 * the photo and the plan, so a region of the finest level equals the same region of the whole.
 */
export class BodyPainter {
  constructor(
    readonly pool: WorkerPool,
    readonly heap: SharedHeap,
    readonly kernels: Kernels,
    readonly tables: TableStore,
    readonly tileSize: TileSize,
  ) {}

  /**
   * Prepares to paint a region of `level` into a body stratum, row by row from the top. Coarse levels that are
   * held whole are painted now; larger ones slide along with the finest.
   * @param region even corner, inside the level
   * @param levels the photo as this painting reads it
   */
  async rows(
    photo: HeldPhoto,
    levels: PhotoRows,
    plan: BodyPlan,
    level: number,
    region: Rect,
    options: BodyOptions,
  ): Promise<BodyRows> {
    const times: PassTimes = { grainMs: 0, totalMs: 0 };
    const levelCount = Math.min(plan.levelCount, photo.levels.length - level);
    const firstWhole = Math.max(1, photo.firstWholeLevel - level);
    const progress = weighProgress(photo, plan, level, region, firstWhole, options.onProgress);
    const whole = await this.#wholeCoarse(
      photo,
      plan,
      level,
      { firstWhole, levelCount },
      { ...options, onProgress: progress.coarse },
      times,
    );
    const stack = new BodyRows(times, progress.coarseShare01, whole);
    try {
      const finest = { ...options, onProgress: progress.finest };
      const run = (pass: Pass, isFinest: boolean) =>
        this.#run(plan, pass, isFinest ? finest : { ...options, onProgress: undefined }, times);
      await stackRows(stack, {
        photo,
        levels,
        plan,
        level,
        region,
        haloPx: haloOf(plan),
        depths: Math.min(firstWhole, levelCount),
        whole,
        coatFloorFactor,
        heap: this.heap,
        run,
      });
      return stack;
    } catch (error) {
      stack.close();
      throw error;
    }
  }

  /** The finest of the coarse levels that are held whole, from what is kept or painted anew; null for none. */
  async #wholeCoarse(
    photo: HeldPhoto,
    plan: BodyPlan,
    level: number,
    { firstWhole, levelCount }: { firstWhole: number; levelCount: number },
    options: BodyOptions,
    times: PassTimes,
  ): Promise<CoarseLevel | null> {
    if (levelCount <= firstWhole) return null;
    const key = JSON.stringify([plan, level]);
    if (photo.kept?.key === key) return photo.kept.coarse.hold();
    let coarse: CoarseLevel | null = null;
    for (let depth = levelCount - 1; depth >= firstWhole; depth--) {
      const finer = await this.#paintCoarse(photo, plan, level, depth, coarse, options, times).finally(() =>
        coarse?.letGo(),
      );
      coarse = finer;
    }
    photo.dropKept();
    photo.kept = { key, coarse: coarse!.hold() };
    return coarse;
  }

  /** One level, all its coats, with its tensor. `depth` counts from the finest level of this painting. */
  async #paintCoarse(
    photo: HeldPhoto,
    plan: BodyPlan,
    level: number,
    depth: number,
    coarse: CoarseLevel | null,
    options: BodyOptions,
    times: PassTimes,
  ): Promise<CoarseLevel> {
    const source = await photo.level(level + depth, this.pool, options.signal);
    const { widthPx, heightPx } = source;
    const whole: Rect = { xPx: 0, yPx: 0, widthPx, heightPx };
    const [widthBlocks, heightBlocks] = [evenUp(widthPx) / 2, evenUp(heightPx) / 2];
    const tensor = {
      pointer: this.heap.allocate(widthBlocks * heightBlocks * 12),
      widthBlocks,
      heightBlocks,
    };
    let [to, spare] = [this.heap.allocate(widthPx * heightPx * 16), 0];
    try {
      if (plan.coats > 0) spare = this.heap.allocate(widthPx * heightPx * 16);
      const into = (pointer: number): Destination => ({
        kind: 'quads',
        pointer,
        strideElements: widthPx,
        originX: 0,
        originY: 0,
      });
      const common = { region: whole, orientation: coarse?.tensor ?? null, tensorOut: tensor };
      const levelFloor = plan.noiseFloor / 2 ** depth;
      const merged = coarse?.picture ?? null;
      const first = { ...common, source, destination: into(to), coarse: merged, noiseFloor: levelFloor };
      await this.#run(plan, first, options, times);
      for (let coat = 0; coat < plan.coats; coat++) {
        const paint: SourcePicture = { pointer: to, widthPx, heightPx, bytesPerSample: 0, channels: 4 };
        const noiseFloor = levelFloor * coatFloorFactor;
        const again = { ...common, source: paint, destination: into(spare), coarse: null, noiseFloor };
        await this.#run(plan, again, options, times);
        [to, spare] = [spare, to];
      }
      this.heap.free(spare);
      return new CoarseLevel(
        { pointer: to, widthPx, heightPx, bytesPerSample: 0, channels: 4 },
        tensor,
        this.heap,
      );
    } catch (error) {
      for (const pointer of [to, spare, tensor.pointer]) this.heap.free(pointer);
      throw error;
    }
  }

  async #run(plan: BodyPlan, pass: Pass, options: BodyOptions, times: PassTimes): Promise<void> {
    const grid = cutIntoTiles(pass.region, this.tileSize);
    const haloPx = haloOf(plan);
    // One stride for every pass of a plan: the bank's distances hold for it.
    const strideElements = this.tileSize.widthPx + 4 * haloPx;
    const leastFloor = pass.noiseFloor * (pass.coarse ? closingFloorShare : 1);
    const isFixedPoint = leastFloor >= leastFixedPointFloor;
    const tables: Tables = await this.tables.get(plan, strideElements, isFixedPoint, options.signal);
    const job: PaintJob = {
      kind: 'paint',
      grid,
      source: pass.source,
      destination: pass.destination,
      method: plan.method === 'multi-scale' ? 'grain-wise' : plan.method,
      coarse: pass.coarse,
      coarseTensor: pass.orientation,
      tensorOut: pass.tensorOut,
      haloPx,
      strideElements,
      isFixedPoint,
      bank: tables.bank,
      bilateralEntries: tables.bilateralEntries,
      mergeTable: tables.mergeTable,
      gaussianTable: tables.gaussianTable,
      radiusPx: plan.radiusPx,
      noiseFloor: pass.noiseFloor,
      crispness: plan.crispness,
      hold: plan.hold,
    };
    const scratchBytes = layOutScratch(this.kernels, job, 0).endBytes;
    const spent = await this.pool.run(job, {
      signal: options.signal,
      scratchBytes,
      onProgress: options.onProgress,
    });
    times.grainMs += spent.grainMs;
    times.totalMs += spent.totalMs;
  }
}

/** Halo of one smoothing. */
function haloOf(plan: BodyPlan): number {
  return plan.method === 'quadrant' || plan.method === 'bilateral'
    ? evenUp(Math.ceil(plan.radiusPx))
    : passHaloPx(plan);
}

/** Shares the progress between the coarse levels, pass by pass, and the finest. */
function weighProgress(
  photo: HeldPhoto,
  plan: BodyPlan,
  level: number,
  region: Rect,
  firstWhole: number,
  report?: (fraction01: number) => void,
): {
  coarseShare01: number;
  coarse?: (fraction01: number) => void;
  finest?: (fraction01: number) => void;
} {
  const { widthPx, heightPx } = photo.levels[level];
  const finestCost = 2 * region.widthPx * region.heightPx;
  // All levels together, from the first whole one on: a third more than that one alone.
  const coarsePixels = ((widthPx * heightPx) / 4 ** firstWhole) * (4 / 3);
  const coarseCost = plan.levelCount > firstWhole ? coarsePixels * (2 + plan.coats) : 0;
  const share = coarseCost / (coarseCost + finestCost);
  if (!report) return { coarseShare01: share };
  let done = 0;
  let last = 0;
  return {
    coarseShare01: share,
    coarse: (fraction01) => {
      // Passes follow one another; each starts at 0 again. Coarse passes are short, the first finer one dominates.
      if (fraction01 < last) done += (1 - done) * 0.4;
      last = fraction01;
      report(share * Math.min(1, done + (1 - done) * 0.4 * fraction01));
    },
    finest: (fraction01) => report(share + (1 - share) * fraction01),
  };
}
