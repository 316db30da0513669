// A matched series at the sizes of cameras, 2 to 24 megapixels. Give a large photograph of your own as
// SERIES_PHOTOGRAPH; without one an open photograph is enlarged, which has no fine detail of its own.
import { afterAll, beforeAll, describe, expect, it } from 'vitest';
import type { Engine } from '../../main/engine/engineApi.ts';
import { createEngine } from '../../main/engine/paintEngine.ts';
import { sameSamples } from '../engine/pictures.ts';
import { photographs } from '../fixtures/photographs.ts';
import { fallOf, type PaintedSeries, paintSeries } from '../series/seriesSpread.ts';
import type { Variation } from '../series/variedSeries.ts';

const path = process.env.SERIES_PHOTOGRAPH ?? photographs.nagasakiBoats;

const variations: Variation[] = [
  { longEdgePx: 4000, exposureEv: 0, castK: 0, noise255: 1 },
  { longEdgePx: 1730, exposureEv: -1.5, castK: 600, noise255: 0 },
  { longEdgePx: 6000, exposureEv: 1.5, castK: -800, noise255: 3 },
  { longEdgePx: 2400, exposureEv: 1, castK: 300, noise255: 12 },
  { longEdgePx: 4800, exposureEv: -1, castK: -500, noise255: 8 },
  { longEdgePx: 1800, exposureEv: 0.5, castK: 800, noise255: 6 },
  { longEdgePx: 3200, exposureEv: -0.5, castK: -200, noise255: 10 },
  { longEdgePx: 5600, exposureEv: 0.2, castK: 700, noise255: 0 },
];

describe('a matched series of 2 to 24 megapixels', () => {
  let engine: Engine;
  let series: PaintedSeries;
  beforeAll(async () => {
    engine = await createEngine();
    series = await paintSeries(engine, path, variations, 300);
    const keys = [
      'meanL',
      'meanA',
      'meanB',
      'deviationL',
      'lineCoverage',
      'flatShareReduced',
      'flatShare',
    ] as const;
    for (const key of keys) process.stdout.write(`${key} falls by ${fallOf(series, key).toFixed(3)}\n`);
  }, 3_600_000);
  afterAll(() => engine.close());

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
    expect(sameSamples(series.plain[0].pixels, series.matched[0].pixels)).toBe(true);
  });
});
