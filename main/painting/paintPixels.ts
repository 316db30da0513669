import { createHash } from 'node:crypto';
import type { Parameters } from '../../core/parameters/table.ts';
import type {
  Engine,
  EnginePhoto,
  OnProgress,
  PaintReview,
  PaintStage,
  StageTimes,
} from '../engine/engineApi.ts';
import type { SpilledPixels } from '../files/spilledPixels.ts';
import { paintSpilled } from './paintSpilled.ts';

/** A painting, not yet a file. */
export interface PaintedPixels {
  pixels: Uint8Array | Uint16Array | SpilledPixels;
  /** SHA-256 of the interleaved pixels as painted; little-endian where they have 16 bits. */
  pixelsSha256: string;
  times: StageTimes;
  release(): void;
}

/**
 * Paints a held photo at full resolution: to memory, or to a temporary file where the photo itself is in one.
 * @throws the signal's reason when it is aborted
 */
export async function paintPixels(
  engine: Engine,
  photo: EnginePhoto,
  { parameters, depth, printLongEdgeMm }: { parameters: Parameters; depth: 8 | 16; printLongEdgeMm: number },
  { signal, onProgress, review }: { signal?: AbortSignal; onProgress?: OnProgress; review?: PaintReview },
): Promise<PaintedPixels> {
  if (photo.isReadByRows) {
    const report = onProgress && ((fraction01: number) => onProgress(fraction01, 'body'));
    const options = { depth, printLongEdgeMm, signal, onProgress: report };
    const painted = await paintSpilled(engine, photo, parameters, options);
    return { ...painted, release: () => painted.pixels.discard() };
  }
  // A review may have the body painted again: progress waits for it.
  let highest = 0;
  const report =
    onProgress &&
    ((fraction01: number, stage: PaintStage) => {
      highest = Math.max(highest, wholeOf(stage, fraction01));
      onProgress(highest, stage);
    });
  const options = { depth, printLongEdgeMm, signal, onProgress: report, review };
  const painted = await engine.paintPicture(photo, parameters, options);
  const pixelsSha256 = createHash('sha256').update(bytesOf(painted.pixels)).digest('hex');
  return { ...painted, pixelsSha256 };
}

/** How far the whole painting is when a stage is at `fraction01`. */
function wholeOf(stage: PaintStage, fraction01: number): number {
  const [from, to] = {
    grain: [0, 0.05],
    body: [0.05, 0.75],
    line: [0.75, 0.9],
    relief: [0.9, 0.97],
    compose: [0.97, 1],
  }[stage];
  return from + (to - from) * fraction01;
}

function bytesOf(pixels: Uint8Array | Uint16Array): Uint8Array {
  return new Uint8Array(pixels.buffer, pixels.byteOffset, pixels.byteLength);
}
