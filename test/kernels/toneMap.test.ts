import { describe, expect, it } from 'vitest';
import { toneMapReference } from '../../core/kernels/reference/toneMap.reference.ts';
import { toneSettingsCount, writeToneSettings } from '../../core/pipeline/toneSettings.ts';
import type { ToneMap } from '../../core/series/toneMap.ts';
import { seededRandom } from './testPictures.ts';
import { WasmTiles } from './wasmTiles.ts';

const tiles = new WasmTiles();

const identity: ToneMap = {
  matrix: [
    [1, 0, 0],
    [0, 1, 0],
    [0, 0, 1],
  ],
  offset: [0, 0, 0],
};
const maps: [string, ToneMap][] = [
  ['identity', identity],
  [
    'brighter and warmer',
    {
      matrix: [
        [1.2, 0.05, -0.02],
        [0.05, 1.1, 0.03],
        [-0.02, 0.03, 0.9],
      ],
      offset: [0.05, 0.01, 0.02],
    },
  ],
  [
    'far outside, both ways',
    {
      matrix: [
        [2.5, 0, 0],
        [0, 3, 0],
        [0, 0, 3],
      ],
      offset: [-0.8, 0, 0.1],
    },
  ],
];

function somePixels(count: number, channels: 3 | 4, depth: 8 | 16, seed: number) {
  const random = seededRandom(seed);
  const top = depth === 8 ? 255 : 65535;
  const samples = Array.from({ length: count * channels }, () => {
    const pick = random();
    return pick < 0.1 ? 0 : pick < 0.2 ? top : Math.floor(random() * (top + 1));
  });
  return depth === 8 ? Uint8Array.from(samples) : Uint16Array.from(samples);
}

function mapped(pixels: Uint8Array | Uint16Array, channels: 3 | 4, map: ToneMap): Uint16Array {
  tiles.reset();
  const bytesPerSample = pixels.BYTES_PER_ELEMENT as 1 | 2;
  const src = tiles.allocate(pixels.byteLength + 24);
  tiles.bytes(src, pixels.byteLength).set(new Uint8Array(pixels.buffer));
  const settings = tiles.allocate(toneSettingsCount * 4);
  writeToneSettings(tiles.floats(settings, toneSettingsCount), map);
  const table = tiles.allocate(tiles.kernels.toneTableBytes(bytesPerSample));
  tiles.kernels.toneTables(bytesPerSample, table);
  const out = tiles.allocate(pixels.length * 2 + 16);
  const count = pixels.length / channels;
  tiles.kernels.toneMap(src, channels, bytesPerSample, count, settings, table, out);
  expect(tiles.bytes(out + pixels.length * 2, 16).every((byte) => byte === 0xff)).toBe(true);
  return new Uint16Array(tiles.memory.buffer.slice(out, out + pixels.length * 2) as ArrayBuffer);
}

describe.each([8, 16] as const)('toneMap of %i bits', (depth) => {
  const top = depth === 8 ? 255 : 65535;

  describe.each(maps)('%s', (_name, map) => {
    it.each([3, 4] as const)('agrees with the plain version, %i channels', (channels) => {
      for (let count = 1; count <= 40; count++) {
        const pixels = somePixels(count, channels, depth, count);
        const expected = toneMapReference(
          Array.from(pixels, (value) => value / top),
          channels,
          map,
        );
        mapped(pixels, channels, map).forEach((value, i) => {
          // Single precision near the steepest part of the encoding.
          expect(Math.abs(value - expected[i] * 65535)).toBeLessThan(3);
        });
      }
    });
  });

  it('carries alpha over, bytes as their 257fold', () => {
    const pixels = somePixels(33, 4, depth, 7);
    const out = mapped(pixels, 4, maps[1][1]);
    for (let i = 3; i < pixels.length; i += 4) expect(out[i]).toBe(pixels[i] * (depth === 8 ? 257 : 1));
  });

  it('leaves every grey where it is under the identity, and greys grey', () => {
    const greys = depth === 8 ? Uint8Array.from({ length: 256 * 3 }, (_, i) => Math.floor(i / 3)) : null;
    const pixels = greys ?? Uint16Array.from({ length: 4096 * 3 }, (_, i) => Math.floor(i / 3) * 16);
    mapped(pixels, 3, identity).forEach((value, i) => {
      expect(Math.abs(value - pixels[i] * (depth === 8 ? 257 : 1))).toBeLessThanOrEqual(2);
    });
  });

  it('rises with lightness', () => {
    const ramp = Array.from({ length: 256 * 3 }, (_, i) => Math.floor(i / 3) * (depth === 8 ? 1 : 257));
    const pixels = depth === 8 ? Uint8Array.from(ramp) : Uint16Array.from(ramp);
    const out = mapped(pixels, 3, {
      matrix: [
        [0.8, 0, 0],
        [0, 1, 0],
        [0, 0, 1],
      ],
      offset: [0.1, 0, 0],
    });
    for (let i = 3; i < out.length; i++) expect(out[i]).toBeGreaterThan(out[i - 3]);
  });
});
