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

/** What sample windows of a frame, painted at full resolution, tell of its texture. */
export interface WindowMeasures {
  /** Noise floor and hold they were painted with. */
  readonly noiseFloor: number;
  readonly hold: number;
  readonly flatShare01: number;
  readonly planeMm: number;
  readonly coherence01: number;
  readonly ink: InkHistogram;
}

/** The figures of a frame that is painted with a tone map, as its palette and its windows predict them. */
export function predictedFigures(
  { palette, focus }: ColourMeasures,
  toneMap: ToneMap | null,
  windows: WindowMeasures,
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
    planeMm: windows.planeMm,
    coherence01: windows.coherence01,
    lineCoverage01: coverageAt(windows.ink, pen.threshold, pen.softness),
    flatShare01: windows.flatShare01,
    focus,
  };
}
