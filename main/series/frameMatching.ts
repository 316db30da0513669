import type { Parameters } from '../../core/parameters/table.ts';
import type { FrameFigures } from '../../core/series/frameFigures.ts';
import {
  type FrameMatch,
  type MatchParts,
  noMatch,
  parametersWithMatch,
} from '../../core/series/frameMatch.ts';
import { type ColourMeasures, predictedFigures, type Texture } from '../../core/series/frameMeasures.ts';
import { coverageAt, type InkHistogram, thresholdForCoverage } from '../../core/series/inkHistogram.ts';
import { closeShare01, nextHold } from '../../core/series/matchHold.ts';
import { matchTone } from '../../core/series/matchTone.ts';
import type { ToneMap } from '../../core/series/toneMap.ts';
import type { PaintReview } from '../engine/engineApi.ts';
import type { LeadMeasures } from './matchPhoto.ts';
import { measureTexture, textureEdge } from './measureFrame.ts';

/** What a match comes to. */
export interface MatchedFrame {
  match: FrameMatch;
  /** As the frame would be painted with the match of its tone and noise floor only: the preset's own ink and hold. */
  before: FrameFigures;
  after: FrameFigures;
}

export interface MatchOrder {
  /** How far tone, hold and ink go towards the lead. */
  amount01: number;
  parts: MatchParts;
  printLongEdgeMm: number;
}

/** Holds tried beyond the preset's own. */
const holdTrials = 2;

interface Trial extends Texture {
  hold: number;
}

/**
 * Decides how one frame is matched to the lead while it is painted: tone and noise floor before anything else, then
 * how much detail the body holds, by the share of it that came out flat, and last where ink sets in.
 */
export class FrameMatching implements PaintReview {
  readonly toneMap: ToneMap | null;
  /** What to begin painting with: the state's, with the noise floor of the lead. */
  readonly parameters: Parameters;
  readonly #noiseFloor: number | null;
  /** Bodies shown so far; the last one is what is painted, once nothing else is asked for. */
  readonly #trials: Trial[] = [];
  /** What the next body will be painted with. */
  #hold: number;
  #ink: InkHistogram | null = null;

  /**
   * @param size of the photo at full resolution
   * @param state parameters of the frame's state
   */
  constructor(
    readonly size: { widthPx: number; heightPx: number },
    readonly colours: ColourMeasures,
    readonly lead: LeadMeasures,
    readonly state: Parameters,
    readonly order: MatchOrder,
  ) {
    const { amount01, parts } = order;
    this.toneMap = parts.tone ? matchTone(colours.palette, lead.palette, amount01) : null;
    const takesFloor = amount01 > 0 && parts.noise && state['body.noiseFloor'] === 'auto';
    this.#noiseFloor = takesFloor ? lead.noiseFloor : null;
    this.parameters = parametersWithMatch(state, { ...noMatch, noiseFloor: this.#noiseFloor });
    this.#hold = this.parameters['body.hold'];
  }

  /** @param size of what is shown; the whole photo unless given */
  async body(pixels: Uint16Array, size = this.size): Promise<number | null> {
    const { textures } = this.lead;
    const edgePx = textureEdge(
      size,
      textures.map((texture) => texture.edgePx),
    );
    const lead = textures.find((texture) => texture.edgePx === edgePx)!;
    const own = await measureTexture(pixels, size, this.order.printLongEdgeMm, edgePx);
    const texture = asBeside(own, lead, textures[0]);
    const trial: Trial = { ...texture, hold: this.#hold };
    this.#trials.push(trial);
    const next = this.#usesHold ? this.#nextHold(trial) : null;
    this.#hold = next ?? trial.hold;
    return next;
  }

  get #usesHold(): boolean {
    const { 'body.method': method, 'body.strength': strength } = this.state;
    const { amount01, parts } = this.order;
    return amount01 > 0 && parts.detail && method === 'multi-scale' && strength > 0;
  }

  /** Holds are tried until the share of flat pixels is the lead's; then the one that came nearest is taken. */
  #nextHold(last: Trial): number | null {
    const trials = this.#trials;
    const own01 = trials[0].flatShare01;
    const wanted01 = own01 + this.order.amount01 * (this.lead.figures.flatShare01 - own01);
    const miss = (trial: Trial) => Math.abs(trial.flatShare01 - wanted01);
    const best = trials.reduce((nearest, trial) => (miss(trial) < miss(nearest) ? trial : nearest));
    const isSettled = trials.slice(0, -1).some((trial) => trial.hold === last.hold);
    if (isSettled || miss(last) <= closeShare01) return null;
    const next = trials.length <= holdTrials ? nextHold(trials, wanted01, this.lead.holdSlope) : null;
    if (next !== null && trials.every((trial) => trial.hold !== next)) return next;
    return best === last ? null : best.hold;
  }

  ink(responses: InkHistogram): number {
    this.#ink = responses;
    return this.#threshold ?? this.state['line.threshold'];
  }

  /** Null where the preset's own ink is kept. */
  get #threshold(): number | null {
    const { amount01, parts } = this.order;
    if (amount01 <= 0 || !parts.ink || !this.#ink) return null;
    const { threshold, softness } = penOf(this.state);
    const own01 = coverageAt(this.#ink, threshold, softness);
    const wanted01 = own01 + amount01 * (this.lead.figures.lineCoverage01 - own01);
    return thresholdForCoverage(this.#ink, wanted01, this.state);
  }

  /**
   * What the match comes to.
   * @throws Error before the frame has been painted
   */
  result(): MatchedFrame {
    const [first, last] = [this.#trials[0], this.#trials.at(-1)];
    const ink = this.#ink;
    if (!first || !last || !ink) throw new Error('Expected the frame to have been painted');
    const hold = last.hold === first.hold ? null : last.hold;
    const threshold = this.#threshold;
    const pen = penOf(this.state);
    return {
      match: { toneMap: this.toneMap, noiseFloor: this.#noiseFloor, hold, threshold },
      before: predictedFigures(this.colours, null, { ...first, ink }, pen),
      after: predictedFigures(
        this.colours,
        this.toneMap,
        { ...last, ink },
        { ...pen, threshold: threshold ?? pen.threshold },
      ),
    };
  }
}

/** What a texture would be at the lead's own long edge: as far from the lead's there as it is at its own. */
function asBeside(own: Texture, lead: Texture, leadAtOwnEdge: Texture): Texture {
  const share = (value: number) => Math.min(1, Math.max(0, value));
  return {
    flatShare01: share(leadAtOwnEdge.flatShare01 + own.flatShare01 - lead.flatShare01),
    planeMm: (leadAtOwnEdge.planeMm * own.planeMm) / lead.planeMm,
    coherence01: share(leadAtOwnEdge.coherence01 + own.coherence01 - lead.coherence01),
  };
}

export function penOf(parameters: Parameters) {
  return { threshold: parameters['line.threshold'], softness: parameters['line.softness'] };
}
