import type { LinePlan } from './linePlan.ts';
import type { ReliefPlan } from './reliefPlan.ts';

/**
 * Jobs are plain numbers that a worker can be sent: one pass over a picture, cut into tiles that any worker may
 * take in any order. Pointers are byte offsets into the shared memory.
 */

/** A picture that a pass reads. */
export interface SourcePicture {
  pointer: number;
  widthPx: number;
  heightPx: number;
  /** 0: quads, 16 bytes a pixel; otherwise bytes a sample of an interleaved photo. */
  bytesPerSample: 0 | 1 | 2;
  channels: 3 | 4;
}

/** Rectangle of work and how it is cut; everything even but the picture's own far edges. */
export interface TileGrid {
  xPx: number;
  yPx: number;
  widthPx: number;
  heightPx: number;
  tileWidthPx: number;
  tileHeightPx: number;
}

/** Where a pass writes: a picture whose first pixel is (originX, originY) of the level. */
export interface Destination {
  /** `quads`: float32 × 4; `body`: u16 × 3. */
  kind: 'quads' | 'body';
  pointer: number;
  strideElements: number;
  originX: number;
  originY: number;
}

/** Tensor planes e, f, g of a level, one value a block, stored one after the other without padding. */
export interface TensorPlanes {
  pointer: number;
  widthBlocks: number;
  heightBlocks: number;
}

export interface PaintJob {
  kind: 'paint';
  grid: TileGrid;
  source: SourcePicture;
  destination: Destination;
  method: 'grain-wise' | 'sectors' | 'quadrant' | 'bilateral';
  /** Finished coarser level to merge with, or null. */
  coarse: SourcePicture | null;
  coarseTensor: TensorPlanes | null;
  /** Receives this pass's tensor for the finer level, or null. */
  tensorOut: TensorPlanes | null;
  haloPx: number;
  strideElements: number;
  /** Smooths in fixed point, with a bank made for that. */
  isFixedPoint: boolean;
  /** Kernel bank for `strideElements`, or the bilateral table. */
  bank: number;
  /** Entries of the bilateral table. */
  bilateralEntries: number;
  mergeTable: number;
  gaussianTable: number;
  radiusPx: number;
  noiseFloor: number;
  crispness: number;
  hold: number;
}

/** Builds the kernel bank and the small tables, each where its pointer is not 0; a single tile of work. */
export interface TablesJob {
  kind: 'tables';
  grid: TileGrid;
  radiusPx: number;
  pull: number;
  strideElements: number;
  isFixedPoint: boolean;
  bank: number;
  mergeTable: number;
  gaussianTable: number;
}

/** Halves a picture into quads. */
export interface HalveJob {
  kind: 'halve';
  /** In pixels of the halved picture. */
  grid: TileGrid;
  source: SourcePicture;
  destination: Destination;
  strideElements: number;
}

/** Lays the strata over one another, a run of rows at a time. */
export interface ComposeJob {
  kind: 'compose';
  grid: TileGrid;
  ground: SourcePicture;
  body: number;
  line: number;
  relief: number;
  settings: number;
  blendMode: number;
  out: number;
  outBytesPerSample: 1 | 2;
  outChannels: 3 | 4;
}

/** Counts |I∗N| for the noise estimate, a band of rows at a time, each band into a record of its own. */
export interface NoiseJob {
  kind: 'noise';
  grid: TileGrid;
  source: SourcePicture;
  records: number;
  recordBytes: number;
}

/** A body stratum that covers a window of its level. */
export interface BodyWindow {
  pointer: number;
  xPx: number;
  yPx: number;
  widthPx: number;
}

/** Finds S, the flow-guided difference of Gaussians, at a level that suits the width of the ink. */
export interface LineJob {
  kind: 'line';
  /** In pixels of the line's own, 2^shift times smaller picture. */
  grid: TileGrid;
  /** Size of the painted level, before the shift. */
  pictureWidthPx: number;
  pictureHeightPx: number;
  shift: number;
  /** Drawn from the body, or from the photo's pyramid at the line's own level. */
  body: BodyWindow | null;
  photo: SourcePicture | null;
  plan: LinePlan;
  /** Gaussian table of the grain, DoG table and streamline table. */
  tables: { gaussian: number; dog: number; streamline: number };
  /** Receives S: float32, grid.widthPx a row. */
  out: number;
}

/** Turns S into ink coverage. */
export interface InkJob {
  kind: 'ink';
  /** In pixels of the painted level. */
  grid: TileGrid;
  source: number;
  sourceWidthPx: number;
  sourceHeightPx: number;
  originX: number;
  originY: number;
  shift: number;
  threshold: number;
  phi: number;
  out: number;
}

/** Builds the surface: bristle marks along the grain and the body's lightness, at a level that suits the bristle. */
export interface SurfaceJob {
  kind: 'surface';
  /** In pixels of the relief's own, 2^shift times smaller picture. */
  grid: TileGrid;
  /** Size of the painted level, before the shift. */
  pictureWidthPx: number;
  pictureHeightPx: number;
  shift: number;
  body: BodyWindow;
  photo: null;
  plan: ReliefPlan;
  /** Gaussian table of the grain and streamline table. */
  tables: { gaussian: number; streamline: number };
  /** Receives heights: float32, grid.widthPx a row. */
  out: number;
}

/** Throws light on a surface. */
export interface LightJob {
  kind: 'light';
  /** In pixels of the relief's own picture, bands of whole rows. */
  grid: TileGrid;
  /** float32, grid.widthPx a row. */
  heights: number;
  plan: ReliefPlan;
  /** Receives light: float32, grid.widthPx a row. */
  out: number;
}

/** Brings light up to the painted level, as bytes. */
export interface RaiseJob {
  kind: 'raise';
  /** In pixels of the painted level. */
  grid: TileGrid;
  source: number;
  sourceWidthPx: number;
  sourceHeightPx: number;
  originX: number;
  originY: number;
  shift: number;
  out: number;
}

/** Makes the 8-bit ground of a coarser level. */
export interface GroundJob {
  kind: 'ground';
  grid: TileGrid;
  /** The level, quads. */
  source: SourcePicture;
  photo: SourcePicture;
  level: number;
  out: number;
  outStride: number;
}

/** Maps the colours of a photo into another of 16 bits, a run of rows at a time. */
export interface ToneJob {
  kind: 'tone';
  grid: TileGrid;
  source: SourcePicture;
  /** 30 float32 (`writeToneSettings`). */
  settings: number;
  /** Tables for the source's depth. */
  table: number;
  out: number;
}

export type Job =
  | PaintJob
  | TablesJob
  | HalveJob
  | NoiseJob
  | GroundJob
  | LineJob
  | InkJob
  | SurfaceJob
  | LightJob
  | RaiseJob
  | ComposeJob
  | ToneJob;

/** Tiles in a grid. */
export function tileCount(grid: TileGrid): number {
  return Math.ceil(grid.widthPx / grid.tileWidthPx) * Math.ceil(grid.heightPx / grid.tileHeightPx);
}

/** The rectangle of tile `index`, row by row. */
export function tileRect(grid: TileGrid, index: number) {
  const columns = Math.ceil(grid.widthPx / grid.tileWidthPx);
  const left = (index % columns) * grid.tileWidthPx;
  const top = Math.floor(index / columns) * grid.tileHeightPx;
  return {
    xPx: grid.xPx + left,
    yPx: grid.yPx + top,
    widthPx: Math.min(grid.tileWidthPx, grid.widthPx - left),
    heightPx: Math.min(grid.tileHeightPx, grid.heightPx - top),
  };
}

/** Even number not below `n`. */
export function evenUp(n: number): number {
  return n + (n & 1);
}
