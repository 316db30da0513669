import { type PixelFacts, SpilledPixels } from './spilledPixels.ts';
import { SpillFile } from './spillFile.ts';
import { tiffPixelsAt } from './tiffDirectory.ts';
import { uncompressedTiff } from './tiffWriter.ts';

/** Takes the rows of a picture, from top to bottom, into a temporary TIFF that the image library can read. */
export class PictureSpill {
  #at = tiffPixelsAt;

  private constructor(
    readonly file: SpillFile,
    readonly facts: PixelFacts,
  ) {}

  /** @throws FileError where the temporary folder takes no file */
  static async begin(facts: PixelFacts): Promise<PictureSpill> {
    return new PictureSpill(await SpillFile.create(), facts);
  }

  async append(rows: Uint8Array | Uint16Array, signal?: AbortSignal): Promise<void> {
    const bytes = new Uint8Array(rows.buffer, rows.byteOffset, rows.byteLength);
    await this.file.write(bytes, this.#at, signal);
    this.#at += bytes.length;
  }

  /** @throws RangeError where rows are missing */
  async finish(): Promise<SpilledPixels> {
    const { widthPx, heightPx, channels, bytesPerSample } = this.facts;
    const expected = tiffPixelsAt + widthPx * heightPx * channels * bytesPerSample;
    if (this.#at !== expected)
      throw new RangeError(`Expected ${expected} bytes of picture but received ${this.#at}`);
    const { header, tail, tailAt } = uncompressedTiff(this.facts);
    await this.file.write(header, 0);
    await this.file.write(tail, tailAt);
    return new SpilledPixels(this.file, this.facts, tiffPixelsAt);
  }

  discard(): void {
    this.file.discard();
  }
}
