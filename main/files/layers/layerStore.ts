import { fillLayer } from '../../../core/composition/layerRows.ts';
import { layerStack, type StackLayer } from '../../../core/composition/layerStack.ts';
import type { Parameters } from '../../../core/parameters/table.ts';
import type { StrataRows } from '../../../core/pixels/photo.ts';
import { Turns } from '../interruption.ts';
import type { SpilledPixels } from '../spilledPixels.ts';
import { PictureSpill } from '../spillPicture.ts';

/** A layer with its pixels, in memory or in a temporary file. */
export interface FilledLayer extends StackLayer {
  pixels: Uint8Array | Uint16Array | SpilledPixels;
}

export interface LayeredPhoto {
  widthPx: number;
  heightPx: number;
  channels: 3 | 4;
}

/** Pixels turned into samples between two looks at the clock. */
const pieceBytes = 256 * 1024;

/**
 * Takes the strata of a painting apart into layers as its rows come, from top to bottom. Discard it in the end: the
 * layers live as long as it does.
 */
export class LayerStore {
  readonly stack: StackLayer[];
  readonly #filling: LayerFilling[] = [];
  #rows = 0;

  private constructor(
    readonly photo: LayeredPhoto,
    readonly parameters: Parameters,
    depth: 8 | 16,
  ) {
    this.stack = layerStack(parameters, photo, depth);
  }

  /**
   * @param inFiles keeps the layers in temporary files, where they are too large for the memory
   * @throws FileError where the temporary folder takes no file
   */
  static async begin(
    photo: LayeredPhoto,
    parameters: Parameters,
    { depth, inFiles }: { depth: 8 | 16; inFiles: boolean },
  ): Promise<LayerStore> {
    const store = new LayerStore(photo, parameters, depth);
    try {
      for (const layer of store.stack) store.#filling.push(await LayerFilling.begin(layer, photo, inFiles));
      return store;
    } catch (failure) {
      store.discard();
      throw failure;
    }
  }

  /** Takes the next rows. */
  async append(strata: StrataRows, signal?: AbortSignal): Promise<void> {
    const { widthPx } = this.photo;
    const rowCount = strata.ground.length / strata.groundChannels / widthPx;
    const turns = new Turns(signal);
    for (const filling of this.#filling) {
      const { layer } = filling;
      const rowSamples = widthPx * layer.channels;
      const pieceRows = Math.max(1, Math.floor(pieceBytes / (rowSamples * layer.bytesPerSample)));
      for (let row = 0; row < rowCount; row += pieceRows) {
        const count = Math.min(pieceRows, rowCount - row) * rowSamples;
        const piece = filling.place((this.#rows + row) * rowSamples, count);
        fillLayer(layer, strata, this.parameters, row * widthPx, piece);
        await filling.keep(piece, signal);
        if (turns.due) await turns.pause();
      }
    }
    this.#rows += rowCount;
  }

  /** The layers, from the ground up. @throws RangeError where rows are missing */
  async finish(): Promise<FilledLayer[]> {
    if (this.#rows !== this.photo.heightPx)
      throw new RangeError(`Expected ${this.photo.heightPx} rows of strata but received ${this.#rows}`);
    const layers: FilledLayer[] = [];
    for (const filling of this.#filling) layers.push({ ...filling.layer, pixels: await filling.finish() });
    return layers;
  }

  discard(): void {
    for (const filling of this.#filling) filling.discard();
  }
}

/** One layer on its way. */
class LayerFilling {
  private constructor(
    readonly layer: StackLayer,
    private readonly held: Uint8Array | Uint16Array | null,
    private readonly spill: PictureSpill | null,
  ) {}

  static async begin(layer: StackLayer, photo: LayeredPhoto, inFile: boolean): Promise<LayerFilling> {
    const { widthPx, heightPx } = photo;
    const { channels, bytesPerSample } = layer;
    if (inFile)
      return new LayerFilling(
        layer,
        null,
        await PictureSpill.begin({ widthPx, heightPx, channels, bytesPerSample }),
      );
    return new LayerFilling(layer, samples(bytesPerSample, widthPx * heightPx * channels), null);
  }

  /** Where some samples go: their place in the picture, or a piece of their own. */
  place(at: number, count: number): Uint8Array | Uint16Array {
    return this.held?.subarray(at, at + count) ?? samples(this.layer.bytesPerSample, count);
  }

  async keep(piece: Uint8Array | Uint16Array, signal?: AbortSignal): Promise<void> {
    await this.spill?.append(piece, signal);
  }

  async finish(): Promise<Uint8Array | Uint16Array | SpilledPixels> {
    return this.held ?? this.spill!.finish();
  }

  discard(): void {
    this.spill?.discard();
  }
}

function samples(bytesPerSample: 1 | 2, count: number): Uint8Array | Uint16Array {
  return bytesPerSample === 1 ? new Uint8Array(count) : new Uint16Array(count);
}
