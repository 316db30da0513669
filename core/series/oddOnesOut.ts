import type { FigureKey } from './frameFigures.ts';

/** What can be done about an odd one out. */
export type Remedy = 'matchTone' | 'matchInk' | 'matchNoise' | 'chooseAnotherLead' | 'leaveOut';

export interface OddOneOut {
  /** In plain words, one sentence. */
  reason: string;
  /** The first is the one to offer. */
  remedies: readonly Remedy[];
  /** The figure that stands out most, and by how many robust standard deviations. */
  figure: FigureKey;
  z: number;
}
