import { host, isUnwanted } from '../host/host.ts';

/** A frame's picture that is wanted. */
export interface WantedPicture {
  frameId: string;
  /** As the series tells it; another key asks for another picture. */
  pictureKey: string;
}

interface Held {
  picture: ImageData;
  key: string;
  rough: boolean;
  longEdgePx: number;
}

/** How the names of rough pictures end. */
const roughName = 'rough';
/** Pictures kept in the window. */
const shelfBytes = 72 * 2 ** 20;
/** The browser opens six connections at most, and one carries the events. */
const atOnce = 3;
/** Fine ones take longer: there is always room beside one for rough ones that come into view. */
const fineAtOnce = 1;

/**
 * The pictures of the frames in and around the view. Rough ones are asked for first, then fine ones, each in the order
 * given; what is no longer wanted is called off. Invariants: at most `atOnce` are under way; together no more than
 * `shelfBytes`, the least recently used going first.
 */
export class PictureShelf {
  readonly #held = new Map<string, Held>();
  readonly #underWay = new Map<string, AbortController>();
  readonly #failed = new Set<string>();
  readonly #listeners = new Map<string, Set<() => void>>();
  #heldBytes = 0;
  #wanted: readonly WantedPicture[] = [];
  #seriesId: string | null = null;
  #longEdgePx = 256;

  get heldBytes(): number {
    return this.#heldBytes;
  }

  /** Another series, or none: everything goes. */
  follow(seriesId: string | null): void {
    if (seriesId === this.#seriesId) return;
    this.#seriesId = seriesId;
    for (const work of this.#underWay.values()) work.abort();
    this.#wanted = [];
    this.#held.clear();
    this.#failed.clear();
    this.#heldBytes = 0;
  }

  /** What is wanted from now on, the most pressing first. */
  want(wanted: readonly WantedPicture[], longEdgePx: number): void {
    this.#wanted = wanted;
    this.#longEdgePx = longEdgePx;
    const names = new Set(wanted.map((one) => this.#nameOf(one, false)));
    // A rough one is there before calling it off would be.
    for (const [name, work] of this.#underWay)
      if (!name.endsWith(roughName) && !names.has(name)) work.abort();
    this.#next();
  }

  /** The best picture there is of a frame, however old. */
  picture(frameId: string): ImageData | null {
    return this.#held.get(frameId)?.picture ?? null;
  }

  listen(frameId: string, listener: () => void): () => void {
    const listeners = this.#listeners.get(frameId) ?? new Set();
    this.#listeners.set(frameId, listeners.add(listener));
    return () => {
      listeners.delete(listener);
      if (listeners.size === 0) this.#listeners.delete(frameId);
    };
  }

  #next(): void {
    while (this.#underWay.size < atOnce) {
      const rough = this.#wanted.find((one) => this.#isMissing(one, true));
      const fineUnderWay = [...this.#underWay.keys()].filter((name) => !name.endsWith(roughName)).length;
      const mayBeFine = rough === undefined && fineUnderWay < fineAtOnce;
      const next = mayBeFine ? this.#wanted.find((one) => this.#isMissing(one, false)) : rough;
      if (!next) return;
      void this.#fetch(next, rough !== undefined);
    }
  }

  #isMissing(wanted: WantedPicture, rough: boolean): boolean {
    const name = this.#nameOf(wanted, rough);
    if (this.#underWay.has(name) || this.#failed.has(name)) return false;
    const held = this.#held.get(wanted.frameId);
    if (!held || held.key !== wanted.pictureKey) return rough || !this.#isComing(wanted);
    return !rough && (held.rough || held.longEdgePx < this.#longEdgePx);
  }

  #isComing(wanted: WantedPicture): boolean {
    return this.#underWay.has(this.#nameOf(wanted, true));
  }

  async #fetch({ frameId, pictureKey }: WantedPicture, rough: boolean): Promise<void> {
    const seriesId = this.#seriesId;
    if (!seriesId) return;
    const name = this.#nameOf({ frameId, pictureKey }, rough);
    const longEdgePx = this.#longEdgePx;
    const work = new AbortController();
    this.#underWay.set(name, work);
    try {
      const { header, planes } = await host.callForFrame(
        'paintFramePicture',
        { seriesId, frameId, longEdgePx, rough },
        { signal: work.signal },
      );
      if (seriesId !== this.#seriesId || work.signal.aborted) return;
      const pixels = new Uint8ClampedArray(planes.rgba as Uint8Array<ArrayBuffer>);
      const picture = new ImageData(pixels, header.widthPx, header.heightPx);
      this.#keep(frameId, { picture, key: pictureKey, rough, longEdgePx });
    } catch (error) {
      // The frame says by itself what is wrong with it; it is not asked for again and again.
      if (!isUnwanted(error) && !work.signal.aborted) this.#failed.add(name);
    } finally {
      this.#underWay.delete(name);
      this.#next();
    }
  }

  #keep(frameId: string, fresh: Held): void {
    const old = this.#held.get(frameId);
    if (old?.key === fresh.key && !old.rough && fresh.rough) return;
    this.#drop(frameId);
    this.#held.set(frameId, fresh);
    this.#heldBytes += fresh.picture.data.byteLength;
    for (const oldest of this.#held.keys()) {
      if (this.#heldBytes <= shelfBytes) break;
      this.#drop(oldest);
    }
    for (const listener of this.#listeners.get(frameId) ?? []) listener();
  }

  #drop(frameId: string): void {
    this.#heldBytes -= this.#held.get(frameId)?.picture.data.byteLength ?? 0;
    this.#held.delete(frameId);
  }

  #nameOf({ frameId, pictureKey }: WantedPicture, rough: boolean): string {
    return `${frameId}|${pictureKey}|${rough ? roughName : this.#longEdgePx}`;
  }
}

export const pictureShelf = new PictureShelf();

/** Long edges that fine pictures are asked for at, so that a small change of scale asks for nothing new. */
const pictureEdges = [256, 384, 512, 768, 1024];

export function pictureEdgeFor(longEdgePx: number, devicePixelRatio: number): number {
  const needed = longEdgePx * devicePixelRatio;
  return pictureEdges.find((edge) => edge >= needed * 0.9) ?? pictureEdges[pictureEdges.length - 1];
}
