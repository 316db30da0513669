import type { Kernels } from '../kernels/module.ts';
import type { Rect } from '../pixels/photo.ts';
import { type BodyWindow, evenUp, type SourcePicture, type TileGrid } from './jobs.ts';
import { readTile } from './paintTile.ts';

/** Side of the squares that the streamlines may skip; as in the kernel. */
export const cellPx = 8;

const align = (n: number) => (n + 15) & ~15;

/** A job that draws along the grain of a lightness: ink and bristle marks. Lengths in pixels of its own level. */
export interface GrainedJob {
  grid: TileGrid;
  /** Size of the painted level, before the shift. */
  pictureWidthPx: number;
  pictureHeightPx: number;
  shift: number;
  body: BodyWindow | null;
  photo: SourcePicture | null;
  plan: { marginPx: number; lumaHaloPx: number; tensorRadiusBlocks: number };
  tables: { gaussian: number };
}

/** Where the parts of a tile lie in a worker's scratch. */
export function layOutGrained(job: GrainedJob, base: number) {
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
  // Two rows more than the tile: noise is smoothed in place.
  const across = take(areaWidth * (areaHeight + 2) * 4);
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

export type GrainedParts = ReturnType<typeof layOutGrained>;

/** Luma of an area and its halo, from the body or from the photo. */
export function readLuma(kernels: Kernels, job: GrainedJob, parts: GrainedParts, area: Rect): void {
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

/**
 * The direction of the grain in each block of an area.
 * @param first address of the area's first luma
 */
export function findVectors(
  kernels: Kernels,
  job: GrainedJob,
  parts: GrainedParts,
  area: Rect,
  first: number,
): void {
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
