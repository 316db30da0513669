import type { Kernels } from '../kernels/module.ts';
import type { Rect } from '../pixels/photo.ts';
import { grainRadiusBlocks } from './bodyPlan.ts';
import { evenUp, type PaintJob, type SourcePicture } from './jobs.ts';
import { layOutScratch, type PaintScratch } from './scratch.ts';

/** Width of the range Gaussian that brings a coarser level up along edges, encoded units. */
const mergeRangeSigma = 0.05;
/** Bilateral range σ as a share of hold: at hold's default differences of 0.1 count as edges. */
const bilateralRangeShare = 0.4;

/** Milliseconds of a tile that went into finding the grain, out of its whole time. */
export interface TileTimes {
  grainMs: number;
}

/**
 * Reads a rectangle of a picture into a tile; outside the picture its edge is repeated.
 * @param tile pointer to the first quad of the rectangle
 */
export function readTile(
  kernels: Kernels,
  from: SourcePicture,
  rect: Rect,
  tile: number,
  stride: number,
): void {
  if (from.bytesPerSample === 0) {
    kernels.quadsToTile(
      from.pointer,
      from.widthPx,
      from.heightPx,
      rect.xPx,
      rect.yPx,
      rect.widthPx,
      rect.heightPx,
      tile,
      stride,
    );
  } else {
    kernels.photoToQuads(
      from.pointer,
      from.widthPx,
      from.heightPx,
      from.channels,
      from.bytesPerSample,
      rect.xPx,
      rect.yPx,
      rect.widthPx,
      rect.heightPx,
      tile,
      stride,
    );
  }
}

const grown = (rect: Rect, by: number): Rect => ({
  xPx: rect.xPx - by,
  yPx: rect.yPx - by,
  widthPx: rect.widthPx + 2 * by,
  heightPx: rect.heightPx + 2 * by,
});

const quadAt = (pointer: number, stride: number, x: number, y: number) => pointer + (y * stride + x) * 16;

/**
 * Paints one tile of a pass: reads it with its halo, smooths it, merges it with the coarser level where there is
 * one and smooths it again, and writes it out. Every pixel takes the same steps whatever the tile, so tiles of
 * any size give the same picture.
 * @param rect the tile, even corners, inside the picture
 * @param scratch the worker's own memory
 * @param now a clock in milliseconds, for the account of times only
 */
export function paintTile(
  kernels: Kernels,
  job: PaintJob,
  rect: Rect,
  scratch: number,
  now: () => number,
): TileTimes {
  const parts = layOutScratch(kernels, job, scratch);
  const tile: Rect = { ...rect, widthPx: evenUp(rect.widthPx), heightPx: evenUp(rect.heightPx) };
  const { haloPx: halo, strideElements: stride } = job;
  const times: TileTimes = { grainMs: 0 };
  const smooth = (from: number, area: Rect, keepTensor: boolean, to: number, toStride: number) => {
    const startMs = now();
    findGrain(kernels, job, parts, from, area, keepTensor);
    times.grainMs += now() - startMs;
    kernels.grainWise(
      from,
      stride,
      area.widthPx / 2,
      area.heightPx / 2,
      parts.numbers,
      parts.numbersStride,
      job.bank,
      job.noiseFloor,
      job.crispness,
      parts.work,
      to,
      toStride,
    );
  };

  if (job.coarse) {
    const outer = grown(tile, 2 * halo);
    const inner = grown(tile, halo);
    readTile(kernels, job.source, outer, parts.source, stride);
    smooth(quadAt(parts.source, stride, halo, halo), inner, false, parts.merged, stride);
    mergeWithCoarse(kernels, job, parts, inner);
    smooth(quadAt(parts.merged, stride, halo, halo), tile, true, parts.painted, tile.widthPx);
  } else {
    readTile(kernels, job.source, grown(tile, halo), parts.source, stride);
    const first = quadAt(parts.source, stride, halo, halo);
    if (job.method === 'grain-wise') smooth(first, tile, true, parts.painted, tile.widthPx);
    else smoothPlainly(kernels, job, parts, first, tile);
  }
  writeTile(kernels, job, parts, rect, tile.widthPx);
  return times;
}

/** The methods that need no grain. */
function smoothPlainly(
  kernels: Kernels,
  job: PaintJob,
  parts: PaintScratch,
  first: number,
  tile: Rect,
): void {
  const { strideElements: stride } = job;
  const { widthPx, heightPx } = tile;
  switch (job.method) {
    case 'quadrant':
      kernels.quadrant(first, stride, widthPx, heightPx, job.radiusPx, parts.work, parts.painted, widthPx);
      break;
    case 'bilateral': {
      const entryCount = kernels.bilateralTable(job.radiusPx, job.bank);
      kernels.bilateral(
        first,
        stride,
        widthPx,
        heightPx,
        job.radiusPx,
        bilateralRangeShare * job.hold,
        job.bank,
        entryCount,
        parts.work,
        parts.painted,
        widthPx,
      );
      break;
    }
    default:
      // Sectors: kernel number 0 is the round window.
      kernels.clearNumbers(parts.numbers, parts.numbersStride * (heightPx / 2));
      kernels.grainWise(
        first,
        stride,
        widthPx / 2,
        heightPx / 2,
        parts.numbers,
        parts.numbersStride,
        job.bank,
        job.noiseFloor,
        job.crispness,
        parts.work,
        parts.painted,
        widthPx,
      );
  }
}

/** Tensor, Gaussian, the coarser level's share, and the number of a kernel for each block of `area`. */
function findGrain(
  kernels: Kernels,
  job: PaintJob,
  parts: PaintScratch,
  from: number,
  area: Rect,
  keepTensor: boolean,
): void {
  const blocksX = area.widthPx / 2;
  const blocksY = area.heightPx / 2;
  const margin = grainRadiusBlocks;
  const { planeStride: stride, planeBytes } = parts;
  const corner = quadAt(from, job.strideElements, -2 * margin, -2 * margin);
  kernels.blockTensor(
    corner,
    job.strideElements,
    blocksX + 2 * margin,
    blocksY + 2 * margin,
    parts.raw,
    parts.raw + planeBytes,
    parts.raw + 2 * planeBytes,
    stride,
  );
  for (let plane = 0; plane < 3; plane++) {
    const raw = parts.raw + plane * planeBytes;
    const between = parts.between + plane * planeBytes;
    const final = parts.tensor + plane * planeBytes;
    kernels.gaussianColumns(
      raw + margin * stride * 4,
      stride,
      blocksX + 2 * margin,
      blocksY,
      job.gaussianTable,
      margin,
      between,
      stride,
    );
    kernels.gaussianRows(
      between + margin * 4,
      stride,
      blocksX,
      blocksY,
      job.gaussianTable,
      margin,
      final,
      stride,
    );
  }
  const [e, f, g] = [parts.tensor, parts.tensor + planeBytes, parts.tensor + 2 * planeBytes];
  if (job.coarseTensor) {
    const { pointer, widthBlocks, heightBlocks } = job.coarseTensor;
    kernels.addCoarseTensor(
      e,
      f,
      g,
      stride,
      blocksX,
      blocksY,
      pointer,
      widthBlocks,
      heightBlocks,
      area.xPx / 2,
      area.yPx / 2,
    );
  }
  kernels.grainNumbers(e, f, g, stride, blocksX, blocksY, parts.numbers, parts.numbersStride);
  if (keepTensor && job.tensorOut) storeTensor(kernels, job, parts, area);
}

function storeTensor(kernels: Kernels, job: PaintJob, parts: PaintScratch, area: Rect): void {
  const { pointer, widthBlocks, heightBlocks } = job.tensorOut!;
  const x = area.xPx / 2;
  const y = area.yPx / 2;
  const width = Math.min(area.widthPx / 2, widthBlocks - x);
  const height = Math.min(area.heightPx / 2, heightBlocks - y);
  for (let plane = 0; plane < 3; plane++) {
    const to = pointer + ((plane * heightBlocks + y) * widthBlocks + x) * 4;
    kernels.copyPlane(
      parts.tensor + plane * parts.planeBytes,
      parts.planeStride,
      width,
      height,
      to,
      widthBlocks,
    );
  }
}

/** Replaces this level's own paint by its union with the coarser level, over the tile and its halo. */
function mergeWithCoarse(kernels: Kernels, job: PaintJob, parts: PaintScratch, inner: Rect): void {
  const coarse = job.coarse!;
  const around: Rect = {
    xPx: inner.xPx / 2 - 1,
    yPx: inner.yPx / 2 - 1,
    widthPx: inner.widthPx / 2 + 2,
    heightPx: inner.heightPx / 2 + 2,
  };
  readTile(kernels, coarse, around, parts.coarse, parts.coarseStride);
  kernels.merge(
    parts.merged,
    job.strideElements,
    quadAt(parts.coarse, parts.coarseStride, 1, 1),
    parts.coarseStride,
    inner.widthPx / 2,
    inner.heightPx / 2,
    job.mergeTable,
    mergeRangeSigma,
    job.hold,
    parts.merged,
    job.strideElements,
  );
  // Beyond the picture's edge the union is the edge's own, not the union of repeated pixels.
  kernels.repeatEdges(
    parts.merged,
    job.strideElements,
    inner.xPx,
    inner.yPx,
    inner.widthPx,
    inner.heightPx,
    job.source.widthPx,
    job.source.heightPx,
  );
}

function writeTile(
  kernels: Kernels,
  job: PaintJob,
  parts: PaintScratch,
  rect: Rect,
  paintedStride: number,
): void {
  const to = job.destination;
  const offset = (rect.yPx - to.originY) * to.strideElements + (rect.xPx - to.originX);
  const write = to.kind === 'quads' ? kernels.tileToQuads : kernels.tileToBody;
  const pixelBytes = to.kind === 'quads' ? 16 : 6;
  write(
    parts.painted,
    paintedStride,
    rect.widthPx,
    rect.heightPx,
    to.pointer + offset * pixelBytes,
    to.strideElements,
  );
}
