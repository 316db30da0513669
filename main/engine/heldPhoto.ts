import type { Kernels } from '../../core/kernels/module.ts';
import { autoNoiseFloor } from '../../core/noise/autoNoiseFloor.ts';
import {
  noiseRecordBytes,
  noiseSigma,
  readNoiseRecord,
  sumNoiseRecords,
} from '../../core/noise/noiseFloor.ts';
import type { SourcePicture } from '../../core/pipeline/jobs.ts';
import { toneSettingsCount, writeToneSettings } from '../../core/pipeline/toneSettings.ts';
import type { DecodedPhoto } from '../../core/pixels/photo.ts';
import type { ToneMap } from '../../core/series/toneMap.ts';
import type { CoarseLevel } from './coarseLevel.ts';
import type { EnginePhoto, RowSource } from './engineApi.ts';
import { type LevelSource, PhotoRows, runHalving, SourceRows, type ToneTables } from './photoRows.ts';
import { rowGrid } from './regions.ts';
import type { SharedHeap } from './sharedHeap.ts';
import type { WorkerPool } from './workerPool.ts';

/** Rows of a band when a pass needs no tiles. */
const bandRows = 256;
/** Rows of a band when colours are mapped. */
const toneRows = 32;
/** The pyramid ends where an edge would get shorter than this. */
const shortestEdgePx = 4;

/**
 * A photo that the engine paints, with the levels of its pyramid as far as anyone has needed them. Its pixels are
 * in the shared memory, or are read row by row where they are too many. Levels of more than `wholeLevelPixels` are
 * not kept either but made while they are read.
 */
export class HeldPhoto implements EnginePhoto, LevelSource {
  readonly widthPx: number;
  readonly heightPx: number;
  readonly depth: 8 | 16;
  readonly channels: 3 | 4;
  readonly levels: { widthPx: number; heightPx: number }[];
  readonly firstWholeLevel: number;
  readonly isReadByRows: boolean;
  noiseFloor = 0;
  /** Coarse levels of the last painting, kept for its neighbours: see PaintEngine. */
  kept: { key: string; coarse: CoarseLevel } | null = null;
  readonly #heap: SharedHeap;
  /** Level 0 and those from `firstWholeLevel` on, where they are held. */
  readonly #pictures: (SourcePicture | undefined)[] = [];
  #source: RowSource | null;
  #bytesPerSample: 1 | 2;
  #tone: ToneTables | null = null;
  #users = 0;
  #isClosed = false;

  private constructor(
    facts: Omit<RowSource, 'readRows' | 'close'>,
    source: RowSource | null,
    heap: SharedHeap,
    wholeLevelPixels: number,
  ) {
    this.widthPx = facts.widthPx;
    this.heightPx = facts.heightPx;
    this.channels = facts.channels;
    this.depth = facts.bytesPerSample === 1 ? 8 : 16;
    this.#bytesPerSample = facts.bytesPerSample;
    this.levels = levelSizes(facts.widthPx, facts.heightPx);
    const firstSmall = this.levels.findIndex(
      ({ widthPx, heightPx }, level) => level > 0 && widthPx * heightPx <= wholeLevelPixels,
    );
    this.firstWholeLevel = firstSmall < 0 ? this.levels.length : firstSmall;
    this.#source = source;
    this.isReadByRows = source !== null;
    this.#heap = heap;
  }

  /** Holds a photo's pixels, copied. */
  static ofPixels(photo: DecodedPhoto, heap: SharedHeap, wholeLevelPixels: number): HeldPhoto {
    const { widthPx, heightPx, channels, pixels } = photo;
    const bytesPerSample = pixels.BYTES_PER_ELEMENT as 1 | 2;
    const held = new HeldPhoto({ widthPx, heightPx, channels, bytesPerSample }, null, heap, wholeLevelPixels);
    const pointer = heap.allocate(pixels.byteLength);
    new Uint8Array(heap.memory.buffer, pointer, pixels.byteLength).set(
      new Uint8Array(pixels.buffer, pixels.byteOffset, pixels.byteLength),
    );
    held.#pictures[0] = { pointer, widthPx, heightPx, channels, bytesPerSample };
    return held;
  }

  /** Holds a photo by its rows. */
  static ofRows(source: RowSource, heap: SharedHeap, wholeLevelPixels: number): HeldPhoto {
    return new HeldPhoto(source, source, heap, wholeLevelPixels);
  }

  /** Of the pixels that are painted: 2 for a photo whose tones are mapped. */
  get bytesPerSample(): 1 | 2 {
    return this.#bytesPerSample;
  }

  get longEdgePx(): number {
    return Math.max(this.widthPx, this.heightPx);
  }

  sourceRows(pool: WorkerPool, signal?: AbortSignal): SourceRows | null {
    return this.#source && new SourceRows(this.#source, this.#tone, pool, this.#heap, signal);
  }

  /**
   * Maps the colours; from then on the photo has 16 bits, so that a stretched tone shows no bands. Has to run
   * before anything else looks at the pixels.
   */
  async mapTones(map: ToneMap, kernels: Kernels, pool: WorkerPool, signal?: AbortSignal): Promise<void> {
    const tone = this.#makeToneTables(map, kernels);
    this.#bytesPerSample = 2;
    if (this.#source) {
      // The rows are mapped whenever they are read.
      this.#tone = tone;
      return;
    }
    const photo = this.#pictures[0]!;
    const { widthPx, heightPx, channels } = photo;
    let out = 0;
    try {
      out = this.#heap.allocate(widthPx * heightPx * channels * 2);
      const grid = rowGrid(widthPx, heightPx, toneRows);
      await pool.run({ kind: 'tone', grid, source: photo, ...tone, out }, { signal, scratchBytes: 0 });
    } catch (error) {
      this.#heap.free(out);
      throw error;
    } finally {
      this.#heap.free(tone.settings);
      this.#heap.free(tone.table);
    }
    this.#pictures[0] = { ...photo, pointer: out, bytesPerSample: 2 };
    this.#heap.free(photo.pointer);
  }

  #makeToneTables(map: ToneMap, kernels: Kernels): ToneTables {
    const bytesPerSample = this.#bytesPerSample;
    const tone = { settings: this.#heap.allocate(toneSettingsCount * 4), table: 0 };
    tone.table = this.#heap.allocate(kernels.toneTableBytes(bytesPerSample));
    kernels.toneTables(bytesPerSample, tone.table);
    writeToneSettings(new Float32Array(this.#heap.memory.buffer, tone.settings, toneSettingsCount), map);
    return tone;
  }

  /**
   * Measures the noise; has to run once before painting. A photo that is read by rows is gone through for it, and
   * its first whole level is made in the same go.
   */
  async measureNoise(pool: WorkerPool, signal?: AbortSignal): Promise<void> {
    const bands = Math.ceil(this.heightPx / bandRows);
    const records = this.#heap.allocate(bands * noiseRecordBytes);
    const count = (source: SourcePicture, top: number, rows: number) =>
      pool.run(
        {
          kind: 'noise',
          grid: { ...rowGrid(this.widthPx, rows, bandRows), yPx: top },
          source,
          records,
          recordBytes: noiseRecordBytes,
        },
        { signal, scratchBytes: 0 },
      );
    try {
      new Uint8Array(this.#heap.memory.buffer, records, bands * noiseRecordBytes).fill(0);
      const photo = this.#pictures[0];
      if (photo) await count(photo, 0, this.heightPx);
      else await this.#sweep(pool, count, signal);
      const buffer = this.#heap.memory.buffer;
      const total = sumNoiseRecords(
        Array.from({ length: bands }, (_, i) => readNoiseRecord(buffer, records + i * noiseRecordBytes)),
      );
      this.noiseFloor = autoNoiseFloor(noiseSigma(total, this.#bytesPerSample));
    } finally {
      this.#heap.free(records);
    }
  }

  /** The whole picture of level 0 or of one from `firstWholeLevel` on; builds the pyramid down to it. */
  async level(index: number, pool: WorkerPool, signal?: AbortSignal): Promise<SourcePicture> {
    for (let next = Math.min(index, this.firstWholeLevel); next <= index; next++) {
      if (this.#pictures[next]) continue;
      const finer = next === 1 || next > this.firstWholeLevel ? this.#pictures[next - 1] : undefined;
      if (!finer) {
        await this.#sweep(pool, null, signal);
        continue;
      }
      const size = this.levels[next];
      const made = this.#wholeLevel(size);
      try {
        const rows = { widthPx: size.widthPx, top: 0, bottom: size.heightPx };
        await runHalving(pool, finer, { pointer: made.pointer, top: 0 }, rows, signal);
      } catch (error) {
        this.#heap.free(made.pointer);
        throw error;
      }
      this.#keep(next, made);
    }
    return this.#pictures[index]!;
  }

  #wholeLevel(size: { widthPx: number; heightPx: number }): SourcePicture {
    const pointer = this.#heap.allocate(size.widthPx * size.heightPx * 16);
    return { pointer, ...size, bytesPerSample: 0, channels: 4 };
  }

  /** Another painting may have made it meanwhile. */
  #keep(index: number, made: SourcePicture): void {
    if (this.#pictures[index]) this.#heap.free(made.pointer);
    else this.#pictures[index] = made;
  }

  /** Goes through the photo from top to bottom and makes the first whole level of what lies between. */
  async #sweep(
    pool: WorkerPool,
    lookAt: ((source: SourcePicture, top: number, rows: number) => Promise<unknown>) | null,
    signal?: AbortSignal,
  ): Promise<void> {
    const rows = new PhotoRows(this, pool, this.#heap, signal);
    const index = this.firstWholeLevel;
    const size = index < this.levels.length ? this.levels[index] : null;
    let made: SourcePicture | null = null;
    try {
      const finest = lookAt && (await rows.level(0)).reader(0);
      const finer = size && (await rows.level(index - 1)).reader(0);
      rows.begin();
      made = size && this.#wholeLevel(size);
      let done = 0;
      for (let top = 0; top < this.heightPx; top += bandRows) {
        const bottom = Math.min(this.heightPx, top + bandRows);
        if (lookAt && finest) {
          await finest.need(top - 1, bottom + 1);
          await lookAt(finest.picture, top, bottom - top);
        }
        if (!size || !finer || !made) continue;
        const next = bottom === this.heightPx ? size.heightPx : bottom >> index;
        if (next <= done) continue;
        await finer.need(2 * done, 2 * next);
        const place = { widthPx: size.widthPx, top: done, bottom: next };
        await runHalving(pool, finer.picture, { pointer: made.pointer, top: 0 }, place, signal);
        done = next;
      }
      if (made) this.#keep(index, made);
      made = null;
    } finally {
      if (made) this.#heap.free(made.pointer);
      rows.close();
    }
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
    this.#source?.close();
    this.#source = null;
    for (const picture of this.#pictures.splice(0)) if (picture) this.#heap.free(picture.pointer);
    if (this.#tone) {
      this.#heap.free(this.#tone.settings);
      this.#heap.free(this.#tone.table);
      this.#tone = null;
    }
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
