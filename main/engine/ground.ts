import type { SourcePicture } from '../../core/pipeline/jobs.ts';
import type { Rect } from '../../core/pixels/photo.ts';
import type { HeldPhoto } from './heldPhoto.ts';
import { PhotoRows } from './photoRows.ts';
import type { SharedHeap } from './sharedHeap.ts';
import type { RowReader } from './slidingRows.ts';
import type { WorkerPool } from './workerPool.ts';

/** Rows of ground made at a time. */
const groundRows = 64;

/** The ground of a region as samples of its own: the photo's at level 0, 8 bits above. */
export async function groundOf(
  held: HeldPhoto,
  level: number,
  region: Rect,
  { pool, heap }: { pool: WorkerPool; heap: SharedHeap },
  signal?: AbortSignal,
): Promise<Uint8Array | Uint16Array> {
  const rows = new PhotoRows(held, pool, heap, signal);
  try {
    const source = (await rows.level(level)).reader(region.yPx);
    // Above level 0 the photo itself is looked at for its alpha only.
    const needsPhoto = level > 0 && held.channels === 4;
    const photo = needsPhoto ? (await rows.level(0)).reader(region.yPx << level) : null;
    rows.begin();
    if (level === 0) return await copyOfPhoto(held, region, source, heap);
    return await coarseGround(held, level, region, { source, photo }, { pool, heap }, signal);
  } finally {
    rows.close();
  }
}

async function copyOfPhoto(
  held: HeldPhoto,
  region: Rect,
  source: RowReader,
  heap: SharedHeap,
): Promise<Uint8Array | Uint16Array> {
  const rowSamples = region.widthPx * held.channels;
  const Samples = held.bytesPerSample === 1 ? Uint8Array : Uint16Array;
  const to = new Samples(rowSamples * region.heightPx);
  const pixelBytes = held.channels * Samples.BYTES_PER_ELEMENT;
  for (let y = 0; y < region.heightPx; y++) {
    const row = region.yPx + y;
    if (y % groundRows === 0)
      await source.need(row, Math.min(row + groundRows, region.yPx + region.heightPx));
    const from = source.picture.pointer + (row * held.widthPx + region.xPx) * pixelBytes;
    to.set(new Samples(heap.memory.buffer, from, rowSamples), y * rowSamples);
  }
  return to;
}

async function coarseGround(
  held: HeldPhoto,
  level: number,
  region: Rect,
  { source, photo }: { source: RowReader; photo: RowReader | null },
  { pool, heap }: { pool: WorkerPool; heap: SharedHeap },
  signal?: AbortSignal,
): Promise<Uint8Array> {
  const { widthPx, heightPx, channels, bytesPerSample } = held;
  const facts: SourcePicture = { pointer: 0, widthPx, heightPx, channels, bytesPerSample };
  const samples = region.widthPx * region.heightPx * channels;
  const out = heap.allocate(samples);
  // Rows that slide are made a few at a time; what is held whole is there at once.
  const step = held.isReadByRows ? groundRows : region.heightPx;
  try {
    for (let top = 0; top < region.heightPx; top += step) {
      const rows = Math.min(step, region.heightPx - top);
      const yPx = region.yPx + top;
      await photo?.need(yPx << level, (yPx + rows) << level);
      await source.need(yPx, yPx + rows);
      await pool.run(
        {
          kind: 'ground',
          grid: {
            ...region,
            yPx,
            heightPx: rows,
            tileWidthPx: region.widthPx,
            tileHeightPx: groundRows,
          },
          source: source.picture,
          photo: photo?.picture ?? facts,
          level,
          out: out + top * region.widthPx * channels,
          outStride: region.widthPx,
        },
        { signal, scratchBytes: 0 },
      );
    }
    return new Uint8Array(heap.memory.buffer, out, samples).slice();
  } finally {
    heap.free(out);
  }
}
