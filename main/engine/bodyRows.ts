import type { BodyPlan } from '../../core/pipeline/bodyPlan.ts';
import type { BodyWindow, SourcePicture, TensorPlanes } from '../../core/pipeline/jobs.ts';
import { evenUp } from '../../core/pipeline/jobs.ts';
import type { Rect } from '../../core/pixels/photo.ts';
import type { Pass, PassTimes } from './bodyPainter.ts';
import type { CoarseLevel } from './coarseLevel.ts';
import type { PhotoRows } from './photoRows.ts';
import { coarserInside, grownInside, type Size } from './regions.ts';
import type { SharedHeap } from './sharedHeap.ts';
import { type RowReader, SlidingRows, wholeRows } from './slidingRows.ts';

/** A coarser level that a pass merges with and takes orientation from. */
interface Coarser {
  reader: RowReader;
  tensor: TensorPlanes;
}

interface PassSettings {
  kind: 'quads' | 'body';
  size: Size;
  haloPx: number;
  noiseFloor: number;
  /** The coarser level this pass merges with; a coat has none. */
  coarse: Coarser | null;
  /** A coat takes its orientation from rows of the coarser level that the first pass has asked for. */
  orientation: TensorPlanes | null;
  tensorOut: TensorPlanes | null;
  run: (pass: Pass) => Promise<void>;
}

/** One pass over a level, painted as its rows are asked for. */
class PaintedRows extends SlidingRows {
  constructor(
    heap: SharedHeap,
    region: Rect,
    readonly source: RowReader,
    readonly settings: PassSettings,
  ) {
    const rowPixels = settings.kind === 'body' ? region.widthPx : settings.size.widthPx;
    super(heap, rowPixels * (settings.kind === 'body' ? 6 : 16), region);
  }

  get picture(): SourcePicture {
    return { pointer: this.window.origin, ...this.settings.size, bytesPerSample: 0, channels: 4 };
  }

  get bodyWindow(): BodyWindow {
    const { xPx, widthPx } = this.region;
    return { pointer: this.window.pointer, xPx, yPx: this.window.top, widthPx };
  }

  protected async produce(top: number, bottom: number): Promise<void> {
    const { source, settings, window } = this;
    const { kind, haloPx, coarse } = settings;
    const reachPx = coarse ? 2 * haloPx : haloPx;
    const region = { ...this.region, yPx: top, heightPx: bottom - top };
    await source.need(top - reachPx, evenUp(bottom) + reachPx);
    if (coarse) {
      const read = coarserInside(region, haloPx, coarse.reader.picture);
      await coarse.reader.need(read.yPx, read.yPx + read.heightPx);
    }
    await settings.run({
      source: source.picture,
      region,
      destination: {
        kind,
        pointer: window.pointer,
        strideElements: kind === 'body' ? this.region.widthPx : settings.size.widthPx,
        originX: kind === 'body' ? this.region.xPx : 0,
        originY: window.top,
      },
      coarse: coarse?.reader.picture ?? null,
      orientation: settings.orientation,
      tensorOut: settings.tensorOut,
      noiseFloor: settings.noiseFloor,
    });
  }
}

/** The body of a region, painted as its rows are asked for, with all that it is made from. */
export class BodyRows {
  #body: PaintedRows | null = null;
  #reader: RowReader | null = null;
  readonly #held: { close(): void }[] = [];

  /**
   * @param times what the passes have taken so far
   * @param coarseShare01 share of the work that was done before the first row
   * @param whole the coarse level held whole, let go at the end
   */
  constructor(
    readonly times: PassTimes,
    readonly coarseShare01: number,
    whole: CoarseLevel | null,
  ) {
    if (whole) this.hold({ close: () => whole.letGo() });
  }

  hold<T extends { close(): void }>(part: T): T {
    this.#held.push(part);
    return part;
  }

  top(body: PaintedRows): void {
    this.#body = this.hold(body);
    this.#reader = body.reader(body.region.yPx);
  }

  /** Paints rows `from` to `to` − 1 as far as they are not there; those above `from` may go. */
  async need(from: number, to: number): Promise<void> {
    await this.#reader!.need(from, to);
  }

  /** The rows at hand; they move with the next `need`. */
  get window(): BodyWindow {
    return this.#body!.bodyWindow;
  }

  close(): void {
    for (const part of this.#held.splice(0)) part.close();
  }
}

/** What a body is stacked from. */
export interface BodyStack {
  photo: { levels: readonly Size[] };
  levels: PhotoRows;
  plan: BodyPlan;
  /** The finest level, and the region of it. */
  level: number;
  region: Rect;
  haloPx: number;
  /** Levels that slide: the finest, and those coarser ones that are not held whole. */
  depths: number;
  /** The first coarser one that is. */
  whole: CoarseLevel | null;
  coatFloorFactor: number;
  heap: SharedHeap;
  run(pass: Pass, isFinest: boolean): Promise<void>;
}

/**
 * Stacks the levels of a body over one another: each finer one reads the coarser one's last coat. Every pass is
 * made for as much of its level as the passes after it will read, and takes the steps it would take on a whole
 * level, so the pixels are the same.
 */
export async function stackRows(to: BodyRows, stack: BodyStack): Promise<void> {
  const { photo, plan, level, haloPx, depths, whole } = stack;
  // The region of each level's first pass, its coats coming after it.
  const last = [stack.region];
  const firsts = [stack.region];
  for (let depth = 1; depth < depths; depth++) {
    const size = photo.levels[level + depth];
    last.push(coarserInside(firsts[depth - 1], haloPx, size));
    firsts.push(grownInside(last[depth], plan.coats * haloPx, size));
  }
  let coarse: Coarser | null = whole && { reader: wholeRows(whole.picture).reader(0), tensor: whole.tensor };
  for (let depth = depths - 1; depth >= 1; depth--)
    coarse = await stackLevel(to, stack, depth, last[depth], coarse, last[depth - 1]);
  const source = await readerOf(stack, 0, stack.region, coarse !== null);
  to.top(
    new PaintedRows(stack.heap, stack.region, source, {
      kind: 'body',
      size: photo.levels[level],
      haloPx,
      noiseFloor: plan.noiseFloor,
      coarse,
      orientation: coarse?.tensor ?? null,
      tensorOut: null,
      run: (pass) => stack.run(pass, true),
    }),
  );
}

/** A sliding coarser level with its coats. */
async function stackLevel(
  to: BodyRows,
  stack: BodyStack,
  depth: number,
  region: Rect,
  coarse: Coarser | null,
  finerRegion: Rect,
): Promise<Coarser> {
  const { photo, plan, level, haloPx, heap } = stack;
  const size = photo.levels[level + depth];
  const tensor = tensorPlanes(to, heap, size);
  const levelFloor = plan.noiseFloor / 2 ** depth;
  let rows: PaintedRows | null = null;
  for (let pass = 0; pass <= plan.coats; pass++) {
    const isFirst = pass === 0;
    const own = grownInside(region, (plan.coats - pass) * haloPx, size);
    const source: RowReader = rows
      ? (rows as PaintedRows).reader(own.yPx - haloPx)
      : await readerOf(stack, depth, own, coarse !== null);
    rows = to.hold(
      new PaintedRows(heap, own, source, {
        kind: 'quads',
        size,
        haloPx,
        noiseFloor: isFirst ? levelFloor : levelFloor * stack.coatFloorFactor,
        coarse: isFirst ? coarse : null,
        orientation: coarse?.tensor ?? null,
        tensorOut: pass === plan.coats ? tensor : null,
        run: (painted) => stack.run(painted, false),
      }),
    );
  }
  const firstRow = coarserInside(finerRegion, haloPx, size).yPx;
  return { reader: rows!.reader(firstRow), tensor };
}

async function readerOf(stack: BodyStack, depth: number, region: Rect, merges: boolean): Promise<RowReader> {
  const rows = await stack.levels.level(stack.level + depth);
  return rows.reader(region.yPx - (merges ? 2 : 1) * stack.haloPx);
}

/** A level's tensor as a whole: it is small, and its three planes would each need a window of their own. */
function tensorPlanes(to: BodyRows, heap: SharedHeap, size: Size): TensorPlanes {
  const [widthBlocks, heightBlocks] = [evenUp(size.widthPx) / 2, evenUp(size.heightPx) / 2];
  const pointer = heap.allocate(widthBlocks * heightBlocks * 12);
  to.hold({ close: () => heap.free(pointer) });
  return { pointer, widthBlocks, heightBlocks };
}
