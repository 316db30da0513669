import type { Parameters } from '../../core/parameters/table.ts';
import type { DecodedPhoto } from '../../core/pixels/photo.ts';
import type { FrameFigures } from '../../core/series/frameFigures.ts';
import { allMatchParts, type MatchParts } from '../../core/series/frameMatch.ts';
import { predictedFigures } from '../../core/series/frameMeasures.ts';
import { countCoverage, softPen } from '../../core/series/inkHistogram.ts';
import { slopeBetween } from '../../core/series/matchHold.ts';
import type { Palette } from '../../core/series/palette.ts';
import type { Engine, EnginePhoto } from '../engine/engineApi.ts';
import { FrameMatching, type MatchedFrame, penOf } from './frameMatching.ts';
import { measureColours, measureTextures, type TextureAt } from './measureFrame.ts';

/** What the other frames are matched to: plain data, measured once a run. */
export interface LeadMeasures {
  readonly palette: Palette;
  /** What `auto` stood for, or the preset's own. */
  readonly noiseFloor: number;
  /** Of its painted body at several long edges, the greatest first. */
  readonly textures: readonly TextureAt[];
  /** How its share of flat pixels rises over the logarithm of hold. */
  readonly holdSlope: number;
  /** The figures of its painting: what the match aims at. */
  readonly figures: FrameFigures;
}

export interface MatchOptions {
  printLongEdgeMm: number;
  /** Pyramid level that is painted to be measured; 0 unless given: a smaller one is quicker and nearly as good. */
  level?: number;
  signal?: AbortSignal;
}

/** Long edge from which on a smaller level tells how the whole will be. */
const leastLevelEdgePx = 1500;

/** The smallest level that still tells. */
export function measuringLevel({ widthPx, heightPx }: { widthPx: number; heightPx: number }): number {
  return Math.max(0, Math.floor(Math.log2(Math.max(widthPx, heightPx) / leastLevelEdgePx)));
}

/**
 * Measures the lead.
 * @param photo not modified
 * @param enginePhoto the same, held, without a tone map
 */
export async function measureLead(
  engine: Engine,
  photo: DecodedPhoto,
  enginePhoto: EnginePhoto,
  parameters: Parameters,
  options: MatchOptions,
): Promise<LeadMeasures> {
  const { palette, focus } = await measureColours(photo);
  const { body, line } = await paintLevel(engine, enginePhoto, parameters, options);
  const textures = await measureTextures(body.pixels, body, options.printLongEdgeMm);
  const painted = { ...textures[0], ink: countCoverage(line) };
  const floor = parameters['body.noiseFloor'];
  return {
    palette,
    noiseFloor: floor === 'auto' ? enginePhoto.noiseFloor : floor,
    textures,
    holdSlope: await measureHoldSlope(engine, enginePhoto, parameters, options),
    figures: predictedFigures({ palette, focus }, null, painted, penOf(parameters)),
  };
}

/** Hold is tried by this factor to see what it does. */
const slopeFactor = 0.4;

async function measureHoldSlope(
  engine: Engine,
  photo: EnginePhoto,
  parameters: Parameters,
  options: MatchOptions,
): Promise<number> {
  const level = measuringLevel(photo);
  const trialOf = async (hold: number) => {
    const tried = { ...parameters, 'body.hold': hold };
    const { body } = await paintLevel(engine, photo, tried, { ...options, level });
    const [texture] = await measureTextures(body.pixels, body, options.printLongEdgeMm);
    return { hold, flatShare01: texture.flatShare01 };
  };
  const own = parameters['body.hold'];
  return slopeBetween(await trialOf(own * slopeFactor), await trialOf(own));
}

/**
 * Decides how a frame would be matched to the lead, without painting it to a file.
 * @param photo at full resolution; not modified
 * @param parameters of the frame's state
 * @param options.amount01 how far tone, hold and ink go towards the lead
 * @param options.parts all unless given
 */
export async function matchPhoto(
  engine: Engine,
  photo: DecodedPhoto,
  lead: LeadMeasures,
  parameters: Parameters,
  options: MatchOptions & { amount01: number; parts?: MatchParts },
): Promise<MatchedFrame> {
  const { matching, enginePhoto } = await holdMatched(engine, photo, parameters, { ...options, lead });
  try {
    await reviewLevel(engine, enginePhoto, matching, options);
    return matching.result();
  } finally {
    enginePhoto.close();
  }
}

/** Begins to match a frame: the engine holds it with its tone mapped, and `matching` is asked while it is painted. */
export async function holdMatched(
  engine: Engine,
  photo: DecodedPhoto,
  parameters: Parameters,
  options: MatchOptions & { lead: LeadMeasures; amount01: number; parts?: MatchParts },
): Promise<{ matching: FrameMatching; enginePhoto: EnginePhoto }> {
  const { lead, amount01, parts = allMatchParts, printLongEdgeMm, signal } = options;
  const colours = await measureColours(photo);
  const frame = { amount01, parts, printLongEdgeMm };
  const matching = new FrameMatching(photo, colours, lead, parameters, frame);
  const { toneMap } = matching;
  const enginePhoto = await engine.open(photo, { toneMap, signal });
  return { matching, enginePhoto };
}

/** Paints a level as often as the matching asks for, only to be looked at. */
export async function reviewLevel(
  engine: Engine,
  photo: EnginePhoto,
  matching: FrameMatching,
  options: MatchOptions,
): Promise<void> {
  for (let { parameters } = matching; ; ) {
    const { body, line } = await paintLevel(engine, photo, parameters, options);
    const hold = await matching.body(body.pixels, body);
    if (hold === null) {
      matching.ink(countCoverage(line));
      return;
    }
    parameters = { ...parameters, 'body.hold': hold };
  }
}

async function paintLevel(
  engine: Engine,
  photo: EnginePhoto,
  parameters: Parameters,
  { printLongEdgeMm, level = 0, signal }: MatchOptions,
) {
  const drawn = { ...parameters, ...softPen };
  const { strata } = await engine.paintStrata(photo, drawn, { level }, { printLongEdgeMm, signal });
  const { widthPx, heightPx, body, line } = strata;
  return { body: { widthPx, heightPx, pixels: body }, line };
}
