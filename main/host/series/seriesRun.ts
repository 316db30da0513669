import { EnginePainter } from '../../series/enginePainter.ts';
import type { FrameResult } from '../../series/frameResult.ts';
import { type RunOrder, runSeries } from '../../series/runSeries.ts';
import type { PlannedFrame } from '../../series/seriesPlan.ts';
import type { RunFrame, RunView } from '../api/runCommands.ts';
import type { EventHub } from '../eventHub.ts';
import type { HostParts } from '../hostParts.ts';
import { cancelled, describeError } from '../refusal.ts';

const tellEveryMs = 200;

/** A run as the window sees and steers it; `runSeries` does the painting. */
export class SeriesRun {
  readonly #frames = new Map<string, RunFrame>();
  /** Frames that were asked for first, in order; also those that are painted by now. */
  #first: readonly string[] = [];
  #state: RunView['state'] = 'running';
  #message = '';
  readonly #stop = new AbortController();
  #goOn: () => void = () => undefined;
  #paused: Promise<void> | null = null;
  #toldMs = 0;
  /** Of painted frames, each by itself. */
  #paintedMs = 0;
  #framesAtOnce = 1;
  readonly #running: Promise<void>;

  constructor(
    private readonly seriesId: string,
    private readonly order: RunOrder,
    private readonly parts: Pick<HostParts, 'loadEngine'>,
    private readonly events: EventHub,
  ) {
    for (const { name } of order.frames)
      this.#frames.set(name, { state: 'waiting', fraction01: 0, message: '', path: null });
    this.#running = this.#run();
  }

  /** It is under way or paused. */
  get isOn(): boolean {
    return this.#state === 'running' || this.#state === 'paused';
  }

  get isPainting(): boolean {
    return this.#state === 'running';
  }

  view(): RunView {
    const frames = [...this.#frames.values()];
    const count = (state: RunFrame['state']) => frames.filter((frame) => frame.state === state).length;
    const total = frames.length;
    const [painted, kept, failed] = [count('painted'), count('kept'), count('failed')];
    const done = painted + kept;
    const under = frames.reduce(
      (sum, { state, fraction01 }) => sum + (state === 'painting' ? fraction01 : 0),
      0,
    );
    const ahead = total - done - failed - under;
    return {
      outFolder: this.order.outFolder,
      state: this.#state,
      message: this.#message,
      total,
      done,
      failed,
      fraction01: total > 0 ? (done + failed + under) / total : 1,
      leftMs: painted > 0 ? ((this.#paintedMs / painted) * ahead) / this.#framesAtOnce : null,
      frames: Object.fromEntries(this.#frames),
    };
  }

  /** Frames under way are finished; no other is begun. */
  pause(): void {
    if (this.#state !== 'running') return;
    this.#state = 'paused';
    this.#paused = new Promise((resolve) => {
      this.#goOn = resolve;
    });
    this.#tell();
  }

  resume(): void {
    if (this.#state !== 'paused') return;
    this.#state = 'running';
    this.#endPause();
    this.#tell();
  }

  /** Frames that wait come next, in the order given; frames asked for before come after them. */
  prioritise(frameIds: readonly string[]): void {
    this.#first = [...new Set([...frameIds, ...this.#first])];
    this.#tell();
  }

  /** Stops; resolves when nothing is being painted or written any more. */
  async cancel(): Promise<void> {
    if (this.isOn) this.#state = 'cancelled';
    this.#stop.abort(cancelled());
    this.#endPause();
    await this.#running;
  }

  #endPause(): void {
    this.#paused = null;
    this.#goOn();
  }

  async #run(): Promise<void> {
    try {
      const painter = new EnginePainter(await this.parts.loadEngine());
      this.#framesAtOnce = Math.max(1, Math.min(painter.framesAtOnce, this.#frames.size));
      const { stoppedBy } = await runSeries(painter, this.order, {
        signal: this.#stop.signal,
        mayGoOn: async () => {
          // Paused anew before it woke up, it waits on.
          while (this.#paused) await this.#paused;
        },
        chooseNext: (waiting) => this.#chooseNext(waiting),
        onFrame: (name, change) => {
          if ('result' in change) this.#noteResult(change.result);
          else this.#noteProgress(name, change.fraction01);
        },
      });
      if (stoppedBy) throw stoppedBy;
      if (this.isOn) this.#state = 'done';
    } catch (failure) {
      // A run that was stopped before it could begin was stopped all the same.
      if (this.isOn) {
        this.#state = 'failed';
        this.#message = describeError(failure, '').body.error.message;
      }
    }
    this.#endPause();
    // What was under way when the run ended is not painted.
    for (const [name, { state }] of this.#frames)
      if (state === 'painting') this.#note(name, { state: 'waiting', fraction01: 0 });
    this.#tell();
  }

  #chooseNext(waiting: readonly PlannedFrame[]): PlannedFrame {
    const byName = new Map(waiting.map((frame) => [frame.name, frame]));
    const asked = this.#first.find((name) => byName.has(name));
    const next = asked === undefined ? waiting[0] : byName.get(asked)!;
    this.#note(next.name, { state: 'painting' });
    this.#tell();
    return next;
  }

  #noteProgress(name: string, fraction01: number): void {
    this.#note(name, { fraction01 });
    if (performance.now() - this.#toldMs > tellEveryMs) this.#tell();
  }

  #noteResult({ name, state, reason, output, remarks, milliseconds }: FrameResult): void {
    if (state === 'painted') this.#paintedMs += milliseconds;
    // Why a frame was painted is no news; what is to be said of its painting is.
    const message = state === 'painted' ? remarks.join(' ') : reason;
    this.#note(name, { state, message, path: output, fraction01: state === 'waiting' ? 0 : 1 });
    this.#tell();
  }

  #note(name: string, change: Partial<RunFrame>): void {
    this.#frames.set(name, { ...this.#frames.get(name)!, ...change });
  }

  #tell(): void {
    this.#toldMs = performance.now();
    this.events.send('runProgress', { seriesId: this.seriesId, run: this.view() });
  }
}
