import { stat } from 'node:fs/promises';
import { dirname, resolve } from 'node:path';
import { engineVersion } from '../../core/engineVersion.ts';
import {
  type DeliveredPainting,
  type DeliveryVerdict,
  deliveredPaintings,
  judgeDelivery,
} from '../../core/recipes/deliveryCheck.ts';
import type { OutputSettings } from '../../core/recipes/outputSettings.ts';
import type { Recipe } from '../../core/recipes/recipe.ts';
import type { Engine } from '../engine/engineApi.ts';
import { readPhoto } from '../files/readPhoto.ts';
import { fingerprintPhoto } from '../store/photoFingerprint.ts';
import type { HeldPhotoFile } from './deliverPainting.ts';
import { holdPhoto, readAnyPhoto } from './holdPhoto.ts';
import { paintPixels } from './paintPixels.ts';
import { prepareForPrint } from './prepareForPrint.ts';
import { planFinish, printOrderOf } from './printOrder.ts';

/** How far two pictures of one size are apart, in steps of an 8-bit sample. */
export interface PictureDifference {
  largest: number;
  mean: number;
  /** Share of samples that differ at all, 0…1. */
  share01: number;
  /** The file holds less than was painted: its own loss is part of the difference. */
  isLossyFile: boolean;
}

/** What painting a delivery again has shown. */
export interface VerifiedDelivery {
  path: string;
  stateId: string;
  time: string;
  engineVersion: string;
  verdict: DeliveryVerdict;
  /** The delivered file itself: untouched since, changed by somebody, or not there. */
  file: 'untouched' | 'changed' | 'missing';
  /** Of today's painting from the delivered file; null where they are identical or cannot be laid on one another. */
  difference: PictureDifference | null;
}

/**
 * Paints every delivery of a photo again and compares.
 * @param photoSha256 of the photo's bytes as they are now
 * @returns one entry for each delivery, oldest first within each preset; each painting is made once
 * @throws FileError where the photo cannot be read
 */
export async function verifyDeliveries(
  engine: Engine,
  photoPath: string,
  photoSha256: string,
  recipe: Recipe,
  options: { signal?: AbortSignal; onDelivery?: (done: number, count: number) => void } = {},
): Promise<VerifiedDelivery[]> {
  const delivered = deliveredPaintings(recipe);
  const verified: VerifiedDelivery[] = [];
  const work = new RepaintedPhoto(engine, photoPath, options.signal);
  try {
    for (const [index, painting] of delivered.entries()) {
      options.onDelivery?.(index, delivered.length);
      verified.push(await verifyOne(work, photoPath, photoSha256, painting));
    }
    return verified;
  } finally {
    work.close();
  }
}

async function verifyOne(
  work: RepaintedPhoto,
  photoPath: string,
  photoSha256: string,
  painting: DeliveredPainting,
): Promise<VerifiedDelivery> {
  const { delivery } = painting;
  const filePath = resolve(dirname(photoPath), delivery.path);
  const file = await stateOfFile(filePath, delivery.sha256);
  const { path, stateId, time, engineVersion: paintedBy } = delivery;
  const common = { path, stateId, time, engineVersion: paintedBy, file };
  // Of another photo nothing can be said, so nothing is painted.
  if (delivery.photoSha256 !== photoSha256) return { ...common, verdict: 'photo-changed', difference: null };
  const pixelsSha256 = await work.hashOf(painting);
  const verdict = judgeDelivery(delivery, { photoSha256, engineVersion, pixelsSha256 });
  const isToCompare = verdict !== 'identical' && file === 'untouched';
  return {
    ...common,
    verdict,
    difference: isToCompare ? await work.differenceFrom(painting, filePath) : null,
  };
}

async function stateOfFile(path: string, sha256: string): Promise<VerifiedDelivery['file']> {
  const isThere = await stat(path).then(
    (facts) => facts.isFile(),
    () => false,
  );
  if (!isThere) return 'missing';
  return (await fingerprintPhoto(path)).sha256 === sha256 ? 'untouched' : 'changed';
}

/** One photo painted again, as often as its deliveries ask for; read when the first one does. */
class RepaintedPhoto {
  readonly #held = new Map<string, Promise<HeldPhotoFile>>();
  readonly #hashes = new Map<string, Promise<string>>();

  constructor(
    private readonly engine: Engine,
    private readonly photoPath: string,
    private readonly signal?: AbortSignal,
  ) {}

  hashOf(painting: DeliveredPainting): Promise<string> {
    const { delivery, output } = painting;
    const key = JSON.stringify([delivery.stateId, delivery.tightnessId, output]);
    let hash = this.#hashes.get(key);
    if (!hash) {
      hash = this.#paint(painting).then(({ pixelsSha256, release }) => {
        release();
        return pixelsSha256;
      });
      this.#hashes.set(key, hash);
    }
    return hash;
  }

  async differenceFrom(painting: DeliveredPainting, filePath: string): Promise<PictureDifference | null> {
    // In another colour space the numbers differ though nothing went wrong.
    if (painting.output.profile !== 'keep') return null;
    const before = await readPhoto(filePath, { signal: this.signal }).catch(() => null);
    const { widthPx, heightPx } = (await this.#photo(painting.output)).enginePhoto;
    if (before?.widthPx !== widthPx || before.heightPx !== heightPx) return null;
    const today = await this.#paint(painting);
    try {
      const { pixels } = today;
      if (!('BYTES_PER_ELEMENT' in pixels) || pixels.length !== before.pixels.length) return null;
      const isLossyFile = ['jpeg', 'webp'].includes(painting.output.format);
      return { ...pixelDifference(pixels, before.pixels), isLossyFile };
    } finally {
      today.release();
    }
  }

  close(): void {
    for (const held of this.#held.values())
      void held.then(
        ({ enginePhoto }) => enginePhoto.close(),
        () => undefined,
      );
  }

  async #paint({ parameters, output }: DeliveredPainting) {
    const { printLongEdgeMm, format } = output;
    const { enginePhoto, file } = await this.#photo(output);
    const asDelivered = { printLongEdgeMm, format, print: printOrderOf(output) };
    const { paintDepth: depth } = await planFinish(this.photoPath, asDelivered, file, output.depth);
    const order = { parameters, depth, printLongEdgeMm };
    return paintPixels(this.engine, enginePhoto, order, { signal: this.signal });
  }

  /** Read and prepared once for all deliveries of one size. */
  #photo(output: OutputSettings): Promise<HeldPhotoFile> {
    const { printLongEdgeMm } = output;
    const { ppi, crop } = printOrderOf(output);
    const key = ppi === undefined && !crop ? '' : JSON.stringify([printLongEdgeMm, ppi, crop]);
    let held = this.#held.get(key);
    if (!held) {
      held = this.#open({ printLongEdgeMm, ppi, crop });
      this.#held.set(key, held);
    }
    return held;
  }

  async #open(size: Parameters<typeof prepareForPrint>[1]): Promise<HeldPhotoFile> {
    const { engine, signal } = this;
    const photo = await prepareForPrint(await readAnyPhoto(this.photoPath, { signal }), size, signal);
    const { pixels: _, ...file } = photo;
    return { enginePhoto: await holdPhoto(engine, photo, { signal }), file };
  }
}

function pixelDifference(
  one: Uint8Array | Uint16Array,
  other: Uint8Array | Uint16Array,
): Omit<PictureDifference, 'isLossyFile'> {
  // Samples of 16 bits count in steps of 8, so that figures can be told without saying the depth.
  const [oneStep, otherStep] = [one, other].map((samples) => (samples.BYTES_PER_ELEMENT === 2 ? 257 : 1));
  let largest = 0;
  let sum = 0;
  let count = 0;
  for (let i = 0; i < one.length; i++) {
    const difference = Math.abs(one[i] / oneStep - other[i] / otherStep);
    if (difference === 0) continue;
    if (difference > largest) largest = difference;
    sum += difference;
    count++;
  }
  return { largest, mean: sum / one.length, share01: count / one.length };
}
