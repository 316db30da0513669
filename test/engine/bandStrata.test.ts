import { afterAll, beforeAll, describe, expect, it } from 'vitest';
import type { StrataRows } from '../../core/pixels/photo.ts';
import type { Engine } from '../../main/engine/engineApi.ts';
import { createEngine } from '../../main/engine/paintEngine.ts';
import { parametersWith, testPhoto } from './pictures.ts';

let engine: Engine;
beforeAll(async () => {
  engine = await createEngine({ workers: 2, wholeLevelPixels: 0, tileSize: { widthPx: 66, heightPx: 18 } });
});
afterAll(() => engine.close());

const names = ['ground', 'body', 'line', 'relief'] as const;

describe('strata handed over band by band', () => {
  for (const [depth, channels] of [
    [8, 3],
    [16, 4],
  ] as const)
    it(`are those of the whole picture: ${depth} bits, ${channels} channels`, async () => {
      const photo = testPhoto(151, 97, channels, depth);
      const held = await engine.open(photo);
      const parameters = parametersWith({ 'relief.strength': 0.4, 'body.brush': '12px' });
      const bands: Record<(typeof names)[number], number[]> = { ground: [], body: [], line: [], relief: [] };
      const take = ({ strata }: { strata?: StrataRows }) => {
        for (const name of names) bands[name].push(...strata![name]!);
      };
      await engine.paintBands(held, parameters, take, { bandRows: 22, withStrata: true });
      const { strata } = await engine.paintStrata(held, parameters, { level: 0 });
      for (const name of names) {
        const whole = [...strata[name]!];
        expect(bands[name].length, name).toBe(whole.length);
        expect(
          bands[name].findIndex((sample, k) => sample !== whole[k]),
          name,
        ).toBe(-1);
      }
      held.close();
    });

  it('are not there for strengths of 0, nor where nobody asks', async () => {
    const held = await engine.open(testPhoto(64, 48));
    const parameters = parametersWith({ 'body.strength': 0, 'line.strength': 0 });
    const found: (StrataRows | undefined)[] = [];
    const take = ({ strata }: { strata?: StrataRows }) => void found.push(strata);
    await engine.paintBands(held, parameters, take, { withStrata: true });
    await engine.paintBands(held, parameters, take);
    expect(found[0]).toMatchObject({ body: null, line: null, relief: null });
    expect(found.at(-1)).toBeUndefined();
    held.close();
  });
});
