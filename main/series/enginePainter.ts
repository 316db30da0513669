import type { OutputSettings } from '../../core/recipes/outputSettings.ts';
import type { Engine } from '../engine/engineApi.ts';
import { FileError } from '../files/fileError.ts';
import { fingerprintPhoto } from '../store/photoFingerprint.ts';
import type { FrameJob, FrameLead, FramePainter, FramePaintOptions, PaintedJob } from './framePainter.ts';
import type { LeadMeasures } from './matchPhoto.ts';
import { measureLeadPhoto, paintFrame } from './paintFrame.ts';
import { Turns } from './turns.ts';

/** Leads are small once measured; a worker may serve several series by turns. */
const leadsKept = 8;
/** Pixels of frames under way together: two of 24 megapixels would take twice the memory and gain next to nothing. */
const pixelsAtOnce = 32e6;

/** Paints frames with an engine of this process. */
export class EnginePainter implements FramePainter {
  /** Decoding and encoding of one frame go on while another is painted. */
  readonly framesAtOnce = 2;
  readonly outlivesRuns = false;
  readonly #leads = new Map<string, Promise<LeadMeasures | null>>();
  readonly #turns = new Turns(pixelsAtOnce);

  constructor(private readonly engine: Engine) {}

  paint(job: FrameJob, options: FramePaintOptions = {}): Promise<PaintedJob> {
    return this.#turns.take(job.widthPx * job.heightPx, options.signal, () => this.#paint(job, options));
  }

  async #paint(job: FrameJob, options: FramePaintOptions): Promise<PaintedJob> {
    const { photoPath, part, parameters, look, output, lead: wanted } = job;
    const lead = wanted && (await this.#leadOf(wanted, output, options.signal));
    const match =
      wanted && lead && !wanted.isItself ? { lead, amount01: wanted.amount01, parts: wanted.parts } : null;
    const painted = await paintFrame(
      this.engine,
      { photoPath, part, parameters, look, output, match },
      options,
    );
    const { sha256 } = await fingerprintPhoto(part, options.signal);
    const own = wanted?.isItself && lead ? { before: lead.figures, after: lead.figures } : null;
    const { pixelsSha256, layersPath, figures, remarks } = painted;
    return { sha256, pixelsSha256, layersPart: layersPath, figures: figures ?? own, remarks };
  }

  async #leadOf(
    wanted: FrameLead,
    output: OutputSettings,
    signal?: AbortSignal,
  ): Promise<LeadMeasures | null> {
    const { path, sha256, parameters } = wanted;
    const { printLongEdgeMm, cropFrame = null, ppi, isResampled = false } = output;
    const key = JSON.stringify([sha256, parameters, printLongEdgeMm, cropFrame, ppi, isResampled]);
    let lead = this.#leads.get(key);
    if (!lead) {
      lead = this.#measureLead(wanted, output);
      this.#leads.set(key, lead);
      if (this.#leads.size > leadsKept) this.#leads.delete(this.#leads.keys().next().value!);
    }
    try {
      return await lead;
    } catch (failure) {
      this.#leads.delete(key);
      signal?.throwIfAborted();
      const why = failure instanceof Error ? failure.message : String(failure);
      throw new FileError(path, `cannot lead the series (${why})`, 'Choose another lead photo.', {
        cause: failure,
      });
    }
  }

  /** Goes on though a frame that waits for it is given up: others wait for it too. */
  async #measureLead(
    { path, sha256, parameters }: FrameLead,
    output: OutputSettings,
  ): Promise<LeadMeasures | null> {
    const measured = await measureLeadPhoto(this.engine, path, parameters, output);
    const found = await fingerprintPhoto(path);
    if (found.sha256 === sha256) return measured;
    throw new FileError(path, 'has changed since the run began', 'Begin the run again.');
  }
}
