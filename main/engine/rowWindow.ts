import type { SharedHeap } from './sharedHeap.ts';

/**
 * The rows of a picture that are at hand: a stretch that slides down the picture. Invariant: rows `top` to
 * `bottom` − 1 lie one after the other from `pointer`.
 */
export class RowWindow {
  top = 0;
  bottom = 0;
  #pointer = 0;
  #capacityRows = 0;

  constructor(
    readonly heap: SharedHeap,
    readonly rowBytes: number,
  ) {}

  get pointer(): number {
    return this.#pointer;
  }

  /**
   * Where row 0 would lie. That may be outside the memory, even below 0: kernels reckon addresses modulo 2³², so
   * those of the rows at hand come out right.
   */
  get origin(): number {
    return this.#pointer - this.top * this.rowBytes;
  }

  /** Forgets the rows above `from` and makes room down to `bottom`; what comes new holds anything. */
  slide(from: number, bottom: number): void {
    if (from >= this.bottom) {
      this.top = from;
      this.bottom = from;
    }
    const keptTop = Math.max(from, this.top);
    const keptBytes = (this.bottom - keptTop) * this.rowBytes;
    const keptAt = this.#pointer + (keptTop - this.top) * this.rowBytes;
    const rows = Math.max(bottom, this.bottom) - keptTop;
    const before = this.#pointer;
    if (rows > this.#capacityRows) {
      // Whoever asks for the first time has no halo above yet; growing later would leave a gap in the memory.
      this.#capacityRows = rows + (before === 0 ? 0 : rows >> 3);
      this.#pointer = this.heap.allocate(this.#capacityRows * this.rowBytes);
    }
    if (keptBytes > 0 && keptAt !== this.#pointer)
      new Uint8Array(this.heap.memory.buffer).copyWithin(this.#pointer, keptAt, keptAt + keptBytes);
    if (this.#pointer !== before) this.heap.free(before);
    this.top = keptTop;
  }

  free(): void {
    this.heap.free(this.#pointer);
    this.#pointer = 0;
    this.#capacityRows = 0;
    this.top = 0;
    this.bottom = 0;
  }
}
