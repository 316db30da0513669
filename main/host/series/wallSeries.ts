import { createHash, randomUUID } from 'node:crypto';
import { basename } from 'node:path';
import { setTimeout as pause } from 'node:timers/promises';
import type { Parameters } from '../../../core/parameters/table.ts';
import { fullParameters } from '../../../core/presets/parametersSchema.ts';
import { latestState } from '../../../core/presets/preset.ts';
import { type FrameMatch, noMatch } from '../../../core/series/frameMatch.ts';
import { matchTone } from '../../../core/series/matchTone.ts';
import {
  lookOfFrame,
  partsOfFrame,
  type SeriesDocument,
  type SeriesSettings,
  startSeries,
} from '../../../core/series/seriesDocument.ts';
import { DelayedSaver } from '../../store/delayedSaver.ts';
import type { Stores } from '../../store/openStores.ts';
import { type LoadedSeries, loadSeries, saveSeries } from '../../store/seriesFile.ts';
import type { SeriesView } from '../api/seriesCommands.ts';
import type { EventHub } from '../eventHub.ts';
import type { HostParts, PhotoFacts } from '../hostParts.ts';
import { firstPresetName } from '../photoMemories.ts';
import { describeError, Refusal } from '../refusal.ts';
import {
  FrameMeasuring,
  type MeasuredFrame,
  type MeasuringOrder,
  type MeasuringPlan,
  TooLargeToMeasure,
} from './frameMeasuring.ts';
import type { FramePictures, PaletteOf, PictureOrder } from './framePictures.ts';
import { oddities } from './oddities.ts';
import { type SeriesFrame, SeriesFrames } from './seriesFrames.ts';

export interface WallParts {
  parts: Pick<HostParts, 'loadEngine' | 'loadFiles'>;
  loadStores(): Promise<Stores>;
  pictures: FramePictures;
  events: EventHub;
  /** The window waits for something: measuring can wait. */
  isBusy(): boolean;
  /** How many plates of the demo are still to come into this folder. */
  coming(folder: string): number;
}

/** A series is shown after this long, whether all sizes are known or not. */
const firstAnswerMs = 120;
const tellEveryMs = 400;
/** Measuring waits until pictures have rested for this long: somebody may be scrolling. */
const restMs = 1200;

/** One open series: its settings, what is known of its frames, and what is being found out. */
export class WallSeries {
  readonly seriesId = randomUUID();
  readonly #frames: SeriesFrames;
  #document!: SeriesDocument;
  #loaded!: LoadedSeries;
  #remarks: string[] = [];
  #saver!: DelayedSaver<SeriesDocument>;
  readonly #measuring: FrameMeasuring;
  readonly #closing = new AbortController();
  #tellTimer: NodeJS.Timeout | undefined;
  #lastPictureMs = 0;

  private constructor(
    readonly folder: string,
    private readonly wall: WallParts,
  ) {
    this.#frames = new SeriesFrames(folder);
    this.#measuring = new FrameMeasuring(
      wall.parts,
      {
        begun: (frameId) => this.#note(frameId, { isMeasuring: true }),
        measured: (frameId) => this.#note(frameId, { isMeasuring: false }),
        failed: (frameId, failure) => this.#noteFailure(frameId, failure),
      },
      () => !wall.isBusy() && wall.pictures.isIdle && performance.now() - this.#lastPictureMs > restMs,
    );
  }

  /** @throws FileError where the folder cannot be read; Refusal where it holds no photos */
  static async open(folder: string, wall: WallParts): Promise<WallSeries> {
    const series = new WallSeries(folder, wall);
    await series.#open();
    return series;
  }

  get settings(): SeriesSettings {
    return this.#document;
  }

  get frameIds(): string[] {
    return this.#frames.all.map(({ frameId }) => frameId);
  }

  async #open(): Promise<void> {
    const [{ presets }, loaded] = await Promise.all([this.wall.loadStores(), loadSeries(this.folder)]);
    this.#loaded = loaded;
    this.#remarks = [...loaded.remarks];
    await this.#list();
    if (this.#frames.all.length === 0)
      throw new Refusal('FileError', `${this.folder} holds no photographs.`, 'Choose a folder of photos.');
    if (loaded.document) this.#document = loaded.document;
    else {
      const { preset } = await presets.get(firstPresetName);
      this.#document = startSeries(this.frameIds, { name: preset.name, state: latestState(preset) });
    }
    this.#saver = new DelayedSaver((document: SeriesDocument) => this.#save(document));
    await Promise.race([
      this.#readHeaders(),
      pause(firstAnswerMs, undefined, { signal: this.#closing.signal }).catch(() => undefined),
    ]);
  }

  /** Looks at the folder again: photos may have come or gone. */
  async refresh(): Promise<void> {
    await this.#list();
    await this.#readHeaders();
    this.tell();
  }

  view(): SeriesView {
    const plan = this.#plan();
    const orders = new Map(plan.frames.map((order) => [order.frameId, order]));
    const known = new Map<string, MeasuredFrame>();
    for (const order of plan.frames) {
      const found = this.#measuring.known(order, plan);
      if (found) known.set(order.frameId, found);
    }
    const odd = oddities(known, this.#document);
    return {
      seriesId: this.seriesId,
      folder: this.folder,
      name: basename(this.folder),
      settings: settingsOf(this.#document),
      frames: this.#frames.all.map((frame) => {
        const found = known.get(frame.frameId);
        const isOver = found !== undefined || frame.isUnmeasurable || !orders.has(frame.frameId);
        return {
          frameId: frame.frameId,
          path: frame.path,
          widthPx: frame.facts?.widthPx ?? 0,
          heightPx: frame.facts?.heightPx ?? 0,
          state: frame.fault
            ? 'unreadable'
            : isOver && frame.facts
              ? 'ready'
              : frame.isMeasuring
                ? 'measuring'
                : 'waiting',
          ...(frame.fault && { message: frame.fault }),
          measured: found?.after ?? null,
          odd: odd.get(frame.frameId) ?? null,
          pictureKey: this.#pictureKey(frame, found ?? null),
        };
      }),
      access: this.#loaded.access,
      problems: [
        ...this.#remarks.map((message) => ({ name: '', message })),
        ...this.#frames.all.flatMap(({ frameId, fault }) =>
          fault ? [{ name: frameId, message: fault }] : [],
        ),
      ],
      coming: this.wall.coming(this.folder),
    };
  }

  change(change: Partial<SeriesSettings>): void {
    const named = Object.fromEntries(Object.entries(change).filter(([, value]) => value !== undefined));
    this.#document = { ...this.#document, ...named };
    if (this.#loaded.access === 'writable') this.#saver.change(this.#document);
    this.#measure();
  }

  /** What is needed to paint a frame's picture. */
  pictureOrder(frameId: string): PictureOrder {
    this.#lastPictureMs = performance.now();
    const frame = this.#find(frameId);
    const { facts } = frame;
    if (!facts) throw new Refusal('FileError', frame.fault ?? `${frameId} is not read yet.`, 'Try again.');
    const found = this.#knownOf(frame);
    return {
      frameId,
      path: frame.path,
      stamp: frame.stamp,
      facts,
      ...this.lookOf(frameId),
      pictureKey: this.#pictureKey(frame, found),
      match: async (palette) => found?.match ?? this.#quickMatch(frame, facts, palette),
    };
  }

  lookOf(frameId: string): { parameters: Parameters; printLongEdgeMm: number } {
    return {
      parameters: fullParameters(lookOfFrame(this.#document, frameId).parameters),
      printLongEdgeMm: this.#document.output.printLongEdgeMm,
    };
  }

  pathOf(frameId: string): string {
    return this.#find(frameId).path;
  }

  /** Tells the window, before long, that there is something new. */
  tell(): void {
    if (this.#closing.signal.aborted) return;
    this.#tellTimer ??= setTimeout(() => {
      this.#tellTimer = undefined;
      this.wall.events.send('seriesChanged', { seriesId: this.seriesId });
    }, tellEveryMs);
  }

  async close(): Promise<void> {
    this.#closing.abort();
    clearTimeout(this.#tellTimer);
    await Promise.all([this.#measuring.stop(), this.#saver.flush()]);
  }

  async #save(document: SeriesDocument): Promise<void> {
    const { version, document: understood } = this.#loaded;
    try {
      const known = { version, isUnderstood: version === null || understood !== null };
      const saved = await saveSeries(this.folder, document, known);
      this.#loaded = { ...this.#loaded, version: saved.version, document };
      if (saved.putAside) this.#remark(`Another series file lay here; it is kept as ${saved.putAside}.`);
    } catch (failure) {
      this.#remark(describeError(failure, '').body.error.message);
    }
  }

  #remark(message: string): void {
    if (!this.#remarks.includes(message)) this.#remarks.push(message);
    this.tell();
  }

  async #list(): Promise<void> {
    const { truncated } = await this.#frames.list();
    if (truncated) this.#remark(`${this.folder} holds too many files; the last ones are not shown.`);
  }

  async #readHeaders(): Promise<void> {
    await this.#frames.readHeaders(await this.wall.parts.loadFiles(), this.#closing.signal, () =>
      this.tell(),
    );
    this.#measure();
  }

  #measure(): void {
    if (this.#closing.signal.aborted || !this.#frames.areRead) return;
    for (const frame of this.#frames.all) frame.isMeasuring = false;
    this.#measuring.start(this.#plan());
    this.tell();
  }

  /** What is measured: every frame that is neither left out nor unreadable. A lead that is left out leads on. */
  #plan(): MeasuringPlan {
    const { leftOut, lead, match, output } = this.#document;
    const out = new Set(leftOut);
    const readable = this.#frames.all.flatMap((frame): MeasuringOrder[] => {
      const { frameId, path, stamp, facts } = frame;
      if (!facts) return [];
      const photo = { path, stamp, facts };
      const { parameters } = this.lookOf(frameId);
      return [{ frameId, photo, parameters, parts: partsOfFrame(this.#document, frameId) }];
    });
    return {
      frames: readable.filter(({ frameId }) => !out.has(frameId)),
      lead: readable.find(({ frameId }) => frameId === lead) ?? null,
      amount01: match.amount01,
      printLongEdgeMm: output.printLongEdgeMm,
    };
  }

  #knownOf({ frameId }: SeriesFrame): MeasuredFrame | null {
    const plan = this.#plan();
    const order = plan.frames.find((candidate) => candidate.frameId === frameId);
    return order ? this.#measuring.known(order, plan) : null;
  }

  /** The match before the frame was measured: its tone alone, from reduced photos. */
  async #quickMatch(frame: SeriesFrame, facts: PhotoFacts, palette: PaletteOf): Promise<FrameMatch> {
    const { lead, match } = this.#document;
    const leading = this.#frames.of(lead);
    if (!leading?.facts || leading === frame || !partsOfFrame(this.#document, frame.frameId).tone)
      return noMatch;
    try {
      const [own, leads] = await Promise.all([
        palette({ path: frame.path, stamp: frame.stamp, facts }),
        palette({ path: leading.path, stamp: leading.stamp, facts: leading.facts }),
      ]);
      return { ...noMatch, toneMap: matchTone(own, leads, match.amount01) };
    } catch {
      // The picture is worth showing without the match; measuring says what is wrong with the lead.
      return noMatch;
    }
  }

  #pictureKey(frame: SeriesFrame, found: MeasuredFrame | null): string {
    const { lead, match, output } = this.#document;
    const isLead = frame.frameId === lead;
    const leadStamp = this.#frames.of(lead)?.stamp;
    const matched = isLead
      ? null
      : [lead, leadStamp, match.amount01, partsOfFrame(this.#document, frame.frameId), found !== null];
    const look = lookOfFrame(this.#document, frame.frameId).parameters;
    const text = JSON.stringify([frame.stamp, look, matched, output.printLongEdgeMm]);
    return createHash('sha1').update(text).digest('base64url').slice(0, 12);
  }

  #find(frameId: string): SeriesFrame {
    const frame = this.#frames.of(frameId);
    if (!frame) throw new Refusal('NotFound', `${frameId} is no longer in this series.`);
    return frame;
  }

  #note(frameId: string, change: Partial<SeriesFrame>): void {
    const frame = this.#frames.of(frameId);
    if (frame) Object.assign(frame, change);
    this.tell();
  }

  #noteFailure(frameId: string, failure: unknown): void {
    if (failure instanceof TooLargeToMeasure)
      this.#note(frameId, { isMeasuring: false, isUnmeasurable: true });
    else this.#note(frameId, { isMeasuring: false, fault: describeError(failure, '').body.error.message });
  }
}

/** The document without what says which kind of file it is. */
function settingsOf(document: SeriesDocument): SeriesSettings {
  const { format: _, schema: __, ...settings } = document;
  return settings;
}
