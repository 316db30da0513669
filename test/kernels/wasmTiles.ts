import { readFileSync } from 'node:fs';
import { fileURLToPath } from 'node:url';
import { createKernelMemory, type Kernels, pageBytes } from '../../core/kernels/module.ts';
import { type ReferenceImage, sampleAt } from '../../core/kernels/reference/referenceImage.ts';

/** The kernels, and what the module exports for its own tests. */
export interface TestedKernels extends Kernels {
  expOfMinus(src: number, count: number, dst: number): void;
}

/** A quad tile (four float32 a pixel) or a plane (one) in the kernels' memory. */
export interface Tile {
  /** Byte address of the interior's pixel (0, 0). */
  pointer: number;
  strideElements: number;
  widthPx: number;
  heightPx: number;
  haloPx: number;
  lanes: 4 | 1;
}

const modulePath = fileURLToPath(new URL('../../dist/kernels.wasm', import.meta.url));
/** Where allocation begins: past anything the module keeps for itself. */
const firstFreeByte = 1 << 20;

/** One instance of the kernels over shared memory of its own, with a bump allocator that {@link reset} empties. */
export class WasmTiles {
  readonly memory = createKernelMemory();
  readonly kernels: TestedKernels;
  private next = firstFreeByte;

  constructor() {
    const module = new WebAssembly.Module(readFileSync(modulePath));
    const instance = new WebAssembly.Instance(module, {
      env: {
        memory: this.memory,
        abort: () => {
          throw new Error('The kernels aborted');
        },
      },
    });
    this.kernels = instance.exports as unknown as TestedKernels;
  }

  /** Gives everything allocated so far free again. */
  reset(): void {
    this.next = firstFreeByte;
  }

  /** @returns address of `bytes` bytes, 16-aligned, each 0xff: NaN for floats, −1 for integers. */
  allocate(bytes: number): number {
    const pointer = this.next;
    this.next = (pointer + bytes + 31) & ~15;
    const missing = this.next - this.memory.buffer.byteLength;
    if (missing > 0) this.memory.grow(Math.ceil(missing / pageBytes));
    new Uint8Array(this.memory.buffer, pointer, bytes).fill(0xff);
    return pointer;
  }

  bytes(pointer: number, length: number): Uint8Array {
    return new Uint8Array(this.memory.buffer, pointer, length);
  }

  floats(pointer: number, length: number): Float32Array {
    return new Float32Array(this.memory.buffer, pointer, length);
  }

  /** A tile filled with NaN, its halo too. The stride exceeds the width, so that mixing them up shows. */
  blankTile(widthPx: number, heightPx: number, haloPx: number, lanes: 4 | 1 = 4): Tile {
    const strideElements = widthPx + 2 * haloPx + 3;
    const elementBytes = lanes * 4;
    const base = this.allocate(strideElements * (heightPx + 2 * haloPx) * elementBytes);
    const pointer = base + (haloPx * strideElements + haloPx) * elementBytes;
    return { pointer, strideElements, widthPx, heightPx, haloPx, lanes };
  }

  /**
   * A tile cut out of a picture; the halo comes from the neighbours and, beyond the picture, by replication.
   * Quads of a one-channel picture have R = G = B. The fourth lane is R² + G² + B².
   * @param rect the tile's interior; the whole picture unless given
   */
  tileOf(
    image: ReferenceImage,
    haloPx: number,
    rect = { xPx: 0, yPx: 0, widthPx: image.widthPx, heightPx: image.heightPx },
    lanes: 4 | 1 = 4,
  ): Tile {
    const tile = this.blankTile(rect.widthPx, rect.heightPx, haloPx, lanes);
    for (let y = -haloPx; y < rect.heightPx + haloPx; y++) {
      const row = tile.pointer + (y * tile.strideElements - haloPx) * lanes * 4;
      const out = this.floats(row, (rect.widthPx + 2 * haloPx) * lanes);
      for (let i = 0; i < rect.widthPx + 2 * haloPx; i++) {
        const x = rect.xPx + i - haloPx;
        if (lanes === 1) {
          out[i] = sampleAt(image, x, rect.yPx + y);
          continue;
        }
        for (let c = 0; c < 3; c++)
          out[i * 4 + c] = sampleAt(image, x, rect.yPx + y, image.channels === 1 ? 0 : c);
        const [r, g, b] = out.subarray(i * 4, i * 4 + 3);
        out[i * 4 + 3] = Math.fround(
          Math.fround(Math.fround(r * r) + Math.fround(g * g)) + Math.fround(b * b),
        );
      }
    }
    return tile;
  }

  /** The interior, rows without padding: all lanes, or R, G, B of quads as float64. */
  interior(tile: Tile): Float32Array {
    const result = new Float32Array(tile.widthPx * tile.heightPx * tile.lanes);
    for (let y = 0; y < tile.heightPx; y++) {
      const row = tile.pointer + y * tile.strideElements * tile.lanes * 4;
      result.set(this.floats(row, tile.widthPx * tile.lanes), y * tile.widthPx * tile.lanes);
    }
    return result;
  }

  /** R, G, B of a quad tile's interior, or a plane's samples. */
  imageOf(tile: Tile): ReferenceImage {
    const all = this.interior(tile);
    const { widthPx, heightPx } = tile;
    if (tile.lanes === 1) return { widthPx, heightPx, channels: 1, values: Float64Array.from(all) };
    const values = new Float64Array(widthPx * heightPx * 3);
    for (let i = 0; i < widthPx * heightPx; i++) values.set(all.subarray(i * 4, i * 4 + 3), i * 3);
    return { widthPx, heightPx, channels: 3, values };
  }

  /** Whether anything was written outside the interior of a tile made by {@link blankTile}. */
  isHaloUntouched(tile: Tile): boolean {
    for (let y = -tile.haloPx; y < tile.heightPx + tile.haloPx; y++)
      for (let x = -tile.haloPx; x < tile.strideElements - tile.haloPx; x++) {
        if (y >= 0 && y < tile.heightPx && x >= 0 && x < tile.widthPx) continue;
        const at = tile.pointer + (y * tile.strideElements + x) * tile.lanes * 4;
        if (!this.floats(at, tile.lanes).every(Number.isNaN)) return false;
      }
    return true;
  }
}

/** Sizes that kernels are tried at: every remainder by 2, 4 and 8, single rows and columns, 1 to 39 by 1 to 15. */
export const sizeMatrix: readonly (readonly [widthPx: number, heightPx: number])[] = [
  1, 2, 3, 4, 5, 7, 8, 9, 12, 15, 16, 17, 22, 31, 32, 33, 39,
].flatMap((widthPx) => [1, 2, 3, 5, 8, 11, 15].map((heightPx) => [widthPx, heightPx] as const));

/** Largest absolute difference of two arrays of one length; NaN where either holds NaN. */
export function largestDifference(a: ArrayLike<number>, b: ArrayLike<number>): number {
  if (a.length !== b.length) return Number.NaN;
  let largest = 0;
  for (let i = 0; i < a.length; i++) {
    const difference = Math.abs(a[i] - b[i]);
    if (!(difference <= largest)) largest = difference;
    if (Number.isNaN(difference)) return Number.NaN;
  }
  return largest;
}
