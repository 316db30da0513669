/** Lets as much work go on at once as there is room for; the rest waits in the order in which it came. */
export class Turns {
  #taken = 0;
  #underWay = 0;
  readonly #waiting: { weight: number; start: () => void }[] = [];

  /** @param room for the weights of what is under way; a single piece that weighs more goes alone */
  constructor(private readonly room: number) {}

  /** @throws the signal's reason where it aborts before the turn comes */
  async take<T>(weight: number, signal: AbortSignal | undefined, work: () => Promise<T>): Promise<T> {
    await this.#turn(weight, signal);
    try {
      return await work();
    } finally {
      this.#taken -= weight;
      this.#underWay -= 1;
      this.#next();
    }
  }

  #turn(weight: number, signal?: AbortSignal): Promise<void> {
    return new Promise((resolve, reject) => {
      if (signal?.aborted) return reject(signal.reason);
      const leave = () => {
        this.#waiting.splice(this.#waiting.indexOf(entry), 1);
        reject(signal?.reason);
      };
      const entry = {
        weight,
        start: () => {
          signal?.removeEventListener('abort', leave);
          this.#taken += weight;
          this.#underWay += 1;
          resolve();
        },
      };
      signal?.addEventListener('abort', leave, { once: true });
      this.#waiting.push(entry);
      this.#next();
    });
  }

  #next(): void {
    for (let first = this.#waiting[0]; first; first = this.#waiting[0]) {
      if (this.#underWay > 0 && this.#taken + first.weight > this.room) return;
      this.#waiting.shift();
      first.start();
    }
  }
}
