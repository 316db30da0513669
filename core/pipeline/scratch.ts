import type { Kernels } from '../kernels/module.ts';
import { grainRadiusBlocks } from './bodyPlan.ts';
import { evenUp, type PaintJob } from './jobs.ts';

/** Where the parts of a worker's scratch lie, as byte offsets, and how large it is in all. */
export interface PaintScratch {
  /** Source tile with both halos. */
  source: number;
  /** Whatever is smoothed next, in fixed point. */
  packed: number;
  /** This level's own paint and, in place, what it becomes once merged. */
  merged: number;
  /** Coarser level around the tile. */
  coarse: number;
  coarseStride: number;
  /** Smoothed tile. */
  painted: number;
  /** Planes e, f, g before, between and after the Gaussian. */
  raw: number;
  between: number;
  tensor: number;
  planeStride: number;
  planeBytes: number;
  numbers: number;
  numbersStride: number;
  /** Sums of the sectors, or whatever else the method needs. */
  work: number;
  endBytes: number;
}

const align = (n: number) => (n + 15) & ~15;

/**
 * Lays out the scratch of one paint job.
 * @param base the worker's own piece of memory, 16-aligned
 */
export function layOutScratch(kernels: Kernels, job: PaintJob, base: number): PaintScratch {
  const { haloPx, strideElements } = job;
  const widthPx = evenUp(Math.min(job.grid.tileWidthPx, job.grid.widthPx));
  const heightPx = evenUp(Math.min(job.grid.tileHeightPx, job.grid.heightPx));
  const outerHeight = heightPx + 2 * haloPx;
  let at = base;
  const take = (bytes: number) => {
    const start = at;
    at = align(at + bytes);
    return start;
  };
  const sourceBytes = strideElements * (job.coarse ? outerHeight + 2 * haloPx : outerHeight) * 16;
  const source = take(sourceBytes);
  const packed = job.isFixedPoint ? take(sourceBytes) : 0;
  const merged = job.coarse ? take(strideElements * outerHeight * 16) : 0;
  const coarseStride = (widthPx + 2 * haloPx) / 2 + 2;
  const coarse = job.coarse ? take(coarseStride * (outerHeight / 2 + 2) * 16) : 0;
  const painted = take(widthPx * heightPx * 16);
  const blocksX = (job.coarse ? widthPx + 2 * haloPx : widthPx) / 2;
  const blocksY = (job.coarse ? outerHeight : heightPx) / 2;
  const planeStride = ((blocksX + 2 * grainRadiusBlocks + 3) & ~3) + 8;
  const planeBytes = align(planeStride * (blocksY + 2 * grainRadiusBlocks) * 4);
  const raw = take(3 * planeBytes);
  const between = take(3 * planeBytes);
  const tensor = take(3 * planeBytes);
  const numbersStride = (blocksX + 7) & ~3;
  const numbers = take(numbersStride * blocksY * 2);
  const work = take(workBytes(kernels, job, widthPx, heightPx));
  return {
    source,
    packed,
    merged,
    coarse,
    coarseStride,
    painted,
    raw,
    between,
    tensor,
    planeStride,
    planeBytes,
    numbers,
    numbersStride,
    work,
    endBytes: at - base,
  };
}

function workBytes(kernels: Kernels, job: PaintJob, widthPx: number, heightPx: number): number {
  switch (job.method) {
    case 'quadrant':
      return kernels.quadrantScratchBytes(widthPx, heightPx, job.radiusPx);
    case 'bilateral':
      return kernels.bilateralScratchBytes(widthPx, heightPx, job.radiusPx);
    default:
      return 512;
  }
}
