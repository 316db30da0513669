import { setImmediate as nextTurn } from 'node:timers/promises';

/**
 * Settles as `work` does, or rejects with the signal's reason as soon as it is raised. The image library cannot
 * be stopped halfway: its threads finish what they are at, and the result is dropped.
 */
export async function unlessAborted<T>(work: Promise<T>, signal?: AbortSignal): Promise<T> {
  if (!signal) return work;
  work.catch(() => {}); // A failure after the abort concerns nobody.
  signal.throwIfAborted();
  let onAbort: (() => void) | undefined;
  const aborted = new Promise<never>((_, reject) => {
    onAbort = () => reject(signal.reason);
    signal.addEventListener('abort', onAbort, { once: true });
  });
  try {
    return await Promise.race([work, aborted]);
  } finally {
    if (onAbort) signal.removeEventListener('abort', onAbort);
  }
}

const longestTurnMs = 6;

/** Lets a loop over pixels on the main thread give way every few milliseconds, and notice an abort. */
export class Turns {
  #startedMs = performance.now();

  constructor(readonly signal?: AbortSignal) {}

  /** True when it is time to `await` a `pause()`. */
  get due(): boolean {
    return performance.now() - this.#startedMs > longestTurnMs;
  }

  async pause(): Promise<void> {
    await nextTurn();
    this.signal?.throwIfAborted();
    this.#startedMs = performance.now();
  }
}
