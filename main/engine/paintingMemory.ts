import type { SharedHeap } from './sharedHeap.ts';

/** Pieces of shared memory that go back together. */
export class PaintingMemory {
  readonly #pointers: number[] = [];
  constructor(readonly heap: SharedHeap) {}

  allocate(bytes: number): number {
    const pointer = this.heap.allocate(bytes);
    this.#pointers.push(pointer);
    return pointer;
  }

  release(): void {
    for (const pointer of this.#pointers.splice(0)) this.heap.free(pointer);
  }
}
