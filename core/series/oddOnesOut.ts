import { type FigureKey, type FrameFigures, figureTable } from './frameFigures.ts';

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

/** Median of the absolute deviations of a normal distribution, in standard deviations. */
const normalDeviation = 0.6745;
/**
 * Robust standard deviations that the most outlying figure of a series exceeds in one series of ten though nothing is
 * wrong: by 20,000 simulated series of so many frames, ten figures each, normally scattered. One figure of many
 * observations is commonly judged at 3.5 (B. Iglewicz, D. C. Hoaglin 1993); a median deviation of few says far less.
 */
const exceededByChance: readonly (readonly [frames: number, z: number])[] = [
  [4, 18],
  [6, 10],
  [8, 7.9],
  [10, 6.8],
  [12, 6.2],
  [16, 5.6],
  [20, 5.2],
  [30, 4.8],
  [50, 4.5],
  [100, 4.3],
];

/** Robust standard deviations from which a frame of a series of `frames` counts as odd. */
export function oddFrom(frames: number): number {
  const [last] = exceededByChance.slice(-1);
  const above = exceededByChance.findIndex(([count]) => count >= frames);
  if (above === 0) return exceededByChance[0][1];
  if (above < 0) return last[1];
  const [[fewer, higher], [more, lower]] = exceededByChance.slice(above - 1, above + 1);
  return higher + ((lower - higher) * (frames - fewer)) / (more - fewer);
}
/** Frames below which nothing can be said of the series. */
const leastFrames = 4;

export function median(values: readonly number[]): number {
  const sorted = [...values].sort((a, b) => a - b);
  const middle = sorted.length >> 1;
  return sorted.length % 2 === 1 ? sorted[middle] : (sorted[middle - 1] + sorted[middle]) / 2;
}

/**
 * Distance of each value from the median in robust standard deviations: 0.6745·(x − median)/MAD.
 * @param leastSpread standard deviation below which scatter does not count: without it, frames that agree almost
 *   to the digit would make odd ones of each other
 */
export function robustZ(values: readonly number[], leastSpread: number): number[] {
  const middle = median(values);
  const mad = median(values.map((value) => Math.abs(value - middle)));
  const spread = Math.max(leastSpread, mad / normalDeviation);
  return values.map((value) => (value - middle) / spread);
}

/** Reason where a figure is too low, and where it is too high; and what helps. */
const words: Record<FigureKey, { low: string; high: string; remedies: readonly Remedy[] }> = {
  lightness: {
    low: 'Much darker than the rest of the series.',
    high: 'Much lighter than the rest of the series.',
    remedies: ['matchTone', 'leaveOut'],
  },
  contrast: {
    low: 'Much flatter in tone than the rest of the series.',
    high: 'Much harder in contrast than the rest of the series.',
    remedies: ['matchTone', 'leaveOut'],
  },
  chroma: {
    low: 'Much paler in colour than the rest of the series.',
    high: 'Much stronger in colour than the rest of the series.',
    remedies: ['matchTone', 'leaveOut'],
  },
  redGreen: {
    low: 'In a greener light than the rest of the series.',
    high: 'In a redder light than the rest of the series.',
    remedies: ['matchTone', 'leaveOut'],
  },
  yellowBlue: {
    low: 'In a bluer light than the rest of the series.',
    high: 'In a yellower light than the rest of the series.',
    remedies: ['matchTone', 'leaveOut'],
  },
  planeMm: {
    low: 'Painted in much smaller planes than the rest: a busier or noisier photo.',
    high: 'Painted in much larger planes than the rest: the photo may be out of focus.',
    remedies: ['leaveOut'],
  },
  coherence01: {
    low: 'Its strokes run more every way than in the rest of the series.',
    high: 'Its strokes run more one way than in the rest of the series: the photo may be shaken.',
    remedies: ['leaveOut'],
  },
  lineCoverage01: {
    low: 'Much less ink than the rest of the series: the photo may be out of focus.',
    high: 'Much more ink than the rest of the series.',
    remedies: ['matchInk', 'leaveOut'],
  },
  focus: {
    low: 'Much softer than the rest of the series: the photo is out of focus.',
    high: 'Much crisper than the rest of the series.',
    remedies: ['leaveOut'],
  },
  flatShare01: {
    low: 'Much less of it is flat paint than in the rest: a busier or noisier photo.',
    high: 'Much more of it is flat paint than in the rest: the photo may be out of focus.',
    remedies: ['matchNoise', 'leaveOut'],
  },
};

const keys = Object.keys(figureTable) as FigureKey[];

/**
 * Finds the frames whose look lies outside the series.
 * @param frames figures of all frames, before matching for oddities of the photos, after it for what is left
 * @param lead index of the lead; where it is odd itself, another lead is the remedy
 * @returns for each frame what is odd about it, or null
 */
export function oddOnesOut(
  frames: readonly FrameFigures[],
  lead: number | null = null,
): (OddOneOut | null)[] {
  if (frames.length < leastFrames) return frames.map(() => null);
  const scores = keys.map((figure) => ({
    figure,
    z: robustZ(
      frames.map((frame) => frame[figure]),
      figureTable[figure].leastSpread,
    ),
  }));
  const from = oddFrom(frames.length);
  return frames.map((_, i) => {
    const worst = scores.reduce((most, score) => (Math.abs(score.z[i]) > Math.abs(most.z[i]) ? score : most));
    const z = worst.z[i];
    if (Math.abs(z) < from) return null;
    const { low, high, remedies } = words[worst.figure];
    return {
      reason: z < 0 ? low : high,
      remedies: i === lead ? ['chooseAnotherLead', 'leaveOut'] : remedies,
      figure: worst.figure,
      z: Math.round(z * 100) / 100,
    };
  });
}
