import { afterAll, beforeAll, describe, expect, it } from 'vitest';
import { imageOf, type ReferenceImage } from '../../core/kernels/reference/referenceImage.ts';
import type { DecodedPhoto } from '../../core/pixels/photo.ts';
import type { Engine } from '../../main/engine/engineApi.ts';
import { createEngine } from '../../main/engine/paintEngine.ts';
import { photographs } from '../fixtures/photographs.ts';
import { type PyramidPaint, paintPyramid, pyramidLevels } from '../oracles/paintPyramid.ts';
import { parametersWith, photographAt } from './pictures.ts';

let engine: Engine;
beforeAll(async () => {
  engine = await createEngine({ workers: 2, tileSize: { widthPx: 66, heightPx: 50 } });
});
afterAll(() => engine.close());

async function paintWithEngine(photo: DecodedPhoto, paint: PyramidPaint): Promise<Float64Array> {
  const held = await engine.open(photo);
  const parameters = parametersWith({
    'body.brush': `${paint.brushPx}px`,
    'body.pull': paint.pull,
    'body.crispness': paint.crispness,
    'body.noiseFloor': paint.noiseFloor,
    'body.hold': paint.hold,
    'body.coats': paint.coats,
  });
  const { strata } = await engine.paintStrata(held, parameters, { level: 0 });
  held.close();
  return Float64Array.from(strata.body, (value) => value / 65535);
}

const asImage = ({ widthPx, heightPx, pixels }: DecodedPhoto): ReferenceImage =>
  imageOf(widthPx, heightPx, 3, (x, y, c) => Math.fround(pixels[(y * widthPx + x) * 3 + c] / 255));

function agreement(own: Float64Array, expected: Float64Array) {
  const off = own.map((value, i) => Math.abs(value - expected[i])).sort();
  const square = off.reduce((sum, value) => sum + value * value, 0) / off.length;
  return { psnrDb: -10 * Math.log10(square), within99: off[Math.floor(off.length * 0.99)] };
}

const paint: PyramidPaint = { brushPx: 24, pull: 1, crispness: 8, noiseFloor: 0.01, hold: 0.25, coats: 2 };

describe('multi-scale painting against the plain pyramid', () => {
  it('counts levels as B = 6, 12, 24, 48 … ask', () => {
    expect([2, 6, 11.9, 12, 23, 24, 64, 96].map(pyramidLevels)).toEqual([1, 1, 1, 2, 2, 3, 4, 5]);
  });

  // A block whose grain lies between two kernels of the bank may take either: a few pixels differ by more.
  it.each([
    ['three levels, two coats', photographs.nagasakiBoats, 150, paint],
    [
      'two levels, no coats, long pull',
      photographs.dustBowlHome,
      121,
      { ...paint, brushPx: 15, coats: 0, pull: 1.5 },
    ],
    ['one level', photographs.alliumOreophilum, 90, { ...paint, brushPx: 9, noiseFloor: 0.02 }],
    [
      'low floor, one coat, low hold',
      photographs.locomotionHouseCat,
      133,
      { ...paint, brushPx: 27, noiseFloor: 0.003, coats: 1, hold: 0.08 },
    ],
  ])('agrees: %s', async (_name, path, widthPx, changed) => {
    const photo = await photographAt(path, widthPx);
    const own = await paintWithEngine(photo, changed);
    const expected = paintPyramid(asImage(photo), changed).values;
    const { psnrDb, within99 } = agreement(own, expected);
    // Measured 68 to 96 dB, and 0.001 at most.
    expect(psnrDb).toBeGreaterThan(60);
    expect(within99).toBeLessThan(0.003);
  });
});
