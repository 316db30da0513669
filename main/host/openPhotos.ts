import { randomUUID } from 'node:crypto';
import { stat } from 'node:fs/promises';
import type { Engine } from '../engine/engineApi.ts';
import { FileError } from '../files/fileError.ts';
import type { EventHub } from './eventHub.ts';
import type { HostFiles } from './hostParts.ts';
import { OpenPhoto } from './openPhoto.ts';
import { Refusal } from './refusal.ts';

/**
 * The photos that the engine holds. Invariants: one entry for each path; at most `maximum` entries, the
 * least recently used closed first; an entry's memory is given back only when no painting uses it.
 */
export class OpenPhotos {
  /** In order of use, least recent first. */
  readonly #byId = new Map<string, OpenPhoto>();

  constructor(
    private readonly parts: {
      loadEngine(): Promise<Engine>;
      loadFiles(): Promise<HostFiles>;
      events: EventHub;
      maximum: number;
    },
  ) {}

  get all(): readonly OpenPhoto[] {
    return [...this.#byId.values()];
  }

  /**
   * Opens the photo at an absolute path, or returns it where it is open and its file unchanged.
   * @throws FileError where there is no usable photo
   */
  async open(path: string, signal: AbortSignal): Promise<OpenPhoto> {
    const stamp = await stampOf(path);
    for (;;) {
      const earlier = this.all.find((photo) => photo.path === path);
      if (!earlier) break;
      if (earlier.stamp === stamp && !earlier.failed) {
        const started = await earlier.start().then(
          () => true,
          // Whoever opened it first gave up, or it failed: this call finds out for itself.
          () => false,
        );
        signal.throwIfAborted();
        if (started) return this.find(earlier.photoId);
      }
      await this.close(earlier.photoId, 'asked');
    }
    const photo = new OpenPhoto(randomUUID(), path, stamp, this.parts);
    this.#byId.set(photo.photoId, photo);
    const stop = () => void this.close(photo.photoId, 'asked').catch(() => undefined);
    signal.addEventListener('abort', stop, { once: true });
    try {
      await photo.start();
      await this.#makeRoom();
      return photo;
    } catch (error) {
      await this.close(photo.photoId, 'asked').catch(() => undefined);
      throw error;
    } finally {
      signal.removeEventListener('abort', stop);
    }
  }

  /**
   * @returns the photo, now the most recently used
   * @throws Refusal where it is not, or no longer, open
   */
  find(photoId: string): OpenPhoto {
    const photo = this.#byId.get(photoId);
    if (!photo)
      throw new Refusal('NotFound', 'This photo is no longer open.', 'Open it again; its changes are kept.');
    this.#byId.delete(photoId);
    this.#byId.set(photoId, photo);
    return photo;
  }

  /** Gives a photo's memory back; closing one that is not open does nothing. */
  async close(photoId: string, reason: 'asked' | 'madeRoom'): Promise<void> {
    const photo = this.#byId.get(photoId);
    if (!photo) return;
    this.#byId.delete(photoId);
    await photo.close();
    this.parts.events.send('photoClosed', { photoId, reason });
  }

  async closeAll(): Promise<void> {
    await Promise.all(this.all.map((photo) => this.close(photo.photoId, 'asked')));
  }

  async #makeRoom(): Promise<void> {
    while (this.#byId.size > this.parts.maximum) {
      const [oldest] = this.#byId.keys();
      await this.close(oldest, 'madeRoom');
    }
  }
}

/** Changes when the file does. */
export async function stampOf(path: string): Promise<string> {
  try {
    const { mtimeMs, size, ino } = await stat(path);
    return `${ino} ${mtimeMs} ${size}`;
  } catch (cause) {
    throw new FileError(path, 'there is no such file', 'Check the name, or choose the photo again', {
      cause,
    });
  }
}
