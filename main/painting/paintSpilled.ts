import { createHash } from 'node:crypto';
import type { Parameters } from '../../core/parameters/table.ts';
import type { BandOptions, Engine, EnginePhoto, StageTimes } from '../engine/engineApi.ts';
import type { SpilledPixels } from '../files/spilledPixels.ts';
import { PictureSpill } from '../files/spillPicture.ts';

/** A composed painting in a temporary file; discard it in the end. */
export interface SpilledPainting {
  pixels: SpilledPixels;
  pixelsSha256: string;
  times: StageTimes;
}

/** Paints band by band into a temporary file, from which any format can be written. */
export async function paintSpilled(
  engine: Engine,
  photo: EnginePhoto,
  parameters: Parameters,
  options: BandOptions & { depth: 8 | 16 },
): Promise<SpilledPainting> {
  const { widthPx, heightPx, channels } = photo;
  const { depth, signal } = options;
  const spill = await PictureSpill.begin({
    widthPx,
    heightPx,
    channels,
    bytesPerSample: depth === 8 ? 1 : 2,
  });
  const hash = createHash('sha256');
  try {
    const times = await engine.paintBands(
      photo,
      parameters,
      async ({ pixels }) => {
        hash.update(new Uint8Array(pixels.buffer, pixels.byteOffset, pixels.byteLength));
        await spill.append(pixels, signal);
      },
      options,
    );
    return { pixels: await spill.finish(), pixelsSha256: hash.digest('hex'), times };
  } catch (failure) {
    spill.discard();
    throw failure;
  }
}
