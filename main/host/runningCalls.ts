import { cancelled, Refusal } from './refusal.ts';

/** One call under way. */
export interface RunningCall {
  readonly id: string;
  readonly signal: AbortSignal;
  /** Stops the call; the reason is what its caller is told. */
  abort(reason: Refusal): void;
}

/**
 * The calls under way. Invariants: an id belongs to one call at a time; of the calls that share a place
 * (a view of a photo) only the newest is not aborted.
 */
export class RunningCalls {
  readonly #byId = new Map<string, RunningCall>();
  readonly #byPlace = new Map<string, RunningCall>();

  get count(): number {
    return this.#byId.size;
  }

  /**
   * Runs `work` as call `id`.
   * @param requestSignal aborts when the client goes away, where the shell knows
   * @throws Refusal where the id is in use
   */
  async run<T>(
    id: string,
    requestSignal: AbortSignal | undefined,
    work: (call: RunningCall) => Promise<T>,
  ): Promise<T> {
    if (this.#byId.has(id))
      throw new Refusal(
        'BadRequest',
        `A call with the id ${id} is under way.`,
        'Give every call its own id.',
      );
    const controller = new AbortController();
    const call = { id, signal: controller.signal, abort: (reason: Refusal) => controller.abort(reason) };
    const leave = () => controller.abort(cancelled());
    if (requestSignal?.aborted) leave();
    requestSignal?.addEventListener('abort', leave, { once: true });
    this.#byId.set(id, call);
    try {
      controller.signal.throwIfAborted();
      return await work(call);
    } finally {
      requestSignal?.removeEventListener('abort', leave);
      this.#byId.delete(id);
      for (const [place, holder] of this.#byPlace) if (holder === call) this.#byPlace.delete(place);
    }
  }

  /** Makes `call` the newest at `place`; the one before it is told that it was superseded. */
  takePlace(place: string, call: RunningCall): void {
    const earlier = this.#byPlace.get(place);
    this.#byPlace.set(place, call);
    earlier?.abort(new Refusal('Superseded', 'A newer picture took the place of this one.'));
  }

  /** @returns whether a call of that id was under way */
  cancel(id: string): boolean {
    const call = this.#byId.get(id);
    call?.abort(cancelled());
    return call !== undefined;
  }

  cancelAll(): void {
    for (const call of this.#byId.values()) call.abort(cancelled());
  }
}
