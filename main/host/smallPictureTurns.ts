/**
 * Small pictures are painted one at a time, or a few, and wait while a view is being painted: what the eye is on comes
 * first. A view never waits.
 */
export class SmallPictureTurns {
  #viewsUnderWay = 0;
  #smallUnderWay = 0;
  /** In the order they were asked for. */
  readonly #waiting: (() => void)[] = [];

  /** @param atOnce small pictures under way at the same time: with two, one is decoded while another is painted */
  constructor(private readonly atOnce = 1) {}

  /** Nothing is painted and nothing waits. */
  get isIdle(): boolean {
    return this.#viewsUnderWay === 0 && this.#smallUnderWay === 0 && this.#waiting.length === 0;
  }

  async paintView<T>(work: () => Promise<T>): Promise<T> {
    this.#viewsUnderWay += 1;
    try {
      return await work();
    } finally {
      this.#viewsUnderWay -= 1;
      this.#next();
    }
  }

  /** @throws the signal's reason where it aborts before the turn comes */
  async paintSmall<T>(signal: AbortSignal, work: () => Promise<T>): Promise<T> {
    await this.#turn(signal);
    try {
      return await work();
    } finally {
      this.#smallUnderWay -= 1;
      this.#next();
    }
  }

  #turn(signal: AbortSignal): Promise<void> {
    return new Promise((resolve, reject) => {
      if (signal.aborted) return reject(signal.reason);
      const start = () => {
        signal.removeEventListener('abort', leave);
        this.#smallUnderWay += 1;
        resolve();
      };
      const leave = () => {
        this.#waiting.splice(this.#waiting.indexOf(start), 1);
        reject(signal.reason);
      };
      signal.addEventListener('abort', leave, { once: true });
      this.#waiting.push(start);
      this.#next();
    });
  }

  #next(): void {
    if (this.#viewsUnderWay === 0 && this.#smallUnderWay < this.atOnce) this.#waiting.shift()?.();
  }
}
