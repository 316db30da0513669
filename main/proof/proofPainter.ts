import type { Parameters } from '../../core/parameters/table.ts';
import type { CropFrame } from '../../core/print/printPlan.ts';
import type { ToneMap } from '../../core/series/toneMap.ts';
import type { Engine, EnginePhoto } from '../engine/engineApi.ts';
import { createEngine } from '../engine/paintEngine.ts';
import { loadComposeSmall } from '../host/composeSmall.ts';
import type { ComposeSmall } from '../host/hostParts.ts';
import { holdPhoto } from '../painting/holdPhoto.ts';
import { readForPrint } from '../painting/readForPrint.ts';
import type { ProofPixels } from './proofSource.ts';

/** A look that is laid on a photo for the sheet. */
export interface ProofLook {
  parameters: Parameters;
  printLongEdgeMm: number;
  /** What of the photo is printed; all of it unless given. */
  crop?: CropFrame;
  /** Matches the photo to a lead. */
  toneMap?: ToneMap | null;
}

/** Paints photos at about the size of a proof; starts an engine with the first one. */
export class ProofPainter {
  #engine: Promise<Engine> | null = null;
  #compose: Promise<ComposeSmall> | null = null;

  /** @param lent an engine that is there already; it stays the lender's */
  constructor(
    private readonly workers?: number,
    private readonly lent: Promise<Engine> | null = null,
  ) {}

  /**
   * Paints the smallest level of the photo's pyramid that has the pixels asked for: a smaller level predicts the
   * full-size print.
   */
  async paint(
    path: string,
    { parameters, printLongEdgeMm, crop, toneMap }: ProofLook,
    needed: { widthPx: number; heightPx: number },
    signal?: AbortSignal,
  ): Promise<ProofPixels> {
    const file = await readForPrint(path, { printLongEdgeMm, print: { crop } }, { signal });
    const { iccProfile } = file;
    if (!this.lent) this.#engine ??= createEngine({ workers: this.workers });
    this.#compose ??= loadComposeSmall();
    const engine = await (this.lent ?? this.#engine!);
    const photo = await holdPhoto(engine, file, { signal, toneMap });
    try {
      const level = smallestLevel(photo, needed);
      const { strata } = await engine.paintStrata(photo, parameters, { level }, { printLongEdgeMm, signal });
      const { widthPx, heightPx } = strata;
      const pixels = await (await this.#compose)(strata, parameters);
      return { widthPx, heightPx, channels: 4, pixels, iccProfile };
    } finally {
      photo.close();
    }
  }

  async close(): Promise<void> {
    await (await this.#engine)?.close();
  }
}

function smallestLevel({ levels }: EnginePhoto, needed: { widthPx: number; heightPx: number }): number {
  const enough = levels.filter(
    ({ widthPx, heightPx }) => widthPx >= needed.widthPx && heightPx >= needed.heightPx,
  );
  return Math.max(0, enough.length - 1);
}
