import type { Kernels } from '../kernels/module.ts';
import type { Rect } from '../pixels/photo.ts';
import {
  type ComposeJob,
  type GroundJob,
  type HalveJob,
  type Job,
  type NoiseJob,
  type TablesJob,
  type ToneJob,
  tileRect,
} from './jobs.ts';
import { inkTile, lineTile } from './lineTile.ts';
import { paintTile, readTile } from './paintTile.ts';
import { lightTile, raiseTile, surfaceTile } from './reliefTile.ts';

/** Runs tile `index` of any job on this thread. Adds the milliseconds of its grain to `times`. */
export function runTile(
  kernels: Kernels,
  job: Job,
  index: number,
  scratch: number,
  now: () => number,
  times: { grainMs: number },
): void {
  switch (job.kind) {
    case 'paint':
      times.grainMs += paintTile(kernels, job, tileRect(job.grid, index), scratch, now).grainMs;
      break;
    case 'halve':
      halveTile(kernels, job, tileRect(job.grid, index), scratch);
      break;
    case 'noise':
      countNoise(kernels, job, tileRect(job.grid, index));
      break;
    case 'ground':
      makeGround(kernels, job, tileRect(job.grid, index));
      break;
    case 'line':
      lineTile(kernels, job, tileRect(job.grid, index), scratch);
      break;
    case 'ink':
      inkTile(kernels, job, tileRect(job.grid, index));
      break;
    case 'surface':
      surfaceTile(kernels, job, tileRect(job.grid, index), scratch);
      break;
    case 'light':
      lightTile(kernels, job, tileRect(job.grid, index));
      break;
    case 'raise':
      raiseTile(kernels, job, tileRect(job.grid, index));
      break;
    case 'tables':
      buildTables(kernels, job, scratch);
      break;
    case 'compose':
      composeTile(kernels, job, tileRect(job.grid, index));
      break;
    case 'tone':
      toneTile(kernels, job, tileRect(job.grid, index));
      break;
  }
}

function halveTile(kernels: Kernels, job: HalveJob, rect: Rect, scratch: number): void {
  const stride = 2 * rect.widthPx;
  const doubled = { xPx: 2 * rect.xPx, yPx: 2 * rect.yPx, widthPx: stride, heightPx: 2 * rect.heightPx };
  readTile(kernels, job.source, doubled, scratch, stride);
  const to = job.destination;
  const offset = (rect.yPx - to.originY) * to.strideElements + (rect.xPx - to.originX);
  kernels.halveQuads(
    scratch,
    stride,
    rect.widthPx,
    rect.heightPx,
    to.pointer + offset * 16,
    to.strideElements,
  );
}

/** Bytes of scratch of a halving job with tiles of this size. */
export function halveScratchBytes(tileWidthPx: number, tileHeightPx: number): number {
  return 4 * tileWidthPx * tileHeightPx * 16;
}

/** Each tile adds to a record of its own, so that no two threads meet and the order of adding is fixed. */
function countNoise(kernels: Kernels, job: NoiseJob, rect: Rect): void {
  const { source } = job;
  const band = rect.yPx / job.grid.tileHeightPx;
  kernels.noiseHistogram(
    source.pointer,
    source.widthPx,
    source.heightPx,
    source.channels,
    source.bytesPerSample,
    rect.yPx,
    rect.yPx + rect.heightPx,
    job.records + band * job.recordBytes,
  );
}

function makeGround(kernels: Kernels, job: GroundJob, rect: Rect): void {
  const { photo, grid } = job;
  const out = job.out + ((rect.yPx - grid.yPx) * job.outStride + (rect.xPx - grid.xPx)) * photo.channels;
  kernels.quadsToGround(
    job.source.pointer,
    job.source.widthPx,
    rect.xPx,
    rect.yPx,
    rect.widthPx,
    rect.heightPx,
    out,
    job.outStride,
    photo.pointer,
    photo.widthPx,
    photo.heightPx,
    photo.channels,
    photo.bytesPerSample,
    job.level,
  );
}

function buildTables(kernels: Kernels, job: TablesJob, scratch: number): void {
  const buildBank = job.isFixedPoint ? kernels.buildFixedBank : kernels.buildBank;
  if (job.bank) buildBank(job.radiusPx, job.pull, job.strideElements, job.bank, scratch);
  // σ = 2 px is one block of two pixels.
  if (job.gaussianTable) kernels.gaussianTable(1, 3, job.gaussianTable);
  if (job.mergeTable) kernels.mergeTable(job.mergeTable);
}

function composeTile(kernels: Kernels, job: ComposeJob, rect: Rect): void {
  const { ground } = job;
  const first = rect.yPx * ground.widthPx;
  const count = rect.heightPx * ground.widthPx;
  kernels.compose(
    ground.pointer + first * ground.channels * ground.bytesPerSample,
    ground.bytesPerSample,
    ground.channels,
    job.body && job.body + first * 6,
    job.line && job.line + first,
    job.relief && job.relief + first,
    count,
    job.settings,
    job.blendMode,
    job.out + first * job.outChannels * job.outBytesPerSample,
    job.outBytesPerSample,
    job.outChannels,
  );
}

function toneTile(kernels: Kernels, job: ToneJob, rect: Rect): void {
  const { pointer, widthPx, channels, bytesPerSample } = job.source;
  const first = rect.yPx * widthPx * channels;
  kernels.toneMap(
    pointer + first * bytesPerSample,
    channels,
    bytesPerSample,
    rect.heightPx * widthPx,
    job.settings,
    job.table,
    job.out + first * 2,
  );
}
