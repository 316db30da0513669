import type { Kernels } from '../kernels/module.ts';
import type { Rect } from '../pixels/photo.ts';
import { cellPx, findVectors, layOutGrained, readLuma } from './grainedTile.ts';
import { evenUp, type LightJob, type RaiseJob, type SurfaceJob } from './jobs.ts';

/** No streamline is left out: the surface has no place where nothing can come. */
const everything = 1e9;

/** Bytes of scratch that a worker needs for a surface job. */
export function surfaceScratchBytes(job: SurfaceJob): number {
  return layOutGrained(job, 0).endBytes;
}

/**
 * Builds the height of one tile of the relief's level: luma, grain, noise drawn out along the grain, and both
 * laid together.
 * @param rect the tile, even corner
 * @param scratch the worker's own memory
 */
export function surfaceTile(kernels: Kernels, job: SurfaceJob, rect: Rect, scratch: number): void {
  const { plan } = job;
  const parts = layOutGrained(job, scratch);
  const area: Rect = {
    xPx: rect.xPx - plan.marginPx,
    yPx: rect.yPx - plan.marginPx,
    widthPx: evenUp(rect.widthPx) + 2 * plan.marginPx,
    heightPx: evenUp(rect.heightPx) + 2 * plan.marginPx,
  };
  readLuma(kernels, job, parts, area);
  const halo = plan.lumaHaloPx;
  const first = parts.luma + (halo * parts.lumaStride + halo) * 4;
  findVectors(kernels, job, parts, area, first);
  kernels.bristleNoise(
    area.xPx,
    area.yPx,
    area.widthPx,
    area.heightPx,
    plan.noiseSide,
    parts.across,
    area.widthPx,
  );
  const cellsX = Math.ceil(area.widthPx / cellPx);
  const cellsY = Math.ceil(area.heightPx / cellPx);
  kernels.cellMinima(parts.across, area.widthPx, area.widthPx, area.heightPx, parts.cells, cellsX);
  const out = job.out + ((rect.yPx - job.grid.yPx) * job.grid.widthPx + (rect.xPx - job.grid.xPx)) * 4;
  // The last column or row of an odd picture is made only as far as it is inside.
  const oddX = evenUp(rect.widthPx) - rect.widthPx;
  const oddY = evenUp(rect.heightPx) - rect.heightPx;
  kernels.streamlines(
    parts.across,
    area.widthPx,
    area.widthPx - oddX,
    area.heightPx - oddY,
    plan.marginPx,
    parts.vectors,
    parts.vectorsStride,
    parts.cells,
    cellsX,
    cellsY,
    0,
    everything,
    0,
    plan.streamlineSteps,
    job.tables.streamline,
    out,
    job.grid.widthPx,
  );
  kernels.addHeights(
    out,
    job.grid.widthPx,
    first + (plan.marginPx * parts.lumaStride + plan.marginPx) * 4,
    parts.lumaStride,
    rect.widthPx,
    rect.heightPx,
    plan.markGain,
    plan.lumaGain,
  );
}

/** Throws light on a band of whole rows. Heights outside the band are read, outside the plane repeated. */
export function lightTile(kernels: Kernels, job: LightJob, rect: Rect): void {
  const { grid, plan } = job;
  kernels.lightHeights(
    job.heights,
    grid.widthPx,
    grid.heightPx,
    rect.yPx - grid.yPx,
    rect.heightPx,
    plan.slope,
    plan.bearingDegrees,
    plan.shine,
    job.out,
  );
}

/** Brings light up to the painted level for one tile. */
export function raiseTile(kernels: Kernels, job: RaiseJob, rect: Rect): void {
  const { grid } = job;
  kernels.raiseRelief(
    job.source,
    job.sourceWidthPx,
    job.sourceWidthPx,
    job.sourceHeightPx,
    job.originX,
    job.originY,
    job.shift,
    rect.xPx,
    rect.yPx,
    rect.widthPx,
    rect.heightPx,
    job.out + (rect.yPx - grid.yPx) * grid.widthPx + (rect.xPx - grid.xPx),
    grid.widthPx,
  );
}
