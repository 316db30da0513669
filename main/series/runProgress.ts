import type { FrameChange } from './runSeries.ts';

/** How far a run is, and how long it will still take. */
export class RunProgress {
  readonly #fractions = new Map<string, number>();
  /** Frames that were painted or failed: what tells how long one takes. */
  #worked = 0;
  #ended = 0;

  constructor(
    readonly total: number,
    private readonly startMs: number = performance.now(),
  ) {}

  note(name: string, change: FrameChange): void {
    if ('fraction01' in change) {
      this.#fractions.set(name, change.fraction01);
      return;
    }
    this.#fractions.delete(name);
    this.#ended += 1;
    if (change.result.state !== 'kept') this.#worked += 1;
  }

  get ended(): number {
    return this.#ended;
  }

  get fraction01(): number {
    return this.total > 0 ? Math.min(1, (this.#ended + this.#underWay) / this.total) : 1;
  }

  /** Null until enough is painted to tell. */
  leftMs(nowMs: number = performance.now()): number | null {
    const done = this.#worked + this.#underWay;
    if (this.#worked < 1) return null;
    return ((nowMs - this.startMs) / done) * (this.total - this.#ended - this.#underWay);
  }

  get #underWay(): number {
    return [...this.#fractions.values()].reduce((sum, fraction01) => sum + fraction01, 0);
  }
}
