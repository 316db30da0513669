/** Encoded pictures in memory. Invariant: together no more than `maximumBytes`; the least recently used go first. */
export class PictureCache {
  readonly #byKey = new Map<string, Uint8Array<ArrayBuffer>>();
  #heldBytes = 0;

  constructor(private readonly maximumBytes: number) {}

  get heldBytes(): number {
    return this.#heldBytes;
  }

  get(key: string): Uint8Array<ArrayBuffer> | null {
    const held = this.#byKey.get(key);
    if (!held) return null;
    this.#byKey.delete(key);
    this.#byKey.set(key, held);
    return held;
  }

  put(key: string, picture: Uint8Array<ArrayBuffer>): void {
    if (picture.byteLength > this.maximumBytes) return;
    this.#drop(key);
    this.#byKey.set(key, picture);
    this.#heldBytes += picture.byteLength;
    for (const oldest of this.#byKey.keys()) {
      if (this.#heldBytes <= this.maximumBytes) return;
      this.#drop(oldest);
    }
  }

  clear(): void {
    this.#byKey.clear();
    this.#heldBytes = 0;
  }

  #drop(key: string): void {
    this.#heldBytes -= this.#byKey.get(key)?.byteLength ?? 0;
    this.#byKey.delete(key);
  }
}
