import { mkdir } from 'node:fs/promises';
import { extname, join } from 'node:path';
import { noMatch, parametersWithMatch } from '../../../core/series/frameMatch.ts';
import { deliverPainting } from '../../painting/deliverPainting.ts';
import type { RunFrame, RunView } from '../api/runCommands.ts';
import type { EventHub } from '../eventHub.ts';
import type { HostParts } from '../hostParts.ts';
import { placeNew } from '../placeFile.ts';
import { cancelled, describeError } from '../refusal.ts';
import type { WallSeries } from './wallSeries.ts';

const tellEveryMs = 200;
const endings = { jpeg: '.jpg', png: '.png', tiff: '.tif', webp: '.webp' } as const;

/**
 * Paints the frames of a series to files, one after another on all workers. A frame that fails is noted and the rest go
 * on; a photo is never painted over, and a name that is taken gets a number.
 */
export class SeriesRun {
  readonly #frames = new Map<string, RunFrame>();
  /** What is still to be painted, in order. */
  #queue: string[];
  #state: RunView['state'] = 'running';
  #message = '';
  readonly #stop = new AbortController();
  #goOn: () => void = () => undefined;
  #paused: Promise<void> | null = null;
  #toldMs = 0;
  #spentMs = 0;
  #finished = 0;
  readonly #running: Promise<void>;

  constructor(
    private readonly series: WallSeries,
    private readonly outFolder: string,
    private readonly parts: Pick<HostParts, 'loadEngine' | 'loadFiles'>,
    private readonly events: EventHub,
  ) {
    const out = new Set(series.settings.leftOut);
    this.#queue = series.frameIds.filter((frameId) => !out.has(frameId));
    for (const frameId of this.#queue)
      this.#frames.set(frameId, { state: 'waiting', fraction01: 0, message: '', path: null });
    this.#running = this.#run();
  }

  get isOn(): boolean {
    return this.#state === 'running' || this.#state === 'paused';
  }

  view(): RunView {
    const frames = [...this.#frames.values()];
    const count = (state: RunFrame['state']) => frames.filter((frame) => frame.state === state).length;
    const total = frames.length;
    const [done, failed] = [count('painted') + count('kept'), count('failed')];
    const under = frames.reduce(
      (sum, { state, fraction01 }) => sum + (state === 'painting' ? fraction01 : 0),
      0,
    );
    const ahead = total - done - failed - under;
    return {
      outFolder: this.outFolder,
      state: this.#state,
      message: this.#message,
      total,
      done,
      failed,
      fraction01: total > 0 ? (done + failed + under) / total : 1,
      leftMs: this.#finished > 0 ? (this.#spentMs / this.#finished) * ahead : null,
      frames: Object.fromEntries(this.#frames),
    };
  }

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
    this.#paused = null;
    this.#goOn();
    this.#tell();
  }

  /** Frames that wait come next, in the order given. */
  prioritise(frameIds: readonly string[]): void {
    const first = frameIds.filter((frameId) => this.#queue.includes(frameId));
    this.#queue = [...first, ...this.#queue.filter((frameId) => !first.includes(frameId))];
    this.#tell();
  }

  /** Stops; resolves when nothing is being painted or written any more. */
  async cancel(): Promise<void> {
    if (this.isOn) this.#state = 'cancelled';
    this.#stop.abort(cancelled());
    this.#goOn();
    await this.#running;
  }

  async #run(): Promise<void> {
    const { signal } = this.#stop;
    try {
      await mkdir(this.outFolder, { recursive: true });
      for (;;) {
        if (this.#paused) await this.#paused;
        const frameId = this.#queue.shift();
        if (frameId === undefined || signal.aborted) break;
        const startMs = performance.now();
        await this.#paintNoting(frameId, signal);
        this.#spentMs += performance.now() - startMs;
        this.#finished += 1;
      }
      if (this.#state === 'running') this.#state = 'done';
    } catch (failure) {
      this.#state = 'failed';
      this.#message = describeError(failure, '').body.error.message;
    }
    this.#tell();
  }

  async #paintNoting(frameId: string, signal: AbortSignal): Promise<void> {
    this.#note(frameId, { state: 'painting' });
    this.#tell();
    try {
      const path = await this.#paint(frameId, signal);
      this.#note(frameId, { state: 'painted', fraction01: 1, path });
    } catch (failure) {
      if (signal.aborted) this.#note(frameId, { state: 'waiting', fraction01: 0 });
      else this.#note(frameId, { state: 'failed', message: describeError(failure, '').body.error.message });
    }
    this.#tell();
  }

  async #paint(frameId: string, signal: AbortSignal): Promise<string> {
    const { format, depth, quality } = this.series.settings.output;
    const { parameters, printLongEdgeMm } = this.series.lookOf(frameId);
    const found = await this.series.measureNow(frameId, signal);
    const match = found?.match ?? noMatch;
    const [engine, files] = await Promise.all([this.parts.loadEngine(), this.parts.loadFiles()]);
    const photo = await files.readPhoto(this.series.pathOf(frameId), { signal });
    const enginePhoto = await files.holdPhoto(engine, photo, { signal, toneMap: match.toneMap });
    try {
      const { pixels: _, ...file } = photo;
      const base = frameId.slice(0, frameId.length - extname(frameId).length);
      const isExact = format === 'png' || format === 'tiff';
      const order = {
        parameters: parametersWithMatch(parameters, match),
        out: join(this.outFolder, `${base}${endings[format]}`),
        format,
        printLongEdgeMm,
        ...(isExact ? { depth } : { quality }),
      };
      const delivered = await deliverPainting(engine, { enginePhoto, file }, order, {
        signal,
        onProgress: (fraction01) => {
          this.#note(frameId, { fraction01 });
          if (performance.now() - this.#toldMs > tellEveryMs) this.#tell();
        },
        writePicture: files.writePicture,
        place: placeNew,
      });
      return delivered.path;
    } finally {
      enginePhoto.close();
    }
  }

  #note(frameId: string, change: Partial<RunFrame>): void {
    this.#frames.set(frameId, { ...this.#frames.get(frameId)!, ...change });
  }

  #tell(): void {
    this.#toldMs = performance.now();
    this.events.send('runProgress', { seriesId: this.series.seriesId, run: this.view() });
  }
}
