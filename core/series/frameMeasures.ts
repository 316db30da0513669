import type { FrameFigures } from './frameFigures.ts';
import type { InkHistogram } from './inkHistogram.ts';
import { coverageAt } from './inkHistogram.ts';
import { type Palette, toneFiguresOf } from './palette.ts';
import type { ToneMap } from './toneMap.ts';

/** What a reduced photo tells of the frame. */
export interface ColourMeasures {
  readonly palette: Palette;
  readonly focus: number;
}

/** What a painted body shows of its handling. */
export interface Texture {
  readonly flatShare01: number;
  readonly planeMm: number;
  readonly coherence01: number;
}

/** The figures of a frame that is painted with a tone map, as its palette and its painting tell them. */
export function predictedFigures(
  { palette, focus }: ColourMeasures,
  toneMap: ToneMap | null,
  painted: Texture & { ink: InkHistogram },
  pen: { threshold: number; softness: number },
): FrameFigures {
  const tone = toneFiguresOf(palette, toneMap);
  const [lightness, redGreen, yellowBlue] = tone.mean;
  return {
    lightness,
    contrast: tone.deviationL,
    chroma: tone.meanChroma,
    redGreen,
    yellowBlue,
    planeMm: painted.planeMm,
    coherence01: painted.coherence01,
    lineCoverage01: coverageAt(painted.ink, pen.threshold, pen.softness),
    flatShare01: painted.flatShare01,
    focus,
  };
}
