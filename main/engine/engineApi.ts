import type { Parameters } from '../../core/parameters/table.ts';
import type { DecodedPhoto, Rect, Strata, StrataRows } from '../../core/pixels/photo.ts';
import type { ToneMap } from '../../core/series/toneMap.ts';

/** Milliseconds spent in each part of a painting. */
export interface StageTimes {
  /** Noise, pyramid, structure tensor and choice of kernels. */
  grainMs: number;
  bodyMs: number;
  lineMs: number;
  reliefMs: number;
  composeMs: number;
}

/**
 * Looks at a picture while it is painted, before it is composed, and decides how to go on: so a frame is matched to
 * others without being painted once more only to be measured.
 */
export interface PaintReview {
  /**
   * @param body of the whole picture: R, G, B in 0…65535; a view of shared memory, good until the promise settles
   * @returns the hold to paint the body with instead (it is shown again), or null to go on
   */
  body(body: Uint16Array): Promise<number | null>;
  /**
   * @param responses how often each response of the line came up: see `InkHistogram`
   * @returns the ink threshold ε to draw with, at most `highestThreshold` of the parameters' own
   */
  ink(responses: readonly number[]): number;
}

/** A piece of long work reports how far it is, 0…1, and in which stage. */
export type OnProgress = (fraction01: number, stage: PaintStage) => void;

export type PaintStage = 'grain' | 'body' | 'line' | 'relief' | 'compose';

export interface PaintOptions {
  /** Long edge of the print; 300 mm unless given. */
  printLongEdgeMm?: number;
  signal?: AbortSignal;
  onProgress?: OnProgress;
}

/**
 * A photo held by the engine, with its halving pyramid and the noise measured at full resolution.
 * Level 0 is the full photo; level k is 2^k times smaller on each edge (rounded up).
 */
export interface EnginePhoto {
  readonly widthPx: number;
  readonly heightPx: number;
  readonly depth: 8 | 16;
  readonly channels: 3 | 4;
  readonly levels: readonly { widthPx: number; heightPx: number }[];
  /** The noise floor that `auto` stands for, measured at full resolution, encoded units 0…1. */
  readonly noiseFloor: number;
  /** Its pixels are not in memory: better painted in bands. */
  readonly isReadByRows: boolean;
  /** Gives the memory back; safe while a painting of it is under way, and more than once. */
  close(): void;
}

export interface OpenOptions {
  signal?: AbortSignal;
  /**
   * Maps the photo's colours first, on the workers. The mapped photo is held with 16 bits a sample: the ground of
   * its strata is that. Alpha stays; without a map, or with null, the pixels stay as they are, to the bit.
   */
  toneMap?: ToneMap | null;
}

/** A photo whose rows are read as they are needed, from a file say: upright, encoded values, as `DecodedPhoto`. */
export interface RowSource {
  readonly widthPx: number;
  readonly heightPx: number;
  readonly channels: 3 | 4;
  readonly bytesPerSample: 1 | 2;
  /** Fills `to`, which is shared memory, with whole rows, interleaved samples in the machine's byte order. */
  readRows(topRow: number, rowCount: number, to: Uint8Array, signal?: AbortSignal): Promise<void>;
  /** Called once no row will be asked for any more. */
  close(): void;
}

export interface BandOptions extends Omit<PaintOptions, 'onProgress'> {
  depth?: 8 | 16;
  /** Rows of a band; any number gives the same pixels. */
  bandRows?: number;
  /** Hands the strata of each band over too. */
  withStrata?: boolean;
  /** Of the whole painting. */
  onProgress?: (fraction01: number) => void;
}

/** Composed rows of a picture. */
export interface PaintedBand {
  topRow: number;
  rowCount: number;
  /** Interleaved, the photo's channels. A view of shared memory, good until the receiver's promise settles. */
  pixels: Uint8Array | Uint16Array;
  /** What they were composed of, where it was asked for; views as well. */
  strata?: StrataRows;
}

/** A composed picture in the shared memory. */
export interface ComposedPicture {
  /** Interleaved, the photo's channels. A view of shared memory: read it or write it to a file, then release it. */
  pixels: Uint8Array | Uint16Array;
  times: StageTimes;
  /** Gives the memory back; the pixels must not be touched afterwards. */
  release(): void;
}

/** Paints photos on a pool of worker threads; the calling thread never loops over pixels. */
export interface Engine {
  readonly workers: number;
  /** Takes the pixels in (copied) and measures the noise; the pyramid is built when first needed. */
  open(photo: DecodedPhoto, options?: OpenOptions): Promise<EnginePhoto>;
  /**
   * Takes a photo that is too large to be held: its rows are read as they are needed, now once to measure the
   * noise. Everything painted of it equals, to the bit, what `open` would give.
   * @param source closed with the photo, when its paintings have ended; at once where it cannot be taken
   */
  openRows(source: RowSource, options?: OpenOptions): Promise<EnginePhoto>;
  /**
   * Paints one pyramid level, or a region of it, as strata. At level 0 the pixels equal the file's. Coarse
   * levels are kept with the photo, so that moving to another region of the same parameters is quick.
   * Strata of a level above 0 have an 8-bit ground.
   */
  paintStrata(
    photo: EnginePhoto,
    parameters: Parameters,
    where: { level: number; region?: Rect },
    options?: PaintOptions,
  ): Promise<{ strata: Strata; times: StageTimes }>;
  /**
   * Paints at full resolution and composes, at the asked depth (the photo's own unless given).
   * @param options.review asked on the way; the body and the line are painted for it even where they are hidden
   */
  paintPicture(
    photo: EnginePhoto,
    parameters: Parameters,
    options?: PaintOptions & { depth?: 8 | 16; review?: PaintReview },
  ): Promise<ComposedPicture>;
  /**
   * Paints at full resolution from top to bottom and hands the composed rows over band by band: the same pixels
   * as `paintPicture`, in memory that does not grow with the height.
   * @param receive the next band waits for it; bands are contiguous
   */
  paintBands(
    photo: EnginePhoto,
    parameters: Parameters,
    receive: (band: PaintedBand) => Promise<void> | void,
    options?: BandOptions,
  ): Promise<StageTimes>;
  close(): Promise<void>;
}
