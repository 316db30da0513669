import type { Kernels } from '../../core/kernels/module.ts';
import { autoNoiseFloor } from '../../core/noise/autoNoiseFloor.ts';
import {
  noiseRecordBytes,
  noiseSigma,
  readNoiseRecord,
  sumNoiseRecords,
} from '../../core/noise/noiseFloor.ts';
import type { SourcePicture } from '../../core/pipeline/jobs.ts';
import { halveScratchBytes } from '../../core/pipeline/runTile.ts';
import { toneSettingsCount, writeToneSettings } from '../../core/pipeline/toneSettings.ts';
import type { DecodedPhoto } from '../../core/pixels/photo.ts';
import type { ToneMap } from '../../core/series/toneMap.ts';
import type { CoarseLevel } from './coarseLevel.ts';
import type { EnginePhoto } from './engineApi.ts';
import type { SharedHeap } from './sharedHeap.ts';
import type { WorkerPool } from './workerPool.ts';

/** Rows of a band when a pass needs no tiles. */
const bandRows = 256;
/** Rows of a band when colours are mapped. */
const toneRows = 32;
/** Side of a tile when a picture is halved. */
const halveTilePx = 256;
/** The pyramid ends where an edge would get shorter than this. */
const shortestEdgePx = 4;

/** A photo in the shared memory, with the levels of its pyramid as far as anyone has needed them. */
export class HeldPhoto implements EnginePhoto {
  readonly widthPx: number;
  readonly heightPx: number;
  readonly depth: 8 | 16;
  readonly channels: 3 | 4;
  readonly levels: { widthPx: number; heightPx: number }[];
  noiseFloor = 0;
  /** Coarse levels of the last painting, kept for its neighbours: see PaintEngine. */
  kept: { key: string; coarse: CoarseLevel } | null = null;
  readonly #heap: SharedHeap;
  readonly #pictures: SourcePicture[];
  #users = 0;
  #isClosed = false;

  constructor(photo: DecodedPhoto, heap: SharedHeap) {
    const { widthPx, heightPx, channels, pixels } = photo;
    this.widthPx = widthPx;
    this.heightPx = heightPx;
    this.channels = channels;
    this.depth = pixels.BYTES_PER_ELEMENT === 1 ? 8 : 16;
    this.levels = levelSizes(widthPx, heightPx);
    this.#heap = heap;
    const bytesPerSample = pixels.BYTES_PER_ELEMENT as 1 | 2;
    const pointer = heap.allocate(pixels.byteLength);
    new Uint8Array(heap.memory.buffer, pointer, pixels.byteLength).set(
      new Uint8Array(pixels.buffer, pixels.byteOffset, pixels.byteLength),
    );
    this.#pictures = [{ pointer, widthPx, heightPx, channels, bytesPerSample }];
  }

  get photo(): SourcePicture {
    return this.#pictures[0];
  }

  get longEdgePx(): number {
    return Math.max(this.widthPx, this.heightPx);
  }

  /**
   * Maps the colours; from then on the photo is held with 16 bits, so that a stretched tone shows no bands. Has to
   * run before anything else looks at the pixels.
   */
  async mapTones(map: ToneMap, kernels: Kernels, pool: WorkerPool, signal?: AbortSignal): Promise<void> {
    const { photo } = this;
    const { widthPx, heightPx, channels } = photo;
    const bytesPerSample = photo.bytesPerSample as 1 | 2;
    const out = this.#heap.allocate(widthPx * heightPx * channels * 2);
    const settings = this.#heap.allocate(toneSettingsCount * 4);
    const table = this.#heap.allocate(kernels.toneTableBytes(bytesPerSample));
    try {
      kernels.toneTables(bytesPerSample, table);
      writeToneSettings(new Float32Array(this.#heap.memory.buffer, settings, toneSettingsCount), map);
      const grid = rowGrid(widthPx, heightPx, toneRows);
      await pool.run(
        { kind: 'tone', grid, source: photo, settings, table, out },
        { signal, scratchBytes: 0 },
      );
    } catch (error) {
      this.#heap.free(out);
      throw error;
    } finally {
      this.#heap.free(settings);
      this.#heap.free(table);
    }
    this.#pictures[0] = { ...photo, pointer: out, bytesPerSample: 2 };
    this.#heap.free(photo.pointer);
  }

  /** Measures the noise; has to run once before painting. */
  async measureNoise(pool: WorkerPool, signal?: AbortSignal): Promise<void> {
    const bands = Math.ceil(this.heightPx / bandRows);
    const records = this.#heap.allocate(bands * noiseRecordBytes);
    try {
      new Uint8Array(this.#heap.memory.buffer, records, bands * noiseRecordBytes).fill(0);
      const grid = rowGrid(this.widthPx, this.heightPx, bandRows);
      await pool.run(
        { kind: 'noise', grid, source: this.photo, records, recordBytes: noiseRecordBytes },
        { signal, scratchBytes: 0 },
      );
      const buffer = this.#heap.memory.buffer;
      const total = sumNoiseRecords(
        Array.from({ length: bands }, (_, i) => readNoiseRecord(buffer, records + i * noiseRecordBytes)),
      );
      this.noiseFloor = autoNoiseFloor(noiseSigma(total, this.photo.bytesPerSample as 1 | 2));
    } finally {
      this.#heap.free(records);
    }
  }

  /** The picture of a level; builds the pyramid down to it where nobody has yet. */
  async level(index: number, pool: WorkerPool, signal?: AbortSignal): Promise<SourcePicture> {
    for (let next = this.#pictures.length; next <= index; next++) {
      const { widthPx, heightPx } = this.levels[next];
      const pointer = this.#heap.allocate(widthPx * heightPx * 16);
      try {
        await pool.run(
          {
            kind: 'halve',
            grid: { xPx: 0, yPx: 0, widthPx, heightPx, tileWidthPx: halveTilePx, tileHeightPx: halveTilePx },
            source: this.#pictures[next - 1],
            destination: { kind: 'quads', pointer, strideElements: widthPx, originX: 0, originY: 0 },
            strideElements: 2 * halveTilePx,
          },
          { signal, scratchBytes: halveScratchBytes(halveTilePx, halveTilePx) },
        );
      } catch (error) {
        this.#heap.free(pointer);
        throw error;
      }
      if (this.#pictures[next]) this.#heap.free(pointer);
      else this.#pictures[next] = { pointer, widthPx, heightPx, bytesPerSample: 0, channels: 4 };
    }
    return this.#pictures[index];
  }

  /** Gives back the levels between the photo and `index`, when no further painting will want them. */
  dropLevelsBelow(index: number): void {
    for (const picture of this.#pictures.splice(Math.max(1, index))) this.#heap.free(picture.pointer);
  }

  dropKept(): void {
    this.kept?.coarse.letGo();
    this.kept = null;
  }

  /** Keeps the memory alive while `work` runs, even if the photo is closed meanwhile. */
  async use<T>(work: () => Promise<T>): Promise<T> {
    if (this.#isClosed) throw new Error('This photo has been closed');
    this.#users++;
    try {
      return await work();
    } finally {
      this.#users--;
      this.#freeIfUnused();
    }
  }

  close(): void {
    this.#isClosed = true;
    this.#freeIfUnused();
  }

  #freeIfUnused(): void {
    if (!this.#isClosed || this.#users > 0) return;
    this.dropKept();
    for (const picture of this.#pictures.splice(0)) this.#heap.free(picture.pointer);
  }
}

/** Sizes of the pyramid's levels, each half of the one before, rounded up. */
function levelSizes(widthPx: number, heightPx: number) {
  const sizes = [{ widthPx, heightPx }];
  for (
    let last = sizes[0];
    Math.min(last.widthPx, last.heightPx) >= 2 * shortestEdgePx;
    last = sizes.at(-1)!
  ) {
    sizes.push({ widthPx: (last.widthPx + 1) >> 1, heightPx: (last.heightPx + 1) >> 1 });
  }
  return sizes;
}

/** Bands of whole rows. */
export function rowGrid(widthPx: number, heightPx: number, rows: number) {
  return { xPx: 0, yPx: 0, widthPx, heightPx, tileWidthPx: widthPx, tileHeightPx: rows };
}
