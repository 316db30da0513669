/**
 * Small pictures are painted one at a time and wait while a view is being painted: what the eye is on comes
 * first. A view never waits.
 */
export class SmallPictureTurns {
  #viewsUnderWay = 0;
  #smallUnderWay = false;
  /** In the order they were asked for. */
  readonly #waiting: (() => void)[] = [];

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
      this.#smallUnderWay = false;
      this.#next();
    }
  }

  #turn(signal: AbortSignal): Promise<void> {
    return new Promise((resolve, reject) => {
      if (signal.aborted) return reject(signal.reason);
      const start = () => {
        signal.removeEventListener('abort', leave);
        this.#smallUnderWay = true;
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
    if (this.#viewsUnderWay === 0 && !this.#smallUnderWay) this.#waiting.shift()?.();
  }
}
