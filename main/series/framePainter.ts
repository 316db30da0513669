import type { Parameters } from '../../core/parameters/table.ts';
import type { OutputSettings } from '../../core/recipes/outputSettings.ts';
import type { FrameFigures } from '../../core/series/frameFigures.ts';
import type { MatchParts } from '../../core/series/frameMatch.ts';
import type { Engine } from '../engine/engineApi.ts';
import { FileError } from '../files/fileError.ts';
import type { LeadMeasures } from './matchPhoto.ts';
import { measureLeadPhoto, paintFrame } from './paintFrame.ts';

/** One frame to be painted, as plain data that another machine can be sent. */
export interface FrameJob {
  key: string;
  name: string;
  photoPath: string;
  out: string;
  parameters: Parameters;
  output: OutputSettings;
  match: { leadPath: string; leadParameters: Parameters; amount01: number; parts: MatchParts } | null;
}

export interface PaintedJob {
  path: string;
  pixelsSha256: string;
  /** Before and after matching; null where the frame was not matched. */
  figures: { before: FrameFigures; after: FrameFigures } | null;
  remarks: string[];
}

export interface PaintOptions {
  signal?: AbortSignal;
  onProgress?: (fraction01: number) => void;
}

/** Whoever paints frames: this process, or others by way of a queue. */
export interface FramePainter {
  /** Frames worth having under way together. */
  readonly framesAtOnce: number;
  /** @throws FileError naming the photo or the output */
  paint(job: FrameJob, options?: PaintOptions): Promise<PaintedJob>;
}

/** Leads are small once measured; a worker may serve several series by turns. */
const leadsKept = 8;

/** Paints frames with an engine of this process. */
export class EnginePainter implements FramePainter {
  /** Decoding and encoding of one frame go on while another is painted. */
  readonly framesAtOnce = 2;
  readonly #leads = new Map<string, Promise<LeadMeasures | null>>();

  constructor(private readonly engine: Engine) {}

  async paint(job: FrameJob, options: PaintOptions = {}): Promise<PaintedJob> {
    const { photoPath, out, parameters, output, match } = job;
    const lead = match && (await this.#leadOf(match, output, options.signal));
    const matching = match && lead ? { lead, amount01: match.amount01, parts: match.parts } : null;
    const order = { photoPath, out, parameters, output, match: matching };
    const { path, pixelsSha256, figures, remarks } = await paintFrame(this.engine, order, options);
    return { path, pixelsSha256, figures, remarks };
  }

  async #leadOf(
    { leadPath, leadParameters }: NonNullable<FrameJob['match']>,
    output: OutputSettings,
    signal?: AbortSignal,
  ): Promise<LeadMeasures | null> {
    const key = JSON.stringify([
      leadPath,
      leadParameters,
      output.printLongEdgeMm,
      output.cropFrame,
      output.ppi,
    ]);
    let lead = this.#leads.get(key);
    if (!lead) {
      lead = measureLeadPhoto(this.engine, leadPath, leadParameters, output, signal);
      this.#leads.set(key, lead);
      if (this.#leads.size > leadsKept) this.#leads.delete(this.#leads.keys().next().value!);
    }
    try {
      return await lead;
    } catch (failure) {
      this.#leads.delete(key);
      const why = failure instanceof Error ? failure.message : String(failure);
      throw new FileError(leadPath, `cannot lead the series (${why})`, 'Choose another lead photo.', {
        cause: failure,
      });
    }
  }
}
