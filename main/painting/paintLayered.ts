import { createHash } from 'node:crypto';
import type { Parameters } from '../../core/parameters/table.ts';
import type { Engine, EnginePhoto } from '../engine/engineApi.ts';
import { type FilledLayer, LayerStore } from '../files/layers/layerStore.ts';
import type { SpilledPixels } from '../files/spilledPixels.ts';
import { PictureSpill } from '../files/spillPicture.ts';
import type { PaintedPixels } from './paintPixels.ts';

/** A painting with what it was composed of. */
export interface LayeredPixels extends PaintedPixels {
  /** From the ground up; they go with `release`. */
  layers: readonly FilledLayer[];
}

/**
 * Paints a held photo at full resolution once, from top to bottom, and takes it apart as it comes: to memory, or to
 * temporary files where the photo itself is in one.
 * @param order `layersDepth`: bits a sample of the layers
 * @throws the signal's reason when it is aborted
 */
export async function paintLayered(
  engine: Engine,
  photo: EnginePhoto,
  order: { parameters: Parameters; depth: 8 | 16; layersDepth: 8 | 16; printLongEdgeMm: number },
  { signal, onProgress }: { signal?: AbortSignal; onProgress?: (fraction01: number) => void },
): Promise<LayeredPixels> {
  const { parameters, depth, layersDepth, printLongEdgeMm } = order;
  const inFiles = photo.isReadByRows;
  const store = await LayerStore.begin(photo, parameters, { depth: layersDepth, inFiles });
  let composed: ComposedRows | null = null;
  try {
    composed = await ComposedRows.begin(photo, depth, inFiles);
    const rows = composed;
    const hash = createHash('sha256');
    const times = await engine.paintBands(
      photo,
      parameters,
      async ({ pixels, strata }) => {
        hash.update(new Uint8Array(pixels.buffer, pixels.byteOffset, pixels.byteLength));
        await rows.append(pixels, signal);
        await store.append(strata!, signal);
      },
      { depth, printLongEdgeMm, signal, onProgress, withStrata: true },
    );
    const release = () => {
      store.discard();
      rows.discard();
    };
    const [pixels, layers] = [await rows.finish(), await store.finish()];
    return { pixels, layers, pixelsSha256: hash.digest('hex'), times, release };
  } catch (failure) {
    store.discard();
    composed?.discard();
    throw failure;
  }
}

/** The composite as it comes, row by row. */
class ComposedRows {
  #at = 0;

  private constructor(
    private readonly held: Uint8Array | Uint16Array | null,
    private readonly spill: PictureSpill | null,
  ) {}

  static async begin(photo: EnginePhoto, depth: 8 | 16, inFile: boolean): Promise<ComposedRows> {
    const { widthPx, heightPx, channels } = photo;
    const bytesPerSample = depth === 8 ? 1 : 2;
    if (inFile)
      return new ComposedRows(
        null,
        await PictureSpill.begin({ widthPx, heightPx, channels, bytesPerSample }),
      );
    const count = widthPx * heightPx * channels;
    return new ComposedRows(depth === 8 ? new Uint8Array(count) : new Uint16Array(count), null);
  }

  async append(rows: Uint8Array | Uint16Array, signal?: AbortSignal): Promise<void> {
    this.held?.set(rows, this.#at);
    this.#at += rows.length;
    await this.spill?.append(rows, signal);
  }

  async finish(): Promise<Uint8Array | Uint16Array | SpilledPixels> {
    return this.held ?? this.spill!.finish();
  }

  discard(): void {
    this.spill?.discard();
  }
}
