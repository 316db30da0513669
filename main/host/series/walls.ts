import type { EventHub } from '../eventHub.ts';
import type { HostParts } from '../hostParts.ts';
import { Refusal } from '../refusal.ts';
import type { RunningCalls } from '../runningCalls.ts';
import { FramePictures } from './framePictures.ts';
import type { SeriesRun } from './seriesRun.ts';
import { WallSeries } from './wallSeries.ts';

/** Series that stay open; the one opened first is closed for the next. */
const mostOpen = 2;

/** The open series. Invariant: one for each folder. */
export class Walls {
  readonly pictures: FramePictures;
  readonly #byId = new Map<string, WallSeries>();
  readonly #runs = new Map<string, SeriesRun>();

  constructor(
    private readonly parts: HostParts,
    private readonly events: EventHub,
    private readonly calls: RunningCalls,
  ) {
    this.pictures = new FramePictures(parts);
  }

  /**
   * Opens a folder, or returns the series where it is open.
   * @throws FileError where the folder cannot be read; Refusal where it holds no photos
   */
  async open(folder: string): Promise<WallSeries> {
    const earlier = [...this.#byId.values()].find((series) => series.folder === folder);
    if (earlier) {
      void earlier.refresh().catch(() => undefined);
      return earlier;
    }
    const series = await WallSeries.open(folder, {
      parts: this.parts,
      loadStores: () => this.parts.loadStores(),
      pictures: this.pictures,
      events: this.events,
      isBusy: () => this.calls.count > 0 || [...this.#runs.values()].some((run) => run.isPainting),
      coming: (path) => this.parts.demo?.coming(path) ?? 0,
    });
    this.#byId.set(series.seriesId, series);
    const [oldest] = this.#byId.keys();
    if (this.#byId.size > mostOpen && !this.#runs.get(oldest)?.isOn) await this.close(oldest);
    return series;
  }

  /** @throws Refusal where the series is not, or no longer, open */
  find(seriesId: string): WallSeries {
    const series = this.#byId.get(seriesId);
    if (!series)
      throw new Refusal('NotFound', 'This series is no longer open.', 'Open it again; its changes are kept.');
    return series;
  }

  /** The run of a series, also one that has ended. */
  runOf(seriesId: string): SeriesRun | null {
    return this.#runs.get(seriesId) ?? null;
  }

  /** @throws Refusal where one is under way already, or the paintings would lie among the photos */
  async startRun(seriesId: string, outFolder: string): Promise<SeriesRun> {
    const series = this.find(seriesId);
    const [{ SeriesRun: Run }, { runOrderOf }] = await Promise.all([
      import('./seriesRun.ts'),
      import('./runOrder.ts'),
    ]);
    const { presets } = await this.parts.loadStores();
    const order = await runOrderOf(series, outFolder, presets);
    // Looked at last: another call may have begun one, or closed the series, meanwhile.
    this.find(seriesId);
    if (this.#runs.get(seriesId)?.isOn)
      throw new Refusal('BadRequest', 'This series is being painted already.', 'Stop that run first.');
    const run = new Run(seriesId, order, this.parts, this.events);
    this.#runs.set(seriesId, run);
    return run;
  }

  /** Photos were added to a folder that may be on a wall. */
  folderChanged(): void {
    for (const series of this.#byId.values()) void series.refresh().catch(() => undefined);
  }

  /** Closing one that is not open does nothing. */
  async close(seriesId: string): Promise<void> {
    const series = this.#byId.get(seriesId);
    this.#byId.delete(seriesId);
    await this.#runs.get(seriesId)?.cancel();
    this.#runs.delete(seriesId);
    await series?.close();
  }

  async closeAll(): Promise<void> {
    await Promise.all([...this.#byId.keys()].map((seriesId) => this.close(seriesId)));
  }
}
