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
  match: { leadSha256: string; leadParameters: Parameters; amount01: number; parts: MatchParts } | null;
  output: OutputSettings;
  /** SHA-256 of the ICC file that the output settings name; null where they name none. */
  profileSha256: string | null;
  engineVersion: string;
}

/** An id of each thing that a job is made of, so that it can be told which of them has changed. */
export interface JobParts {
  photo: string;
  look: string;
  match: string;
  output: string;
  engine: string;
}

export function jobParts(job: SeriesJob): JobParts {
  return {
    photo: job.photoSha256,
    look: contentId(job.parameters),
    match: contentId(job.match),
    output: contentId({ settings: job.output, profile: job.profileSha256 }),
    engine: job.engineVersion,
  };
}

/**
 * Name of a job by its content: two jobs of one key give the same pixels. What matching makes of a frame follows from
 * the two photos and their parameters, so it is no part of the key and need not be found out to know it.
 */
export function jobKey(parts: JobParts): string {
  return contentId(parts);
}

const words: Record<keyof JobParts, string> = {
  photo: 'the photo',
  look: 'its look',
  match: 'the lead or the matching',
  output: 'the output settings',
  engine: 'the engine',
};

/** Why a job is another than before, as a sentence. */
export function whatChanged(before: Partial<JobParts>, now: JobParts): string {
  const changed = (Object.keys(words) as (keyof JobParts)[]).filter((part) => before[part] !== now[part]);
  return `Changed since it was painted: ${changed.map((part) => words[part]).join(', ')}.`;
}
