import type { FrameFigures } from '../../core/series/frameFigures.ts';

/** What became of a frame. */
export interface FrameResult {
  name: string;
  state: 'painted' | 'kept' | 'failed' | 'waiting';
  /** Why it was painted, kept or not painted, in plain words. */
  reason: string;
  output: string | null;
  sha256: string | null;
  pixelsSha256: string | null;
  /** Before and after matching, the same twice for the lead; null where nothing is matched. */
  figures: { before: FrameFigures; after: FrameFigures } | null;
  remarks: string[];
  milliseconds: number;
}

/** The result of a frame without a painting. */
export function withoutPainting(
  name: string,
  state: 'failed' | 'waiting',
  reason: string,
  milliseconds = 0,
): FrameResult {
  const nothing = { output: null, sha256: null, pixelsSha256: null, figures: null };
  return { name, state, reason, ...nothing, remarks: [], milliseconds };
}
