import { blendModeNumber } from '../../core/composition/blendModes.ts';
import { compositionSettingsBytes, writeCompositionSettings } from '../../core/composition/compose.ts';
import type { StrataRows } from '../../core/pixels/photo.ts';
import { rowGrid } from './regions.ts';
import type { RowReader } from './slidingRows.ts';
import type { StrataPainting } from './strataPainting.ts';

/** Rows composed at a time. */
const composeRows = 64;

/** Where the strata of the rows composed last lie; 0 for none. */
interface ComposedFrom {
  ground: number;
  body: number;
  line: number;
  relief: number;
}

/** Paints and composes rows of a whole picture, from top to bottom. */
export class BandComposer {
  readonly #painting: StrataPainting;
  readonly #ground: RowReader;
  readonly #settings: number;
  readonly #bytesPerSample: 1 | 2;
  #from: ComposedFrom = { ground: 0, body: 0, line: 0, relief: 0 };

  private constructor(painting: StrataPainting, ground: RowReader, depth: 8 | 16) {
    const { heap } = painting.painters;
    this.#painting = painting;
    this.#ground = ground;
    this.#bytesPerSample = depth === 8 ? 1 : 2;
    this.#settings = heap.allocate(compositionSettingsBytes);
    writeCompositionSettings(
      new Float32Array(heap.memory.buffer, this.#settings, compositionSettingsBytes / 4),
      painting.order.parameters,
    );
  }

  static async begin(painting: StrataPainting, depth: 8 | 16): Promise<BandComposer> {
    const ground = await painting.readSource();
    painting.start();
    return new BandComposer(painting, ground, depth);
  }

  /** Of composed rows. */
  bytesOf(rowCount: number): number {
    const { widthPx, channels } = this.#painting.order.held;
    return widthPx * channels * this.#bytesPerSample * rowCount;
  }

  /** Composed rows as samples; a view. */
  view(pointer: number, rowCount: number): Uint8Array | Uint16Array {
    const { buffer } = this.#painting.painters.heap.memory;
    const bytes = this.bytesOf(rowCount);
    return this.#bytesPerSample === 1
      ? new Uint8Array(buffer, pointer, bytes)
      : new Uint16Array(buffer, pointer, bytes / 2);
  }

  /** Paints rows `top` to `bottom` − 1 and composes them to `out`. */
  async compose(top: number, bottom: number, out: number): Promise<void> {
    const painting = this.#painting;
    const { held, parameters } = painting.order;
    const { signal, onProgress } = painting.options;
    const { body, line, relief } = await painting.layers(top, bottom);
    const startMs = performance.now();
    await this.#ground.need(top, bottom);
    const { pointer, ...photo } = this.#ground.picture;
    const rowBytes = photo.widthPx * photo.channels * photo.bytesPerSample;
    const hasBody = parameters['body.strength'] > 0;
    this.#from = {
      ground: pointer + top * rowBytes,
      body: hasBody ? body.pointer + (top - body.yPx) * body.widthPx * 6 : 0,
      line: parameters['line.strength'] > 0 ? line : 0,
      relief,
    };
    await painting.painters.pool.run(
      {
        kind: 'compose',
        grid: rowGrid(held.widthPx, bottom - top, composeRows),
        // The rows at hand count as a picture of their own.
        ...this.#from,
        ground: { ...photo, pointer: this.#from.ground },
        settings: this.#settings,
        blendMode: blendModeNumber[parameters['line.blend']],
        out,
        outBytesPerSample: this.#bytesPerSample,
        outChannels: held.channels,
      },
      {
        signal,
        scratchBytes: 0,
        onProgress: onProgress && ((fraction01) => onProgress(fraction01, 'compose')),
      },
    );
    painting.times.composeMs += performance.now() - startMs;
  }

  /** The strata of the rows composed last; views, good until the next rows are painted. */
  strata(rowCount: number): StrataRows {
    const { buffer } = this.#painting.painters.heap.memory;
    const { bytesPerSample, channels, widthPx } = this.#ground.picture;
    const count = widthPx * rowCount;
    const { ground, body, line, relief } = this.#from;
    return {
      ground:
        bytesPerSample === 1
          ? new Uint8Array(buffer, ground, count * channels)
          : new Uint16Array(buffer, ground, count * channels),
      groundChannels: channels,
      body: body ? new Uint16Array(buffer, body, count * 3) : null,
      line: line ? new Uint8Array(buffer, line, count) : null,
      relief: relief ? new Uint8Array(buffer, relief, count) : null,
    };
  }

  close(): void {
    this.#painting.painters.heap.free(this.#settings);
  }
}
