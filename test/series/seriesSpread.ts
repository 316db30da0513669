import { defaultParameters, type Parameters } from '../../core/parameters/table.ts';
import type { DecodedPhoto } from '../../core/pixels/photo.ts';
import { type FrameMatch, noMatch, parametersWithMatch } from '../../core/series/frameMatch.ts';
import type { Engine } from '../../main/engine/engineApi.ts';
import { type LeadMeasures, matchPhoto, measureLead } from '../../main/series/matchPhoto.ts';
import { type PictureFigures, pictureFigures, spreadOf } from '../oracles/pictureFigures.ts';
import { type Variation, variedFrame } from './variedSeries.ts';

/** A frame as it was painted, measured by the oracle; coverage is the mean of the line stratum. */
export interface PaintedFrame extends PictureFigures {
  lineCoverage: number;
  pixels: Uint8Array;
}

export interface PaintedSeries {
  plain: PaintedFrame[];
  matched: PaintedFrame[];
  matches: FrameMatch[];
}

/** Paints every frame with and without its match to the first one. */
export async function paintSeries(
  engine: Engine,
  path: string,
  variations: readonly Variation[],
  printLongEdgeMm: number,
): Promise<PaintedSeries> {
  const parameters = defaultParameters();
  // Smaller than any, so that all are brought down: what is not keeps its hard edges and would compare badly.
  const commonEdgePx = Math.round(0.75 * Math.min(...variations.map((each) => each.longEdgePx)));
  const series: PaintedSeries = { plain: [], matched: [], matches: [] };
  let lead: LeadMeasures | null = null;
  for (const [seed, variation] of variations.entries()) {
    const photo = await variedFrame(path, variation, seed);
    const paint = (match: FrameMatch) =>
      paintFrame(engine, photo, parameters, match, printLongEdgeMm, commonEdgePx);
    series.plain.push(await paint(noMatch));
    let match = noMatch;
    if (lead) {
      const options = { amount01: 1, printLongEdgeMm };
      ({ match } = await matchPhoto(engine, photo, lead, parameters, options));
    } else {
      const held = await engine.open(photo);
      lead = await measureLead(engine, photo, held, parameters, { printLongEdgeMm });
      held.close();
    }
    series.matches.push(match);
    series.matched.push(await paint(match));
  }
  return series;
}

async function paintFrame(
  engine: Engine,
  photo: DecodedPhoto,
  parameters: Parameters,
  match: FrameMatch,
  printLongEdgeMm: number,
  commonEdgePx: number,
): Promise<PaintedFrame> {
  const held = await engine.open(photo, { toneMap: match.toneMap });
  const matched = parametersWithMatch(parameters, match);
  const picture = await engine.paintPicture(held, matched, { printLongEdgeMm, depth: 8 });
  const pixels = Uint8Array.from(picture.pixels);
  picture.release();
  const { strata } = await engine.paintStrata(held, matched, { level: 0 }, { printLongEdgeMm });
  held.close();
  const inked = strata.line.reduce((sum, coverage) => sum + coverage, 0);
  const figures = await pictureFigures({ ...photo, pixels }, commonEdgePx);
  return { ...figures, lineCoverage: inked / 255 / strata.line.length, pixels };
}

export type SpreadKey = keyof PictureFigures | 'lineCoverage';

/** By what share the standard deviation over the frames has fallen. */
export function fallOf({ plain, matched }: PaintedSeries, key: SpreadKey): number {
  const spread = (frames: PaintedFrame[]) => spreadOf(frames.map((frame) => frame[key]));
  return 1 - spread(matched) / spread(plain);
}
