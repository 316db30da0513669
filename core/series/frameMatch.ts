import type { Parameters } from '../parameters/table.ts';
import type { ToneMap } from './toneMap.ts';

/**
 * What is done to one frame so that it goes with the lead: plain data, part of the job's key and of the run log.
 * A part that is null leaves the frame as its state has it.
 */
export interface FrameMatch {
  /** Applied to the photo before it is painted: `engine.open(photo, { toneMap })`. */
  readonly toneMap: ToneMap | null;
  /** Takes the place of `body.noiseFloor`. */
  readonly noiseFloor: number | 'auto' | null;
  /** Takes the place of `body.hold`. */
  readonly hold: number | null;
  /** Takes the place of `line.threshold`. */
  readonly threshold: number | null;
}

/** The parts of a match; each can be switched off for a frame. */
export interface MatchParts {
  readonly tone: boolean;
  readonly noise: boolean;
  /** As much detail held, so that as large a share of the picture is flat. */
  readonly detail: boolean;
  readonly ink: boolean;
}

export const allMatchParts: MatchParts = { tone: true, noise: true, detail: true, ink: true };

/** What the lead gets, and every frame of a run without matching: nothing is changed, to the bit. */
export const noMatch: FrameMatch = { toneMap: null, noiseFloor: null, hold: null, threshold: null };

/** Whether a match changes nothing. */
export function isNoMatch(match: FrameMatch): boolean {
  return match.toneMap === null && changesNoParameter(match);
}

/**
 * The parameters a matched frame is painted with.
 * @param parameters of the frame's state; not modified, and returned as they are where nothing changes
 */
export function parametersWithMatch(parameters: Parameters, match: FrameMatch): Parameters {
  if (changesNoParameter(match)) return parameters;
  return {
    ...parameters,
    'body.noiseFloor': match.noiseFloor ?? parameters['body.noiseFloor'],
    'body.hold': match.hold ?? parameters['body.hold'],
    'line.threshold': match.threshold ?? parameters['line.threshold'],
  };
}

function changesNoParameter({ noiseFloor, hold, threshold }: FrameMatch): boolean {
  return noiseFloor === null && hold === null && threshold === null;
}
