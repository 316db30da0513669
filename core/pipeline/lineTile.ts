import type { Kernels } from '../kernels/module.ts';
import type { Rect } from '../pixels/photo.ts';
import { evenUp, type InkJob, type LineJob, type TileGrid } from './jobs.ts';
import { streamlineStepPx } from './linePlan.ts';
import { readTile } from './paintTile.ts';

/** Side of the squares that the streamlines skip where no ink can come; as in the kernel. */
const cellPx = 8;
/** S where no ink can come: any value above every threshold. */
const blankS = 2;

const align = (n: number) => (n + 15) & ~15;

/** Where the parts of a line tile lie in a worker's scratch. */
function layOutLine(job: LineJob, base: number) {
  const { marginPx, lumaHaloPx, tensorRadiusBlocks } = job.plan;
  const widthPx = evenUp(Math.min(job.grid.tileWidthPx, job.grid.widthPx));
  const heightPx = evenUp(Math.min(job.grid.tileHeightPx, job.grid.heightPx));
  let at = base;
  const take = (bytes: number) => {
    const start = at;
    at = align(at + bytes);
    return start;
  };
  const areaWidth = widthPx + 2 * marginPx;
  const areaHeight = heightPx + 2 * marginPx;
  const lumaStride = areaWidth + 2 * lumaHaloPx + 4;
  const lumaHeight = areaHeight + 2 * lumaHaloPx;
  const luma = take(lumaStride * (lumaHeight + 2) * 4);
  const quads = job.photo ? take(lumaStride * lumaHeight * 16) : 0;
  const planeStride = ((areaWidth / 2 + 2 * tensorRadiusBlocks + 3) & ~3) + 8;
  const planeBytes = align(planeStride * (areaHeight / 2 + 2 * tensorRadiusBlocks) * 4);
  const raw = take(3 * planeBytes);
  const between = take(3 * planeBytes);
  const tensor = take(3 * planeBytes);
  const vectorsStride = areaWidth / 2;
  const vectors = take(vectorsStride * (areaHeight / 2) * 4);
  const across = take(areaWidth * areaHeight * 4);
  const cellsX = Math.ceil(areaWidth / cellPx);
  const cellsY = Math.ceil(areaHeight / cellPx);
  const cells = take(cellsX * cellsY * 4);
  return {
    luma,
    lumaStride,
    quads,
    raw,
    between,
    tensor,
    planeStride,
    planeBytes,
    vectors,
    vectorsStride,
    across,
    cells,
    cellsX,
    endBytes: at - base,
  };
}

/** Bytes of scratch that a worker needs for a line job. */
export function lineScratchBytes(job: LineJob): number {
  return layOutLine(job, 0).endBytes;
}

/**
 * Finds S for one tile of the line's level: luma, grain, difference of Gaussians across it, smoothing along it.
 * @param rect the tile, even corner
 * @param scratch the worker's own memory
 */
export function lineTile(kernels: Kernels, job: LineJob, rect: Rect, scratch: number): void {
  const { plan } = job;
  const parts = layOutLine(job, scratch);
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

type Parts = ReturnType<typeof layOutLine>;

function readLuma(kernels: Kernels, job: LineJob, parts: Parts, area: Rect): void {
  const halo = job.plan.lumaHaloPx;
  const around: Rect = {
    xPx: area.xPx - halo,
    yPx: area.yPx - halo,
    widthPx: area.widthPx + 2 * halo,
    heightPx: area.heightPx + 2 * halo,
  };
  if (job.photo) {
    readTile(kernels, job.photo, around, parts.quads, parts.lumaStride);
    kernels.lumaFromQuads(
      parts.quads,
      parts.lumaStride,
      around.widthPx,
      around.heightPx,
      parts.luma,
      parts.lumaStride,
    );
    return;
  }
  const body = job.body!;
  kernels.lumaFromBody(
    body.pointer,
    body.xPx,
    body.yPx,
    body.widthPx,
    job.pictureWidthPx,
    job.pictureHeightPx,
    job.shift,
    around.xPx,
    around.yPx,
    around.widthPx,
    around.heightPx,
    parts.luma,
    parts.lumaStride,
  );
}

function findVectors(kernels: Kernels, job: LineJob, parts: Parts, area: Rect, first: number): void {
  const radius = job.plan.tensorRadiusBlocks;
  const blocksX = area.widthPx / 2;
  const blocksY = area.heightPx / 2;
  const { planeStride: stride, planeBytes } = parts;
  const corner = first - 2 * radius * (parts.lumaStride + 1) * 4;
  kernels.lumaBlockTensor(
    corner,
    parts.lumaStride,
    blocksX + 2 * radius,
    blocksY + 2 * radius,
    parts.raw,
    parts.raw + planeBytes,
    parts.raw + 2 * planeBytes,
    stride,
  );
  for (let plane = 0; plane < 3; plane++) {
    const raw = parts.raw + plane * planeBytes + radius * stride * 4;
    const between = parts.between + plane * planeBytes;
    kernels.gaussianColumns(
      raw,
      stride,
      blocksX + 2 * radius,
      blocksY,
      job.tables.gaussian,
      radius,
      between,
      stride,
    );
    const tensor = parts.tensor + plane * planeBytes;
    kernels.gaussianRows(
      between + radius * 4,
      stride,
      blocksX,
      blocksY,
      job.tables.gaussian,
      radius,
      tensor,
      stride,
    );
  }
  kernels.grainVectors(
    parts.tensor,
    parts.tensor + planeBytes,
    parts.tensor + 2 * planeBytes,
    stride,
    blocksX,
    blocksY,
    parts.vectors,
    parts.vectorsStride,
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

/** Tiles of a line's level. */
export function lineGrid(region: Rect, tileWidthPx: number, tileHeightPx: number): TileGrid {
  return { ...region, tileWidthPx, tileHeightPx };
}
