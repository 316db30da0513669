import { afterAll, beforeAll, describe, expect, it } from 'vitest';
import type { DecodedPhoto } from '../../core/pixels/photo.ts';
import type { ToneMap } from '../../core/series/toneMap.ts';
import type { Engine } from '../../main/engine/engineApi.ts';
import { createEngine } from '../../main/engine/paintEngine.ts';
import { differingStrata, parametersWith, sameSamples, testPhoto } from './pictures.ts';

const warmer: ToneMap = {
  matrix: [
    [1.1, 0.04, 0],
    [0.04, 1.2, 0.02],
    [0, 0.02, 0.95],
  ],
  offset: [0.03, 0.01, 0.02],
};

let engines: Engine[] = [];
beforeAll(async () => {
  engines = await Promise.all([
    createEngine({ workers: 1 }),
    createEngine({ workers: 3, tileSize: { widthPx: 34, heightPx: 18 } }),
  ]);
});
afterAll(async () => {
  await Promise.all(engines.map((engine) => engine.close()));
});

async function strataOf(engine: Engine, photo: DecodedPhoto, toneMap?: ToneMap | null, level = 0) {
  const held = await engine.open(photo, { toneMap });
  const { strata } = await engine.paintStrata(held, parametersWith({ 'body.brush': '20px' }), { level });
  const { noiseFloor, depth } = held;
  held.close();
  return { strata, noiseFloor, depth };
}

describe('a photo opened with a tone map', () => {
  it.each([
    [3, 8],
    [4, 8],
    [3, 16],
    [4, 16],
  ] as const)(
    'paints the same for any cut and number of workers, %i channels of %i bits',
    async (channels, depth) => {
      const photo = testPhoto(211, 133, channels, depth);
      const [one, other] = await Promise.all(engines.map((engine) => strataOf(engine, photo, warmer)));
      expect(differingStrata(one.strata, other.strata)).toEqual([]);
      expect(one.noiseFloor).toBe(other.noiseFloor);
      expect(one.depth).toBe(depth);
    },
  );

  it('paints as a photo that holds the mapped pixels does, at every level', async () => {
    const photo = testPhoto(150, 90, 4);
    for (const level of [0, 1]) {
      const { strata } = await strataOf(engines[0], photo, warmer, level);
      const ground = (await strataOf(engines[0], photo, warmer)).strata.ground;
      const again = await strataOf(engines[0], { ...photo, pixels: ground }, null, level);
      expect(differingStrata(strata, again.strata)).toEqual([]);
    }
  });

  it('is left as it is, to the bit, by no map', async () => {
    const photo = testPhoto(90, 70);
    const [plain, without] = await Promise.all([
      strataOf(engines[0], photo),
      strataOf(engines[0], photo, null),
    ]);
    expect(sameSamples(plain.strata.ground, photo.pixels)).toBe(true);
    expect(differingStrata(plain.strata, without.strata)).toEqual([]);
  });

  it('keeps its alpha, and leaves the pixels it was given alone', async () => {
    const photo = testPhoto(60, 40, 4);
    const before = photo.pixels.slice();
    const { strata } = await strataOf(engines[0], photo, warmer);
    for (let i = 3; i < before.length; i += 4) expect(strata.ground[i]).toBe(before[i] * 257);
    expect(sameSamples(photo.pixels, before)).toBe(true);
  });

  it('gives all memory back when it is stopped', async () => {
    const stopping = AbortSignal.abort(new Error('stopped'));
    const opening = engines[0].open(testPhoto(60, 40), { toneMap: warmer, signal: stopping });
    await expect(opening).rejects.toThrow('stopped');
    const held = await engines[0].open(testPhoto(60, 40), { toneMap: warmer });
    expect(held.depth).toBe(8);
    held.close();
  });
});
