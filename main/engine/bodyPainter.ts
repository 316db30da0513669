import type { Kernels } from '../../core/kernels/module.ts';
import { type BodyPlan, leastFixedPointFloor, passHaloPx } from '../../core/pipeline/bodyPlan.ts';
import {
  type Destination,
  evenUp,
  type PaintJob,
  type SourcePicture,
  type TensorPlanes,
  type TileGrid,
} from '../../core/pipeline/jobs.ts';
import { closingFloorShare } from '../../core/pipeline/paintTile.ts';
import { layOutScratch } from '../../core/pipeline/scratch.ts';
import type { Rect } from '../../core/pixels/photo.ts';
import { CoarseLevel } from './coarseLevel.ts';
import type { HeldPhoto } from './heldPhoto.ts';
import type { SharedHeap } from './sharedHeap.ts';
import type { TableStore, Tables } from './tableStore.ts';
import type { WorkerPool } from './workerPool.ts';

/** How pictures are cut. Even numbers; any give the same pixels. */
export interface TileSize {
  widthPx: number;
  heightPx: number;
}

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
interface Pass {
  source: SourcePicture;
  region: Rect;
  destination: Destination;
  /** Coarser level to merge with; coats go over finished paint and have none. */
  coarse: CoarseLevel | null;
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
   * Paints a region of `level` into a body stratum.
   * @param region even corner, inside the level
   * @param body pointer to u16 × 3 for region.widthPx × region.heightPx
   */
  async paint(
    photo: HeldPhoto,
    plan: BodyPlan,
    level: number,
    region: Rect,
    body: number,
    options: BodyOptions = {},
  ): Promise<PassTimes> {
    const times: PassTimes = { grainMs: 0, totalMs: 0 };
    const progress = weighProgress(photo, plan, level, region, options.onProgress);
    const coarse = await this.#coarseLevelFor(
      photo,
      plan,
      level,
      { ...options, onProgress: progress.coarse },
      times,
    );
    try {
      const destination: Destination = {
        kind: 'body',
        pointer: body,
        strideElements: region.widthPx,
        originX: region.xPx,
        originY: region.yPx,
      };
      const source = await photo.level(level, this.pool, options.signal);
      const finest = { ...options, onProgress: progress.finest };
      const orientation = coarse?.tensor ?? null;
      const { noiseFloor } = plan;
      const pass: Pass = { source, region, destination, coarse, orientation, tensorOut: null, noiseFloor };
      await this.#run(plan, pass, finest, times);
    } finally {
      coarse?.letGo();
    }
    return times;
  }

  /** The level just above the finest, from what is kept or painted anew; null for a single level. */
  async #coarseLevelFor(
    photo: HeldPhoto,
    plan: BodyPlan,
    level: number,
    options: BodyOptions,
    times: PassTimes,
  ): Promise<CoarseLevel | null> {
    const levelCount = Math.min(plan.levelCount, photo.levels.length - level);
    if (levelCount < 2) return null;
    const key = JSON.stringify([plan, level]);
    if (photo.kept?.key === key) return photo.kept.coarse.hold();
    let coarse: CoarseLevel | null = null;
    for (let depth = levelCount - 1; depth >= 1; depth--) {
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
      const first = { ...common, source, destination: into(to), coarse, noiseFloor: levelFloor };
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
    const haloPx =
      plan.method === 'quadrant' || plan.method === 'bilateral'
        ? evenUp(Math.ceil(plan.radiusPx))
        : passHaloPx(plan);
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
      coarse: pass.coarse?.picture ?? null,
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

function cutIntoTiles(region: Rect, size: TileSize): TileGrid {
  return { ...region, tileWidthPx: size.widthPx, tileHeightPx: size.heightPx };
}

/** Shares the progress between the coarse levels, pass by pass, and the finest. */
function weighProgress(
  photo: HeldPhoto,
  plan: BodyPlan,
  level: number,
  region: Rect,
  report?: (fraction01: number) => void,
): { coarse?: (fraction01: number) => void; finest?: (fraction01: number) => void } {
  if (!report) return {};
  const { widthPx, heightPx } = photo.levels[level];
  const finestCost = 2 * region.widthPx * region.heightPx;
  const coarseCost = plan.levelCount > 1 ? ((widthPx * heightPx) / 3) * (2 + plan.coats) : 0;
  const share = coarseCost / (coarseCost + finestCost);
  let done = 0;
  let last = 0;
  return {
    coarse: (fraction01) => {
      // Passes follow one another; each starts at 0 again. Coarse passes are short, the first finer one dominates.
      if (fraction01 < last) done += (1 - done) * 0.4;
      last = fraction01;
      report(share * Math.min(1, done + (1 - done) * 0.4 * fraction01));
    },
    finest: (fraction01) => report(share + (1 - share) * fraction01),
  };
}
