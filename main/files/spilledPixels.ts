import type { RowSource } from '../engine/engineApi.ts';
import type { SpillFile } from './spillFile.ts';

/** Size and kind of pixels. */
export interface PixelFacts {
  widthPx: number;
  heightPx: number;
  channels: 3 | 4;
  bytesPerSample: 1 | 2;
}

/**
 * Pixels in a file, without padding, in the machine's byte order: rows one after the other, or cut into upright
 * strips that follow one another, which is what a quarter turn leaves (`edges`: where the strips begin).
 */
export class SpilledPixels implements RowSource {
  readonly widthPx: number;
  readonly heightPx: number;
  readonly channels: 3 | 4;
  readonly bytesPerSample: 1 | 2;

  constructor(
    readonly file: SpillFile,
    facts: PixelFacts,
    readonly firstByte: number,
    readonly edges: readonly number[] = [0],
  ) {
    this.widthPx = facts.widthPx;
    this.heightPx = facts.heightPx;
    this.channels = facts.channels;
    this.bytesPerSample = facts.bytesPerSample;
  }

  get pixelBytes(): number {
    return this.channels * this.bytesPerSample;
  }

  async readRows(topRow: number, rowCount: number, to: Uint8Array, signal?: AbortSignal): Promise<void> {
    const { edges, file, firstByte, heightPx, pixelBytes, widthPx } = this;
    if (edges.length === 1) return file.read(to, firstByte + topRow * widthPx * pixelBytes, signal);
    for (const [k, left] of edges.entries()) {
      const stripBytes = ((edges[k + 1] ?? widthPx) - left) * pixelBytes;
      const piece = new Uint8Array(stripBytes * rowCount);
      await file.read(piece, firstByte + left * heightPx * pixelBytes + topRow * stripBytes, signal);
      for (let y = 0; y < rowCount; y++)
        to.set(piece.subarray(y * stripBytes, (y + 1) * stripBytes), (y * widthPx + left) * pixelBytes);
    }
  }

  /** Rows as samples of their own. */
  async samples(topRow: number, rowCount: number, signal?: AbortSignal): Promise<Uint8Array | Uint16Array> {
    const bytes = new Uint8Array(rowCount * this.widthPx * this.pixelBytes);
    await this.readRows(topRow, rowCount, bytes, signal);
    return this.bytesPerSample === 1 ? bytes : new Uint16Array(bytes.buffer);
  }

  /** As `discard`: whoever reads the rows has had them all. */
  close(): void {
    this.discard();
  }

  discard(): void {
    this.file.discard();
  }
}
