import type { SourcePicture, TensorPlanes } from '../../core/pipeline/jobs.ts';
import type { SharedHeap } from './sharedHeap.ts';

/**
 * A finished level with its tensor, as the next finer one needs it. Several paintings may share one: the memory
 * goes back when the last of them lets go.
 */
export class CoarseLevel {
  #holders = 1;
  readonly #heap: SharedHeap;

  constructor(
    readonly picture: SourcePicture,
    readonly tensor: TensorPlanes,
    heap: SharedHeap,
  ) {
    this.#heap = heap;
  }

  hold(): this {
    this.#holders++;
    return this;
  }

  letGo(): void {
    this.#holders--;
    if (this.#holders > 0) return;
    this.#heap.free(this.picture.pointer);
    this.#heap.free(this.tensor.pointer);
  }
}
