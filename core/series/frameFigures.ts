/**
 * The look of one painted frame in numbers. All are taken from the painting at one print scale, so that frames of
 * different pixel sizes compare.
 */
export interface FrameFigures {
  /** Mean L* (CIE 1976, D65). */
  readonly lightness: number;
  /** Standard deviation of L*. */
  readonly contrast: number;
  /** Mean C*. */
  readonly chroma: number;
  /** Mean a*. */
  readonly redGreen: number;
  /** Mean b*. */
  readonly yellowBlue: number;
  /** Mean length of the runs of one tone along rows and columns, in millimetres of the print. */
  readonly planeMm: number;
  /** Mean anisotropy of the grain where there is any: 1 where strokes lie side by side. */
  readonly coherence01: number;
  /** Share of the picture that ink covers. */
  readonly lineCoverage01: number;
  /** Crispness of the photo's own strong edges: near 1 in focus, ¼ far out of it. */
  readonly focus: number;
  /** Share of pixels whose gradient of 8-bit luma is below one step. */
  readonly flatShare01: number;
}

export type FigureKey = keyof FrameFigures;

/** Each figure in words, with the least scatter that counts as a difference and how it is written. */
export const figureTable: Record<
  FigureKey,
  { label: string; unit: string; digits: number; leastSpread: number }
> = {
  lightness: { label: 'Lightness', unit: 'L*', digits: 1, leastSpread: 1 },
  contrast: { label: 'Contrast', unit: 'L*', digits: 1, leastSpread: 0.7 },
  chroma: { label: 'Chroma', unit: 'C*', digits: 1, leastSpread: 0.7 },
  redGreen: { label: 'Red to green', unit: 'a*', digits: 1, leastSpread: 0.7 },
  yellowBlue: { label: 'Yellow to blue', unit: 'b*', digits: 1, leastSpread: 0.7 },
  planeMm: { label: 'Plane size', unit: 'mm', digits: 2, leastSpread: 0.1 },
  coherence01: { label: 'Stroke coherence', unit: '', digits: 3, leastSpread: 0.03 },
  lineCoverage01: { label: 'Line coverage', unit: '%', digits: 2, leastSpread: 0.004 },
  focus: { label: 'Focus', unit: '', digits: 2, leastSpread: 0.04 },
  flatShare01: { label: 'Flat share', unit: '%', digits: 1, leastSpread: 0.02 },
};
