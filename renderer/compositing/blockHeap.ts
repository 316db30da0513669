import { pageBytes } from '../../core/kernels/module.ts';

const alignmentBytes = 64;
/** The module keeps its own tables at the foot of the memory: blocks start above them. */
const firstByte = 64 * pageBytes;

interface Block {
  offset: number;
  lengthBytes: number;
}

/**
 * Hands out blocks of the kernels' memory. Invariants: `taken` is sorted by offset and its blocks never
 * overlap; the memory grows only when no gap is large enough.
 */
export class BlockHeap {
  private taken: Block[] = [];

  constructor(readonly memory: WebAssembly.Memory) {}

  allocate(lengthBytes: number): number {
    const needed = Math.ceil(lengthBytes / alignmentBytes) * alignmentBytes;
    let offset = firstByte;
    let index = 0;
    for (; index < this.taken.length; index++) {
      const block = this.taken[index];
      if (block.offset - offset >= needed) break;
      offset = block.offset + block.lengthBytes;
    }
    const missingBytes = offset + needed - this.memory.buffer.byteLength;
    if (missingBytes > 0) this.memory.grow(Math.ceil(missingBytes / pageBytes));
    this.taken.splice(index, 0, { offset, lengthBytes: needed });
    return offset;
  }

  free(offset: number): void {
    this.taken = this.taken.filter((block) => block.offset !== offset);
  }
}
