import type { HostParts, PhotoFacts } from '../hostParts.ts';
import { listFolder } from '../listFolder.ts';
import { describeError } from '../refusal.ts';

/** One photo of a series, and what was found out about it. */
export interface SeriesFrame {
  frameId: string;
  path: string;
  /** Changes when the file does. */
  stamp: string;
  facts: PhotoFacts | null;
  /** Why it cannot be read. */
  fault: string | null;
  isMeasuring: boolean;
  /** It cannot be measured; its painting is not the worse for it. */
  isUnmeasurable: boolean;
}

/** Headers read at the same time. */
const readersAtOnce = 4;

type Files = Awaited<ReturnType<HostParts['loadFiles']>>;

/** The photos of a folder in natural order. Invariant: a file that has not changed keeps what is known of it. */
export class SeriesFrames {
  #frames: SeriesFrame[] = [];

  constructor(private readonly folder: string) {}

  get all(): readonly SeriesFrame[] {
    return this.#frames;
  }

  /** Of each it is known whether it can be read. */
  get areRead(): boolean {
    return this.#frames.every(({ facts, fault }) => facts || fault);
  }

  of(frameId: string | null): SeriesFrame | null {
    return this.#frames.find((frame) => frame.frameId === frameId) ?? null;
  }

  /**
   * Looks into the folder, also again.
   * @returns whether it holds more than is listed
   * @throws FileError where it cannot be read
   */
  async list(): Promise<{ truncated: boolean }> {
    const { photos, truncated } = await listFolder(this.folder);
    const earlier = new Map(this.#frames.map((frame) => [frame.frameId, frame]));
    this.#frames = photos.map(({ name, path, sizeBytes, modifiedAt }) => {
      const stamp = `${modifiedAt} ${sizeBytes}`;
      const known = earlier.get(name);
      if (known?.stamp === stamp) return known;
      const fresh = { facts: null, fault: null, isMeasuring: false, isUnmeasurable: false };
      return { frameId: name, path, stamp, ...fresh };
    });
    return { truncated };
  }

  /** Reads the headers of those that are not read yet; ends early where the series is closed. */
  async readHeaders(files: Files, signal: AbortSignal, onFrame: () => void): Promise<void> {
    const waiting = this.#frames.filter(({ facts, fault }) => !facts && !fault);
    const readers = Array.from({ length: readersAtOnce }, async () => {
      for (let frame = waiting.shift(); frame; frame = waiting.shift()) {
        if (signal.aborted) return;
        try {
          frame.facts = await files.readFacts(frame.path);
          if (!frame.facts) frame.fault = `${frame.frameId} cannot be read.`;
        } catch (failure) {
          frame.fault = describeError(failure, '').body.error.message;
        }
        onFrame();
      }
    });
    await Promise.all(readers);
  }
}
