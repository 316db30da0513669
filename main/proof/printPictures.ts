import { addFault } from '../../core/proof/layProof.ts';
import type { PlacedPicture, ProofPage } from '../../core/proof/proofPage.ts';
import { FileError } from '../files/fileError.ts';
import { type ProofPixelSize, proofJpeg, proofRgb } from './proofPicture.ts';
import type { ProofFault, ProofPicture, ProofSource } from './proofSource.ts';
import type { ProofType } from './proofType.ts';

type PlacedOn = Pick<ProofPage, 'boxes' | 'texts'>;

/** Makes the pictures of a sheet one by one; a frame that fails leaves words in its place and the rest go on. */
export class PrintPictures {
  readonly faults: ProofFault[] = [];
  #done = 0;
  #painted: Promise<unknown> = Promise.resolve();

  constructor(
    private readonly sources: readonly ProofSource[],
    private readonly type: ProofType,
    private readonly onProgress?: (fraction01: number) => void,
  ) {}

  /** Notes a frame that fell out before the sheet was laid. */
  noteFault(path: string, message: string): void {
    this.faults.push({ path, message });
  }

  /** @param perPt pixels to a point; fewer where the picture itself has no more */
  jpeg(page: PlacedOn, place: PlacedPicture, perPt: number, signal?: AbortSignal): Promise<Buffer | null> {
    const size = {
      widthPx: Math.min(place.sizePx.widthPx, Math.ceil(place.widthPt * perPt)),
      heightPx: Math.min(place.sizePx.heightPx, Math.ceil(place.heightPt * perPt)),
    };
    return this.#make(page, place, () => proofJpeg(this.#picture(place), size, signal), signal);
  }

  /** @param size exactly these pixels */
  rgb(
    page: PlacedOn,
    place: PlacedPicture,
    size: ProofPixelSize,
    signal?: AbortSignal,
  ): Promise<Buffer | null> {
    return this.#make(page, place, () => proofRgb(this.#picture(place), size, signal), signal);
  }

  #picture(place: PlacedPicture): ProofPicture {
    return this.sources[place.frame].picture;
  }

  /** One painting at a time: each holds its whole photo, and the engine is busy with one. */
  #inTurn<T>(make: () => Promise<T>): Promise<T> {
    const made = this.#painted.then(make);
    this.#painted = made.catch(() => {});
    return made;
  }

  async #make(
    page: PlacedOn,
    place: PlacedPicture,
    make: () => Promise<Buffer>,
    signal?: AbortSignal,
  ): Promise<Buffer | null> {
    try {
      const made = await ('paint' in this.#picture(place) ? this.#inTurn(make) : make());
      this.#done++;
      this.onProgress?.(this.#done / this.sources.length);
      return made;
    } catch (failure) {
      signal?.throwIfAborted();
      const { path } = this.#picture(place);
      this.noteFault(path, failure instanceof Error ? failure.message : String(failure));
      addFault(page, place, faultWords(failure), this.type);
      return null;
    }
  }
}

/** What stands in a frame's place: what is wrong, without the name that stands beneath. */
export function faultWords(failure: unknown): string {
  if (failure instanceof FileError) return `Cannot be shown: ${failure.problem}. ${failure.remedy}`;
  return `Cannot be shown: ${failure instanceof Error ? failure.message : String(failure)}`;
}
