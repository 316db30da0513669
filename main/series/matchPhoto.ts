import type { Parameters } from '../../core/parameters/table.ts';
import type { DecodedPhoto } from '../../core/pixels/photo.ts';
import type { FrameFigures } from '../../core/series/frameFigures.ts';
import {
  allMatchParts,
  type FrameMatch,
  type MatchParts,
  noMatch,
  parametersWithMatch,
} from '../../core/series/frameMatch.ts';
import { predictedFigures, type WindowMeasures } from '../../core/series/frameMeasures.ts';
import { thresholdForCoverage } from '../../core/series/inkHistogram.ts';
import { closeShare01, type HoldTrial, nextHold } from '../../core/series/matchHold.ts';
import { matchTone } from '../../core/series/matchTone.ts';
import type { Palette } from '../../core/series/palette.ts';
import type { ToneMap } from '../../core/series/toneMap.ts';
import type { Engine } from '../engine/engineApi.ts';
import { FrameWindows, measureColours } from './measureFrame.ts';

/** What the other frames are matched to: plain data, measured once a run. */
export interface LeadMeasures {
  readonly palette: Palette;
  readonly windows: WindowMeasures;
  /** The figures of its painting: what the match aims at. */
  readonly figures: FrameFigures;
}

export interface MatchOptions {
  printLongEdgeMm: number;
  signal?: AbortSignal;
}

export interface MatchedFrame {
  match: FrameMatch;
  /** As the frame would be painted without the match of its tone, and with the preset's own ink and hold. */
  before: FrameFigures;
  after: FrameFigures;
}

/** Holds tried beyond the preset's own. */
const holdTrials = 1;

/**
 * Measures the lead.
 * @param noiseFloor of the opened photo (`EnginePhoto.noiseFloor`), what `auto` stands for
 */
export async function measureLead(
  engine: Engine,
  photo: DecodedPhoto,
  noiseFloor: number,
  parameters: Parameters,
  { printLongEdgeMm, signal }: MatchOptions,
): Promise<LeadMeasures> {
  const colours = await measureColours(photo);
  const painted = withFloor(parameters, noiseFloor);
  const windows = await new FrameWindows(engine, photo, printLongEdgeMm).measure(painted, null, signal);
  return {
    palette: colours.palette,
    windows,
    figures: predictedFigures(colours, null, windows, penOf(parameters)),
  };
}

/**
 * Decides how a frame is matched to the lead: tone first, then on windows painted with that tone how much detail is
 * held and where ink sets in.
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
  const { amount01, parts = allMatchParts, printLongEdgeMm, signal } = options;
  const colours = await measureColours(photo);
  const toneMap = parts.tone ? matchTone(colours.palette, lead.palette, amount01) : null;
  const isOn = amount01 > 0;
  const noiseFloor =
    isOn && parts.noise && parameters['body.noiseFloor'] === 'auto' ? lead.windows.noiseFloor : null;
  const frame = new FrameWindows(engine, photo, printLongEdgeMm);
  const match: FrameMatch = { ...noMatch, toneMap, noiseFloor };
  const matched = parametersWithMatch(parameters, match);
  const first = await frame.measure(matched, toneMap, signal);
  const pen = penOf(parameters);
  const before = predictedFigures(colours, null, first, pen);
  let [windows, hold]: [WindowMeasures, number | null] = [first, null];
  if (isOn && parts.detail && usesHold(parameters))
    ({ windows, hold } = await findHold(frame, first, lead, matched, toneMap, amount01, signal));
  const wanted = before.lineCoverage01 + amount01 * (lead.figures.lineCoverage01 - before.lineCoverage01);
  const threshold = isOn && parts.ink ? thresholdForCoverage(windows.ink, wanted, parameters) : null;
  const after = predictedFigures(colours, toneMap, windows, {
    ...pen,
    threshold: threshold ?? pen.threshold,
  });
  return { match: { ...match, hold, threshold }, before, after };
}

/** Tries holds until the share of flat pixels is the lead's, then takes the step that the trials suggest. */
async function findHold(
  frame: FrameWindows,
  first: WindowMeasures,
  lead: LeadMeasures,
  parameters: Parameters,
  toneMap: ToneMap | null,
  amount01: number,
  signal?: AbortSignal,
): Promise<{ windows: WindowMeasures; hold: number | null }> {
  const wanted = first.flatShare01 + amount01 * (lead.windows.flatShare01 - first.flatShare01);
  const trials: HoldTrial[] = [first];
  let windows = first;
  const isClose = () => Math.abs(trials[trials.length - 1].flatShare01 - wanted) <= closeShare01;
  for (let trial = 0; trial < holdTrials && !isClose(); trial++) {
    const hold = nextHold(trials, wanted);
    windows = await frame.measure({ ...parameters, 'body.hold': hold }, toneMap, signal);
    trials.push(windows);
  }
  if (trials.length === 1) return { windows, hold: null };
  return { windows, hold: isClose() ? trials[trials.length - 1].hold : nextHold(trials, wanted) };
}

function usesHold(parameters: Parameters): boolean {
  return parameters['body.method'] === 'multi-scale' && parameters['body.strength'] > 0;
}

function penOf(parameters: Parameters) {
  return { threshold: parameters['line.threshold'], softness: parameters['line.softness'] };
}

function withFloor(parameters: Parameters, noiseFloor: number): Parameters {
  return parameters['body.noiseFloor'] === 'auto'
    ? { ...parameters, 'body.noiseFloor': noiseFloor }
    : parameters;
}
