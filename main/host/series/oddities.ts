import { type OddOneOut, oddOnesOut, type Remedy } from '../../../core/series/oddOnesOut.ts';
import { partsOfFrame, type SeriesSettings } from '../../../core/series/seriesDocument.ts';
import type { FrameOddity } from '../api/seriesCommands.ts';
import type { MeasuredFrame } from './frameMeasuring.ts';

/**
 * The odd ones out among the frames that were measured: those that the match has left odd, and those whose photo is
 * odd though the match has brought it in.
 * @param measured by frame
 */
export function oddities(
  measured: ReadonlyMap<string, MeasuredFrame>,
  settings: SeriesSettings,
): Map<string, FrameOddity> {
  const frameIds = [...measured.keys()];
  const leadAt = frameIds.indexOf(settings.lead ?? '');
  const lead = leadAt < 0 ? null : leadAt;
  const found = [...measured.values()];
  const after = oddOnesOut(
    found.map((frame) => frame.after),
    lead,
  );
  const before = oddOnesOut(
    found.map((frame) => frame.before),
    lead,
  );
  const odd = new Map<string, FrameOddity>();
  frameIds.forEach((frameId, index) => {
    const [left, original] = [after[index], before[index]];
    const one = left ?? original;
    if (one) odd.set(frameId, oddityOf(one, frameId, settings, left === null));
  });
  return odd;
}

function oddityOf(
  { reason, remedies }: OddOneOut,
  frameId: string,
  settings: SeriesSettings,
  isMatched: boolean,
): FrameOddity {
  const helping = remedies.filter((remedy) => wouldHelp(remedy, frameId, settings));
  return { reason, remedies: helping, isMatched };
}

/** A remedy that is in force already is none. */
function wouldHelp(remedy: Remedy, frameId: string, settings: SeriesSettings): boolean {
  const parts = partsOfFrame(settings, frameId);
  const isFull = settings.match.amount01 === 1;
  switch (remedy) {
    case 'matchTone':
      return !parts.tone || !isFull;
    case 'matchInk':
      return !parts.ink || !isFull;
    case 'matchNoise':
      return !parts.noise || !parts.detail || !isFull;
    default:
      return true;
  }
}
