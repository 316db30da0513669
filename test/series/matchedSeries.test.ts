import { afterAll, beforeAll, describe, expect, it } from 'vitest';
import { isNoMatch } from '../../core/series/frameMatch.ts';
import type { Engine } from '../../main/engine/engineApi.ts';
import { createEngine } from '../../main/engine/paintEngine.ts';
import { sameSamples } from '../engine/pictures.ts';
import { photographs } from '../fixtures/photographs.ts';
import { fallOf, type PaintedSeries, paintSeries } from './seriesSpread.ts';
import type { Variation } from './variedSeries.ts';

/** One photograph, as cameras and hands differ: the first is the lead. */
const variations: Variation[] = [
  { longEdgePx: 1000, exposureEv: 0, castK: 0, noise255: 1 },
  { longEdgePx: 700, exposureEv: -1.5, castK: 600, noise255: 0 },
  { longEdgePx: 1300, exposureEv: 1.5, castK: -800, noise255: 4 },
  { longEdgePx: 900, exposureEv: 0.8, castK: 300, noise255: 12 },
  { longEdgePx: 1200, exposureEv: -1, castK: -500, noise255: 8 },
  { longEdgePx: 800, exposureEv: 0.3, castK: 800, noise255: 6 },
];
/** So that a millimetre has as many pixels as on a print of 300 mm from 13 megapixels. */
const printLongEdgeMm = 75;

let engine: Engine;
let series: PaintedSeries;
beforeAll(async () => {
  engine = await createEngine();
  series = await paintSeries(engine, photographs.nagasakiBoats, variations, printLongEdgeMm);
}, 240_000);
afterAll(() => engine.close());

describe('a series matched to its lead', () => {
  it.each([
    ['meanL', 0.8],
    ['meanA', 0.8],
    ['meanB', 0.8],
    ['deviationL', 0.6],
    ['lineCoverage', 0.7],
    ['flatShareReduced', 0.6],
  ] as const)('scatters less in %s: by at least %d', (key, least) => {
    expect(fallOf(series, key)).toBeGreaterThanOrEqual(least);
  });

  it('leaves the lead as it is, to the bit', () => {
    expect(isNoMatch(series.matches[0])).toBe(true);
    expect(sameSamples(series.plain[0].pixels, series.matched[0].pixels)).toBe(true);
  });

  it('decides the same again', async () => {
    const again = await paintSeries(
      engine,
      photographs.nagasakiBoats,
      variations.slice(0, 2),
      printLongEdgeMm,
    );
    expect(again.matches[1]).toEqual(series.matches[1]);
  });
});
