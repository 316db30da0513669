import type { Kernels } from '../kernels/module.ts';
import type { Rect } from '../pixels/photo.ts';
import { cellPx, findVectors, layOutGrained, readLuma } from './grainedTile.ts';
import { evenUp, type InkJob, type LineJob } from './jobs.ts';
import { streamlineStepPx } from './linePlan.ts';

/** S where no ink can come: any value above every threshold. */
const blankS = 2;

/** Bytes of scratch that a worker needs for a line job. */
export function lineScratchBytes(job: LineJob): number {
  return layOutGrained(job, 0).endBytes;
}

/**
 * Finds S for one tile of the line's level: luma, grain, difference of Gaussians across it, smoothing along it.
 * @param rect the tile, even corner
 * @param scratch the worker's own memory
 */
export function lineTile(kernels: Kernels, job: LineJob, rect: Rect, scratch: number): void {
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
  kernels.dogAcross(
    first,
    parts.lumaStride,
    area.widthPx / 2,
    area.heightPx / 2,
    parts.vectors,
    parts.vectorsStride,
    job.tables.dog,
    plan.dogReachPx,
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
  // One cell more than the streamlines reach: S is also brought up between neighbours.
  const cellReach = Math.ceil((plan.streamlineSteps * streamlineStepPx) / cellPx) + 1;
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
    cellReach,
    plan.threshold,
    blankS,
    plan.streamlineSteps,
    job.tables.streamline,
    out,
    job.grid.widthPx,
  );
}

/** Turns S into ink coverage for one tile. */
export function inkTile(kernels: Kernels, job: InkJob, rect: Rect): void {
  const { grid } = job;
  kernels.inkCoverage(
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
    job.threshold,
    job.phi,
    job.out + (rect.yPx - grid.yPx) * grid.widthPx + (rect.xPx - grid.xPx),
    grid.widthPx,
  );
}

/** The part of the line's level that a region of the painted level needs, even corner, inside the picture. */
export function lineRegion(
  region: Rect,
  shift: number,
  picture: { widthPx: number; heightPx: number },
): Rect {
  const side = 2 ** shift;
  const lastX = Math.ceil(picture.widthPx / side);
  const lastY = Math.ceil(picture.heightPx / side);
  const x0 = Math.max(0, Math.floor(region.xPx / side) - 1) & ~1;
  const y0 = Math.max(0, Math.floor(region.yPx / side) - 1) & ~1;
  const x1 = Math.min(lastX, Math.ceil((region.xPx + region.widthPx) / side) + 1);
  const y1 = Math.min(lastY, Math.ceil((region.yPx + region.heightPx) / side) + 1);
  return { xPx: x0, yPx: y0, widthPx: x1 - x0, heightPx: y1 - y0 };
}
