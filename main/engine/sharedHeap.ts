import { createKernelMemory, maximumPages, pageBytes } from '../../core/kernels/module.ts';

/** The shared memory could not hold what a picture needs. */
export class OutOfMemoryError extends Error {
  override readonly name = 'OutOfMemoryError';
}

/** Blocks start on a cache line, so that two threads never share one. */
const alignBytes = 64;
/** Room after each block: kernels may read a few bytes past the last pixel. */
const slackBytes = 64;

interface Block {
  start: number;
  end: number;
}

/**
 * Hands out pieces of one memory that all threads share. First fit over the gaps between the blocks in use,
 * which are kept sorted by address; grows the memory when no gap is large enough. Main thread only.
 */
export class SharedHeap {
  readonly memory = createKernelMemory();
  readonly #blocks: Block[];

  /** @param reservedBytes what the module's own data takes at the start */
  constructor(reservedBytes = pageBytes) {
    this.#blocks = [{ start: 0, end: reservedBytes }];
  }

  /**
   * @returns byte offset of a piece of at least `bytes`, contents undefined
   * @throws OutOfMemoryError where 4 GiB would not be enough or the system refuses
   */
  allocate(bytes: number): number {
    const size = Math.ceil((bytes + slackBytes) / alignBytes) * alignBytes;
    for (let i = 0; i < this.#blocks.length; i++) {
      const start = this.#blocks[i].end;
      const next = this.#blocks[i + 1]?.start ?? Number.POSITIVE_INFINITY;
      if (next - start < size) continue;
      if (start + size > this.memory.buffer.byteLength) this.#growTo(start + size);
      this.#blocks.splice(i + 1, 0, { start, end: start + size });
      return start;
    }
    throw new OutOfMemoryError('No room left in the shared memory');
  }

  /** Gives a piece back; unknown pointers and 0 are ignored. */
  free(pointer: number): void {
    const i = this.#blocks.findIndex((block) => block.start === pointer);
    if (i > 0) this.#blocks.splice(i, 1);
  }

  /** Bytes now handed out. */
  get usedBytes(): number {
    return this.#blocks.reduce((sum, block) => sum + block.end - block.start, 0);
  }

  #growTo(bytes: number): void {
    const pages = Math.ceil(bytes / pageBytes);
    try {
      if (pages > maximumPages) throw new RangeError('beyond 4 GiB');
      this.memory.grow(pages - this.memory.buffer.byteLength / pageBytes);
    } catch (cause) {
      throw new OutOfMemoryError(
        `The picture needs ${Math.ceil(bytes / 2 ** 20)} MiB at once, more than this machine gives. Close other pictures or work on a smaller one`,
        { cause },
      );
    }
  }
}
