import { afterAll, beforeAll, describe, expect, it } from 'vitest';
import type { Engine, EnginePhoto } from '../../main/engine/engineApi.ts';
import { createEngine } from '../../main/engine/paintEngine.ts';
import { parametersWith, sameSamples, testPhoto } from './pictures.ts';

const parameters = parametersWith({ 'body.brush': '20px', 'line.strength': 0.9 });

let engine: Engine;
let photo: EnginePhoto;
beforeAll(async () => {
  engine = await createEngine();
  photo = await engine.open(testPhoto(301, 203));
});
afterAll(async () => {
  photo.close();
  await engine.close();
});

async function painted(changes: object) {
  const picture = await engine.paintPicture(photo, { ...parameters, ...changes });
  const pixels = picture.pixels.slice();
  picture.release();
  return pixels;
}

describe('a painting that is looked at on the way', () => {
  it('equals the one painted with what was decided', async () => {
    const seen: Uint16Array[] = [];
    let responses: readonly number[] = [];
    const picture = await engine.paintPicture(photo, parameters, {
      review: {
        async body(body) {
          seen.push(body.slice());
          return seen.length === 1 ? 0.6 : null;
        },
        ink(counts) {
          responses = counts;
          return 0.17;
        },
      },
    });
    const pixels = picture.pixels.slice();
    picture.release();
    expect(seen).toHaveLength(2);
    expect(responses.reduce((sum, count) => sum + count, 0)).toBe(301 * 203);
    expect(sameSamples(pixels, await painted({ 'body.hold': 0.6, 'line.threshold': 0.17 }))).toBe(true);
    expect(sameSamples(pixels, await painted({}))).toBe(false);
  });

  it('shows the body that a painting of the strata gives', async () => {
    const { strata } = await engine.paintStrata(photo, parameters, { level: 0 });
    let body: Uint16Array | null = null;
    const review = {
      async body(shown: Uint16Array) {
        body = shown.slice();
        return null;
      },
      ink: () => parameters['line.threshold'],
    };
    (await engine.paintPicture(photo, parameters, { review })).release();
    expect(sameSamples(body!, strata.body)).toBe(true);
  });

  it('gives everything back where looking at it fails', async () => {
    const review = {
      async body(): Promise<null> {
        throw new Error('could not be looked at');
      },
      ink: () => 0.1,
    };
    await expect(engine.paintPicture(photo, parameters, { review })).rejects.toThrow('looked at');
    expect(await painted({})).toHaveLength(301 * 203 * 3);
  });
});
