import { setTimeout as pause } from 'node:timers/promises';
import type { Parameters } from '../../../core/parameters/table.ts';
import type { FrameFigures } from '../../../core/series/frameFigures.ts';
import type { MatchParts } from '../../../core/series/frameMatch.ts';
import { SpilledPixels } from '../../files/spilledPixels.ts';
import type { MatchedFrame } from '../../series/frameMatching.ts';
import type { LeadMeasures } from '../../series/matchPhoto.ts';
import type { HostParts } from '../hostParts.ts';
import type { PhotoOnDisk } from './framePictures.ts';

/** A frame to be measured. */
export interface MeasuringOrder {
  frameId: string;
  photo: PhotoOnDisk;
  parameters: Parameters;
  parts: MatchParts;
}

/** What all frames of a series are measured for. */
export interface MeasuringPlan {
  frames: readonly MeasuringOrder[];
  lead: MeasuringOrder | null;
  amount01: number;
  printLongEdgeMm: number;
}

/** What was found out about a frame. */
export interface MeasuredFrame {
  /** Of its painting without the match, and with it. */
  before: FrameFigures;
  after: FrameFigures;
  match: MatchedFrame['match'] | null;
}

export interface MeasuringListener {
  begun(frameId: string): void;
  measured(frameId: string, found: MeasuredFrame): void;
  failed(frameId: string, failure: unknown): void;
}

/** Results kept: a few kilobytes each. */
const resultsKept = 4000;
/** Larger photos are painted in bands; they are not taken into memory for their figures. */
const mostPixels = 40_000_000;
/** Looked at again after this long while something more pressing is under way. */
const waitMs = 250;

/**
 * Measures the frames of a series one after another whenever nothing more pressing is under way. A plan replaces the
 * one before it; what was measured for equal orders is not measured again.
 */
export class FrameMeasuring {
  readonly #results = new Map<string, MeasuredFrame>();
  readonly #leads = new Map<string, LeadMeasures>();
  #work: AbortController | null = null;
  #running: Promise<void> = Promise.resolve();

  /** @param mayWork false while pictures are being painted for somebody who waits */
  constructor(
    private readonly parts: Pick<HostParts, 'loadEngine' | 'loadFiles'>,
    private readonly listener: MeasuringListener,
    private readonly mayWork: () => boolean,
  ) {}

  /** What is known of a frame already. */
  known(order: MeasuringOrder, plan: MeasuringPlan): MeasuredFrame | null {
    return this.#results.get(keyOf(order, plan)) ?? null;
  }

  start(plan: MeasuringPlan): void {
    this.#work?.abort();
    const work = new AbortController();
    this.#work = work;
    this.#running = this.#running.then(() => this.#run(plan, work.signal)).catch(() => undefined);
  }

  async stop(): Promise<void> {
    this.#work?.abort();
    await this.#running;
  }

  async #run(plan: MeasuringPlan, signal: AbortSignal): Promise<void> {
    const order = plan.lead ? [plan.lead, ...plan.frames.filter((f) => f !== plan.lead)] : plan.frames;
    for (const frame of order) {
      if (this.known(frame, plan)) continue;
      while (!this.mayWork()) await pause(waitMs, undefined, { signal });
      signal.throwIfAborted();
      this.listener.begun(frame.frameId);
      try {
        const found = await this.#measure(frame, plan, signal);
        signal.throwIfAborted();
        this.#keep(keyOf(frame, plan), found);
        this.listener.measured(frame.frameId, found);
      } catch (failure) {
        signal.throwIfAborted();
        this.listener.failed(frame.frameId, failure);
        // Without a lead there is nothing to match to.
        if (frame === plan.lead) return;
      }
    }
  }

  async #measure(frame: MeasuringOrder, plan: MeasuringPlan, signal: AbortSignal): Promise<MeasuredFrame> {
    const lead = await this.#leadOf(plan, frame, signal);
    if (frame === plan.lead || !plan.lead) return { before: lead.figures, after: lead.figures, match: null };
    const { matchPhoto, measuringLevel } = await import('../../series/matchPhoto.ts');
    const { amount01, printLongEdgeMm } = plan;
    const engine = await this.parts.loadEngine();
    const photo = await this.#read(frame, signal);
    return matchPhoto(engine, photo, lead, frame.parameters, {
      amount01,
      parts: frame.parts,
      printLongEdgeMm,
      level: measuringLevel(photo),
      signal,
    });
  }

  /** The lead's measures; without a lead, the frame's own. */
  async #leadOf(plan: MeasuringPlan, frame: MeasuringOrder, signal: AbortSignal): Promise<LeadMeasures> {
    const lead = plan.lead ?? frame;
    const key = keyOf(lead, { ...plan, lead: null });
    const known = this.#leads.get(key);
    if (known) return known;
    const { measureLead, measuringLevel } = await import('../../series/matchPhoto.ts');
    const engine = await this.parts.loadEngine();
    const photo = await this.#read(lead, signal);
    const held = await engine.open(photo, { signal });
    const { printLongEdgeMm } = plan;
    const measures = await measureLead(engine, photo, held, lead.parameters, {
      printLongEdgeMm,
      level: measuringLevel(photo),
      signal,
    }).finally(() => held.close());
    if (plan.lead) {
      if (this.#leads.size > 8) this.#leads.clear();
      this.#leads.set(key, measures);
    }
    return measures;
  }

  async #read({ photo }: MeasuringOrder, signal: AbortSignal) {
    const { widthPx, heightPx } = photo.facts;
    if (widthPx * heightPx > mostPixels) throw new TooLargeToMeasure();
    const files = await this.parts.loadFiles();
    const read = await files.readPhoto(photo.path, { signal });
    const { pixels } = read;
    if (!(pixels instanceof SpilledPixels)) return { ...read, pixels };
    pixels.discard();
    throw new TooLargeToMeasure();
  }

  #keep(key: string, found: MeasuredFrame): void {
    this.#results.set(key, found);
    for (const oldest of this.#results.keys()) {
      if (this.#results.size <= resultsKept) return;
      this.#results.delete(oldest);
    }
  }
}

/** A photo that is painted in bands: measuring it would take its whole pixels into memory. */
export class TooLargeToMeasure extends Error {}

function keyOf({ photo, parameters, parts }: MeasuringOrder, plan: MeasuringPlan): string {
  const { amount01, printLongEdgeMm, lead } = plan;
  const leading = lead && [lead.photo.path, lead.photo.stamp, lead.parameters];
  return JSON.stringify([photo.path, photo.stamp, parameters, parts, amount01, printLongEdgeMm, leading]);
}
