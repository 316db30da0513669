import { afterAll, beforeAll, describe, expect, it } from 'vitest';
import type { Parameters } from '../../core/parameters/table.ts';
import type { DecodedPhoto, Strata } from '../../core/pixels/photo.ts';
import type { Engine } from '../../main/engine/engineApi.ts';
import { createEngine } from '../../main/engine/paintEngine.ts';
import { differingStrata, parametersWith, sameSamples, testPhoto } from './pictures.ts';

// One engine a way of cutting; the first is what the others are held to.
const cuts = [
  { workers: 1, tileSize: { widthPx: 512, heightPx: 256 } },
  { workers: 2, tileSize: { widthPx: 34, heightPx: 18 } },
  { workers: 3, tileSize: { widthPx: 130, heightPx: 62 } },
];
let engines: Engine[] = [];

beforeAll(async () => {
  engines = await Promise.all(cuts.map((cut) => createEngine(cut)));
});
afterAll(async () => {
  await Promise.all(engines.map((engine) => engine.close()));
});

async function paint(
  engine: Engine,
  photo: DecodedPhoto,
  parameters: Parameters,
  level = 0,
): Promise<Strata> {
  const held = await engine.open(photo);
  const { strata } = await engine.paintStrata(held, parameters, { level });
  held.close();
  return strata;
}

const looks: [string, Partial<Parameters>][] = [
  ['multi-scale', { 'body.method': 'multi-scale', 'body.brush': '40px' }],
  [
    'multi-scale, low noise floor',
    { 'body.method': 'multi-scale', 'body.brush': '24px', 'body.noiseFloor': 0.003, 'body.coats': 1 },
  ],
  [
    'multi-scale, no coats, pull 2',
    { 'body.method': 'multi-scale', 'body.brush': '17px', 'body.pull': 2, 'body.coats': 0 },
  ],
  ['multi-scale with relief', { 'body.brush': '24px', 'relief.strength': 0.8, 'relief.bristle': '5px' }],
  ['grain-wise', { 'body.method': 'grain-wise', 'body.brush': '9px' }],
  ['sectors', { 'body.method': 'sectors', 'body.brush': '8px', 'body.crispness': 5 }],
  ['quadrant', { 'body.method': 'quadrant', 'body.brush': '14px' }],
  ['bilateral', { 'body.method': 'bilateral', 'body.brush': '10px' }],
];

const lines: Partial<Parameters>[] = [
  { 'line.source': 'body', 'line.width': '2px' },
  { 'line.source': 'photo', 'line.width': '11px', 'line.softness': 0.5, 'line.threshold': 0.4 },
];

describe.each(looks)('%s, cut in any way, on any number of workers', (_name, look) => {
  it.each([
    [517, 389],
    [1, 1],
    [1, 50],
    [3, 200],
    [61, 1],
    [64, 36],
  ])('gives the same bits: %d × %d px', async (widthPx, heightPx) => {
    const photo = testPhoto(widthPx, heightPx);
    for (const line of lines) {
      const parameters = parametersWith({ ...look, ...line });
      const [first, ...others] = await Promise.all(engines.map((engine) => paint(engine, photo, parameters)));
      expect([first.widthPx, first.heightPx]).toEqual([widthPx, heightPx]);
      for (const [i, other] of others.entries())
        expect(differingStrata(first, other), JSON.stringify(cuts[i + 1])).toEqual([]);
    }
  });
});

describe('paintings', () => {
  it('are the same a second time, on an engine that has painted other things meanwhile', async () => {
    const photo = testPhoto(203, 151);
    const parameters = parametersWith({ 'body.brush': '30px' });
    const [engine] = engines;
    const held = await engine.open(photo);
    const first = await engine.paintStrata(held, parameters, { level: 0 });
    await engine.paintStrata(held, parametersWith({ 'body.brush': '12px', 'body.hold': 0.6 }), { level: 1 });
    const other = await paint(engine, testPhoto(90, 70, 4, 16), parametersWith({ 'body.method': 'sectors' }));
    expect(other.groundChannels).toBe(4);
    const second = await engine.paintStrata(held, parameters, { level: 0 });
    held.close();
    expect(differingStrata(first.strata, second.strata)).toEqual([]);
  });

  it('of coarser levels are the same on every engine', async () => {
    const photo = testPhoto(333, 251, 4);
    for (const level of [1, 2, 3]) {
      const parameters = parametersWith({ 'body.brush': '60px', 'line.width': '9px' });
      const [first, ...others] = await Promise.all(
        engines.map((engine) => paint(engine, photo, parameters, level)),
      );
      expect(first.widthPx).toBe(Math.ceil(333 / 2 ** level));
      for (const other of others) expect(differingStrata(first, other)).toEqual([]);
    }
  });

  it('come out right when two are under way at once, of one photo and of two', async () => {
    const [, engine] = engines;
    const photos = [testPhoto(180, 140), testPhoto(120, 200)];
    const looks = [
      parametersWith({ 'body.brush': '40px' }),
      parametersWith({ 'body.brush': '20px', 'body.coats': 0 }),
    ];
    const alone = await Promise.all([
      paint(engines[0], photos[0], looks[0]),
      paint(engines[0], photos[0], looks[1]),
      paint(engines[0], photos[1], looks[0]),
    ]);
    const held = await Promise.all(photos.map((photo) => engine.open(photo)));
    const together = await Promise.all([
      engine.paintStrata(held[0], looks[0], { level: 0 }),
      engine.paintStrata(held[0], looks[1], { level: 0 }),
      engine.paintStrata(held[1], looks[0], { level: 0 }),
    ]);
    for (const photo of held) photo.close();
    together.forEach(({ strata }, i) => {
      expect(differingStrata(strata, alone[i])).toEqual([]);
    });
  });
});

describe('composed pictures', () => {
  it.each([
    [3, 8],
    [4, 8],
    [3, 16],
    [4, 16],
  ] as const)('have the same bits on every engine: %d channels of %d bits', async (channels, depth) => {
    const photo = testPhoto(221, 163, channels, depth);
    const parameters = parametersWith({ 'body.brush': '24px', 'body.strength': 0.8, 'line.strength': 0.6 });
    for (const outDepth of [8, 16] as const) {
      const pictures = [];
      for (const engine of engines) {
        const held = await engine.open(photo);
        const composed = await engine.paintPicture(held, parameters, { depth: outDepth });
        pictures.push(composed.pixels.slice());
        composed.release();
        held.close();
      }
      expect(pictures[0].BYTES_PER_ELEMENT).toBe(outDepth / 8);
      expect(pictures[0].length).toBe(221 * 163 * channels);
      for (const other of pictures.slice(1)) expect(sameSamples(pictures[0], other)).toBe(true);
      // Alpha is carried over, brought to the output's depth.
      if (channels === 4)
        for (let i = 3; i < 4000; i += 4) {
          const own = photo.pixels[i] / (depth === 8 ? 255 : 65535);
          expect(Math.abs(pictures[0][i] - own * (outDepth === 8 ? 255 : 65535))).toBeLessThanOrEqual(0.51);
        }
    }
  });

  it('are the photo itself where nothing has any strength', async () => {
    const photo = testPhoto(77, 55, 4, 16);
    const held = await engines[1].open(photo);
    const bare = parametersWith({ 'body.strength': 0, 'line.strength': 0, 'ground.paper': 0 });
    const composed = await engines[1].paintPicture(held, bare);
    expect(sameSamples(composed.pixels, photo.pixels)).toBe(true);
    composed.release();
    held.close();
  });

  it('take their depth from the photo unless told otherwise', async () => {
    for (const depth of [8, 16] as const) {
      const held = await engines[0].open(testPhoto(20, 10, 3, depth));
      const composed = await engines[0].paintPicture(held, parametersWith());
      expect(composed.pixels.BYTES_PER_ELEMENT).toBe(depth / 8);
      composed.release();
      held.close();
    }
  });
});
