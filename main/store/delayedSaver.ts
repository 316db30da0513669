/** How long after a change a recipe is saved, and how long at most while changes keep coming. */
const pauseMs = 400;
const longestMs = 3000;

/**
 * Saves shortly after each change: when changes pause, or every few seconds while they do not. Saves never
 * overlap, and the newest value is always saved last.
 */
export class DelayedSaver<Value> {
  readonly #save: (value: Value) => Promise<void>;
  readonly #pauseMs: number;
  readonly #longestMs: number;
  #waiting: { value: Value; sinceMs: number } | null = null;
  #timer: NodeJS.Timeout | null = null;
  #running: Promise<void> | null = null;

  /** @param save reports its own failures; what it throws is passed on by `flush` alone */
  constructor(save: (value: Value) => Promise<void>, pause = pauseMs, longest = longestMs) {
    this.#save = save;
    this.#pauseMs = pause;
    this.#longestMs = longest;
  }

  /** Takes a new value. */
  change(value: Value): void {
    const nowMs = Date.now();
    this.#waiting = { value, sinceMs: this.#waiting?.sinceMs ?? nowMs };
    const leftMs = this.#waiting.sinceMs + this.#longestMs - nowMs;
    if (this.#timer) clearTimeout(this.#timer);
    this.#timer = setTimeout(
      () => void this.flush().catch(() => {}),
      Math.max(0, Math.min(this.#pauseMs, leftMs)),
    );
  }

  /** Saves now what waits, and waits for what is being saved: before closing, and before quitting. */
  async flush(): Promise<void> {
    if (this.#timer) clearTimeout(this.#timer);
    this.#timer = null;
    while (this.#running) await this.#running.catch(() => {});
    const waiting = this.#waiting;
    if (!waiting) return;
    this.#waiting = null;
    this.#running = this.#save(waiting.value).finally(() => {
      this.#running = null;
    });
    await this.#running;
    await this.flush();
  }
}
