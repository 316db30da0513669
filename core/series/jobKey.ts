import type { Parameters } from '../parameters/table.ts';
import { contentId } from '../recipes/contentId.ts';
import type { OutputSettings } from '../recipes/outputSettings.ts';
import type { MatchParts } from './frameMatch.ts';

/** Everything that decides what one frame's file will be. */
export interface SeriesJob {
  /** SHA-256 of the photo's bytes. */
  photoSha256: string;
  parameters: Parameters;
  /** What it is matched to; null for a frame that is painted as it is, the lead among them. */
  match: { leadSha256: string; amount01: number; parts: MatchParts } | null;
  output: OutputSettings;
  engineVersion: string;
}

/**
 * Name of a job by its content: two jobs of one key give the same pixels. What matching makes of a frame follows from
 * the two photos and the parameters, so it is no part of the key and need not be found out to know it.
 */
export function jobKey(job: SeriesJob): string {
  return contentId(job);
}
