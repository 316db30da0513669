import type { Kernels } from '../../core/kernels/module.ts';
import type { BodyWindow, SurfaceJob } from '../../core/pipeline/jobs.ts';
import { streamlineStepPx } from '../../core/pipeline/linePlan.ts';
import { lineRegion } from '../../core/pipeline/lineTile.ts';
import type { ReliefPlan } from '../../core/pipeline/reliefPlan.ts';
import { surfaceScratchBytes } from '../../core/pipeline/reliefTile.ts';
import type { Rect } from '../../core/pixels/photo.ts';
import type { HeldPhoto } from './heldPhoto.ts';
import { cutIntoTiles, rowGrid, type TileSize } from './regions.ts';
import type { SharedHeap } from './sharedHeap.ts';
import type { WorkerPool } from './workerPool.ts';

/** Rows lit at a time. */
const lightRows = 64;

/** Lights the surface of the paint: heights at the relief's own level, light on them, brought up to the painted one. */
export class ReliefPainter {
  constructor(
    readonly pool: WorkerPool,
    readonly heap: SharedHeap,
    readonly kernels: Kernels,
    readonly tileSize: TileSize,
  ) {}

  /**
   * @param body the painted body, which covers the region and the relief's halo around it
   * @param relief receives light, one byte a pixel of the region
   */
  async paint(
    photo: HeldPhoto,
    plan: ReliefPlan,
    level: number,
    region: Rect,
    body: BodyWindow,
    relief: number,
    options: { signal?: AbortSignal; onProgress?: (fraction01: number) => void } = {},
  ): Promise<void> {
    const picture = photo.levels[level];
    const shift = Math.min(plan.shift, photo.levels.length - 1 - level);
    const area = lineRegion(wider(region, 2 << shift, picture), shift, picture);
    const { signal } = options;
    const planeBytes = area.widthPx * area.heightPx * 4;
    const tables = this.#makeTables(plan);
    const heights = this.heap.allocate(planeBytes);
    const light = this.heap.allocate(planeBytes);
    try {
      const surface: SurfaceJob = {
        kind: 'surface',
        grid: cutIntoTiles(area, this.tileSize),
        pictureWidthPx: picture.widthPx,
        pictureHeightPx: picture.heightPx,
        shift,
        body,
        photo: null,
        plan,
        tables,
        out: heights,
      };
      await this.pool.run(surface, { ...options, scratchBytes: surfaceScratchBytes(surface) });
      const { widthPx, heightPx } = area;
      await this.pool.run(
        { kind: 'light', grid: rowGrid(widthPx, heightPx, lightRows), heights, plan, out: light },
        { signal, scratchBytes: 0 },
      );
      await this.pool.run(
        {
          kind: 'raise',
          grid: { ...region, tileWidthPx: region.widthPx, tileHeightPx: lightRows },
          source: light,
          sourceWidthPx: widthPx,
          sourceHeightPx: heightPx,
          originX: area.xPx,
          originY: area.yPx,
          shift,
          out: relief,
        },
        { signal, scratchBytes: 0 },
      );
    } finally {
      for (const pointer of [heights, light, tables.gaussian, tables.streamline]) this.heap.free(pointer);
    }
  }

  /** A few hundred numbers: made here rather than on a worker. */
  #makeTables(plan: ReliefPlan): SurfaceJob['tables'] {
    const tables = {
      gaussian: this.heap.allocate((2 * plan.tensorRadiusBlocks + 1) * 4),
      streamline: this.heap.allocate((plan.streamlineSteps + 1) * 4),
    };
    this.kernels.gaussianTable(plan.tensorSigmaBlocks, plan.tensorRadiusBlocks, tables.gaussian);
    this.kernels.streamlineTable(
      plan.alongSigmaPx,
      streamlineStepPx,
      plan.streamlineSteps,
      tables.streamline,
    );
    return tables;
  }
}

/** Light reads the heights on both sides of a pixel, so more of them are made than are shown. */
function wider(region: Rect, marginPx: number, picture: { widthPx: number; heightPx: number }): Rect {
  const xPx = Math.max(0, region.xPx - marginPx);
  const yPx = Math.max(0, region.yPx - marginPx);
  return {
    xPx,
    yPx,
    widthPx: Math.min(picture.widthPx, region.xPx + region.widthPx + marginPx) - xPx,
    heightPx: Math.min(picture.heightPx, region.yPx + region.heightPx + marginPx) - yPx,
  };
}
