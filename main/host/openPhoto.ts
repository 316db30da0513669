import { basename, dirname } from 'node:path';
import type { Engine, EnginePhoto } from '../engine/engineApi.ts';
import type { PhotoFile } from '../files/photoFile.ts';
import type { LevelSize, OpenedPhoto } from './api/hostCommands.ts';
import type { EventHub } from './eventHub.ts';
import type { HostFiles, PhotoFacts } from './hostParts.ts';
import { levelSizes } from './levels.ts';
import { cancelled } from './refusal.ts';

/** A quick picture is made for photos larger than this, at about this long edge. */
const quickLongEdgePx = 1500;

/** The wholly decoded photo: the engine holds its pixels, the host what travels on to the painted file. */
export interface WholePhoto {
  enginePhoto: EnginePhoto;
  file: Omit<PhotoFile, 'pixels'>;
}

/** What a painting is made from. */
export type PaintSource =
  | { kind: 'full'; enginePhoto: EnginePhoto; fromLevel: 0 }
  | { kind: 'quick'; enginePhoto: EnginePhoto; fromLevel: number };

/** One open photo: first perhaps a quick picture, then the whole of it. */
export class OpenPhoto {
  readonly #closing = new AbortController();
  /** Everything that needs the engine's memory to stay: decodes and paintings under way. */
  readonly #uses = new Set<Promise<unknown>>();
  #facts: PhotoFacts | null = null;
  #quick: { enginePhoto: EnginePhoto; fromLevel: number } | null = null;
  #whole: WholePhoto | null = null;
  #wholeComing: Promise<WholePhoto> | null = null;
  #started: Promise<void> | null = null;
  #failed = false;

  constructor(
    readonly photoId: string,
    readonly path: string,
    readonly stamp: string,
    private readonly parts: {
      loadEngine(): Promise<Engine>;
      loadFiles(): Promise<HostFiles>;
      events: EventHub;
    },
  ) {}

  /** Decoding failed after the quick picture had been shown. */
  get failed(): boolean {
    return this.#failed;
  }

  /** Aborts when the photo is closed. */
  get closingSignal(): AbortSignal {
    return this.#closing.signal;
  }

  get levels(): readonly LevelSize[] {
    if (this.#whole) return this.#whole.enginePhoto.levels;
    return this.#facts ? levelSizes(this.#facts.widthPx, this.#facts.heightPx) : [];
  }

  get readyFromLevel(): number {
    return this.#whole ? 0 : (this.#quick?.fromLevel ?? this.levels.length);
  }

  /** Decodes until there is something to paint; the rest goes on by itself. Asked twice, it runs once. */
  start(): Promise<void> {
    this.#started ??= this.use(() => this.#start());
    return this.#started;
  }

  async #start(): Promise<void> {
    const files = await this.parts.loadFiles();
    this.#facts = await files.readFacts(this.path);
    const quick = await this.#decodeQuick(files);
    this.#closing.signal.throwIfAborted();
    this.#wholeComing = this.use(() => this.#decodeWhole(files));
    this.#wholeComing.catch(() => {
      this.#failed = true;
    });
    if (!quick) await this.#wholeComing;
  }

  /** @throws what decoding threw; AbortError when `signal` or the photo's own closing comes first */
  async whole(signal: AbortSignal): Promise<WholePhoto> {
    if (this.#whole) return this.#whole;
    if (!this.#wholeComing) throw cancelled();
    return untilAborted(this.#wholeComing, signal);
  }

  /**
   * Paints from the quick picture where it is fine enough for `level`, else from the whole photo; the
   * engine's memory stays until `work` has ended.
   * @param signal the call's own; `work` gets one that also aborts when the photo is closed
   */
  paint<T>(
    level: number,
    signal: AbortSignal,
    work: (source: PaintSource, signal: AbortSignal) => Promise<T>,
  ): Promise<T> {
    const either = AbortSignal.any([signal, this.closingSignal]);
    // Counted as a use before the source is looked up, so that the quick picture cannot go in between.
    return this.use(async () => {
      either.throwIfAborted();
      if (!this.#whole && this.#quick && level >= this.#quick.fromLevel)
        return work({ kind: 'quick', ...this.#quick }, either);
      const { enginePhoto } = await this.whole(either);
      return work({ kind: 'full', enginePhoto, fromLevel: 0 }, either);
    });
  }

  /** Keeps the engine's memory until `work` has ended. */
  use<T>(work: () => Promise<T>): Promise<T> {
    const running = work();
    const settled = running.catch(() => undefined).finally(() => this.#uses.delete(settled));
    this.#uses.add(settled);
    return running;
  }

  /** Cancels what is under way, waits for it, and gives the memory back. */
  async close(): Promise<void> {
    this.#closing.abort(cancelled());
    while (this.#uses.size > 0) await Promise.all(this.#uses);
    this.#quick?.enginePhoto.close();
    this.#whole?.enginePhoto.close();
    this.#quick = null;
    this.#whole = null;
  }

  /** The photo as the interface sees it. */
  describe(): Omit<OpenedPhoto, 'memory'> {
    const file = this.#whole?.file ?? null;
    const known = file ?? this.#facts;
    if (!known) throw cancelled();
    return {
      photoId: this.photoId,
      path: this.path,
      name: basename(this.path),
      folder: dirname(this.path),
      stage: this.#whole ? 'full' : 'quick',
      readyFromLevel: this.readyFromLevel,
      widthPx: known.widthPx,
      heightPx: known.heightPx,
      format: known.format,
      depth: known.depth,
      channels: known.channels,
      levels: [...this.levels],
      noiseFloor: this.#whole?.enginePhoto.noiseFloor ?? null,
      densityPpi: known.densityPpi ?? null,
      remarks: file?.remarks ?? [],
    };
  }

  async #decodeQuick(files: HostFiles): Promise<boolean> {
    const facts = this.#facts;
    if (!facts?.shrinksOnLoad) return false;
    const longEdgePx = Math.max(facts.widthPx, facts.heightPx);
    const fromLevel = Math.min(3, Math.ceil(Math.log2(longEdgePx / quickLongEdgePx)));
    if (fromLevel < 1) return false;
    // A quick picture that fails is no fault: the whole decode says what is wrong with the file.
    const decoded = await files.readQuick(this.path, facts, fromLevel).catch(() => null);
    if (!decoded) return false;
    const engine = await this.parts.loadEngine();
    this.#quick = { enginePhoto: await engine.open(decoded, { signal: this.closingSignal }), fromLevel };
    return true;
  }

  async #decodeWhole(files: HostFiles): Promise<WholePhoto> {
    const signal = this.closingSignal;
    const photo = await files.readPhoto(this.path, { signal });
    const enginePhoto = await files.holdPhoto(this.parts.loadEngine(), photo, { signal });
    const { pixels: _, ...file } = photo;
    this.#whole = { enginePhoto, file };
    // The quick picture stays with the paintings that use it and goes when they end.
    const quick = this.#quick;
    this.#quick = null;
    if (quick) void this.#closeUnused(quick.enginePhoto);
    this.parts.events.send('photoReady', { photoId: this.photoId });
    return this.#whole;
  }

  async #closeUnused(enginePhoto: EnginePhoto): Promise<void> {
    await Promise.all([...this.#uses]);
    enginePhoto.close();
  }
}

/** Waits for `promise`, but no longer than until `signal` aborts. */
async function untilAborted<T>(promise: Promise<T>, signal: AbortSignal): Promise<T> {
  signal.throwIfAborted();
  let leave = () => {};
  const aborted = new Promise<never>((_, reject) => {
    leave = () => reject(signal.reason);
    signal.addEventListener('abort', leave, { once: true });
  });
  try {
    return await Promise.race([promise, aborted]);
  } finally {
    signal.removeEventListener('abort', leave);
  }
}
