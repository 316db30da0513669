import { describe, expect, it } from 'vitest';
import { blendModeNumber } from '../../core/composition/blendModes.ts';
import {
  compose,
  compositionSettingsBytes,
  parseColour,
  writeCompositionSettings,
} from '../../core/composition/compose.ts';
import { type BlendMode, compositeReference } from '../../core/kernels/reference/blend.reference.ts';
import { defaultParameters, type Parameters } from '../../core/parameters/table.ts';
import { seededRandom } from './testPictures.ts';
import { largestDifference, WasmTiles } from './wasmTiles.ts';

const tiles = new WasmTiles();
const modes = Object.keys(blendModeNumber) as BlendMode[];

interface Strata {
  ground: Uint8Array | Uint16Array;
  channels: 3 | 4;
  body: Uint16Array;
  line: Uint8Array;
  relief: Uint8Array;
}

/** Strata of `count` pixels; the ends of every range come up often. */
function someStrata(count: number, channels: 3 | 4, depth: 8 | 16, seed: number): Strata {
  const random = seededRandom(seed);
  const value = (top: number) => {
    const pick = random();
    return pick < 0.1 ? 0 : pick < 0.2 ? top : Math.floor(random() * (top + 1));
  };
  const samples = Array.from({ length: count * channels }, () => value(depth === 8 ? 255 : 65535));
  return {
    ground: depth === 8 ? Uint8Array.from(samples) : Uint16Array.from(samples),
    channels,
    body: Uint16Array.from({ length: count * 3 }, () => value(65535)),
    line: Uint8Array.from({ length: count }, () => value(255)),
    // 254 is the brightest there is.
    relief: Uint8Array.from({ length: count }, () => value(254)),
  };
}

function store(samples: Uint8Array | Uint16Array): number {
  // The kernel may read a few bytes past the end.
  const pointer = tiles.allocate(samples.byteLength + 16);
  tiles.bytes(pointer, samples.byteLength).set(new Uint8Array(samples.buffer));
  return pointer;
}

function run(
  strata: Strata,
  parameters: Parameters,
  depth: 8 | 16,
  channels: 3 | 4,
): Uint8Array | Uint16Array {
  tiles.reset();
  const count = strata.line.length;
  const settings = tiles.allocate(compositionSettingsBytes);
  writeCompositionSettings(tiles.floats(settings, compositionSettingsBytes / 4), parameters);
  const bytes = count * channels * (depth / 8);
  const out = tiles.allocate(bytes + 16);
  compose(
    tiles.kernels,
    {
      ground: store(strata.ground),
      groundBytesPerSample: strata.ground.BYTES_PER_ELEMENT as 1 | 2,
      groundChannels: strata.channels,
      body: store(strata.body),
      line: store(strata.line),
      relief: store(strata.relief),
    },
    parameters,
    settings,
    count,
    { out, bytesPerSample: depth === 8 ? 1 : 2, channels },
  );
  expect(tiles.bytes(out + bytes, 16).every((byte) => byte === 0xff)).toBe(true);
  const buffer = tiles.memory.buffer.slice(out, out + bytes);
  return depth === 8 ? new Uint8Array(buffer) : new Uint16Array(buffer);
}

/** The composition as it is defined, in float64, before rounding; alpha of the ground or 1. */
function composedPlainly(strata: Strata, parameters: Parameters): number[] {
  const top = strata.ground.BYTES_PER_ELEMENT === 1 ? 255 : 65535;
  const paper = parseColour(parameters['ground.colour']);
  const ink = parseColour(parameters['line.colour']);
  return [...strata.line].flatMap((coverage, i) => {
    const rgb = [0, 1, 2].map((c) => {
      const ground = strata.ground[i * strata.channels + c] / top;
      const papered = ground + parameters['ground.paper'] * (paper[c] - ground);
      const painted = papered + parameters['body.strength'] * (strata.body[i * 3 + c] / 65535 - papered);
      const alpha = (parameters['line.strength'] * coverage) / 255;
      const inked = compositeReference(parameters['line.blend'], painted, ink[c], alpha);
      // 127 of 254 is the half that changes nothing.
      return compositeReference('hard-light', inked, strata.relief[i] / 254, parameters['relief.strength']);
    });
    return [...rgb, strata.channels === 4 ? strata.ground[i * 4 + 3] / top : 1];
  });
}

const parametersWith = (changes: Partial<Parameters>): Parameters => ({ ...defaultParameters(), ...changes });

const looks: Partial<Parameters>[] = [
  { 'body.strength': 0.6, 'line.strength': 0.7, 'ground.paper': 0.25 },
  { 'body.strength': 1, 'line.strength': 1, 'line.colour': '#000000' },
  { 'body.strength': 0, 'line.strength': 0.5, 'line.colour': '#ff8000', 'ground.paper': 1 },
  { 'body.strength': 0.3, 'line.strength': 0, 'ground.colour': '#ffffff' },
  { 'body.strength': 1, 'line.strength': 0.8, 'line.colour': '#ffffff' },
  { 'body.strength': 0.9, 'line.strength': 0.8, 'relief.strength': 0.6 },
  { 'body.strength': 1, 'line.strength': 0, 'relief.strength': 1 },
];

describe.each(modes)('composition with %s', (blend) => {
  it.each([
    [3, 8],
    [4, 8],
    [3, 16],
    [4, 16],
  ] as const)('agrees with the plain formulas: ground of %d channels of %d bits', (channels, groundDepth) => {
    for (const [i, look] of looks.entries())
      for (const depth of [8, 16] as const)
        for (const outChannels of [3, 4] as const) {
          const strata = someStrata(211, channels, groundDepth, 17 * i + channels);
          const parameters = parametersWith({ ...look, 'line.blend': blend });
          const own = run(strata, parameters, depth, outChannels);
          const expected = composedPlainly(strata, parameters);
          const top = depth === 8 ? 255 : 65535;
          let worst = 0;
          for (let pixel = 0; pixel < 211; pixel++)
            for (let c = 0; c < outChannels; c++)
              worst = Math.max(worst, Math.abs(own[pixel * outChannels + c] - expected[pixel * 4 + c] * top));
          // Half a step, and float32 over a handful of operations (colour burn divides by the ink).
          expect(worst).toBeLessThanOrEqual(0.5 + top * 2e-6);
        }
  });
});

describe('composition', () => {
  it('numbers the blend modes as the references do, each once', () => {
    expect(modes.length).toBe(new Set(Object.values(blendModeNumber)).size);
  });

  it('reads colours', () => {
    expect(parseColour('#1c1a17')).toEqual([0x1c / 255, 0x1a / 255, 0x17 / 255]);
  });

  it('is the exact identity at no strength, alpha and all', () => {
    const bare = parametersWith({ 'body.strength': 0, 'line.strength': 0, 'ground.paper': 0 });
    for (const channels of [3, 4] as const)
      for (const depth of [8, 16] as const) {
        const ground =
          depth === 8
            ? Uint8Array.from({ length: 256 * channels }, (_, i) => Math.floor(i / channels))
            : Uint16Array.from({ length: 65536 * channels }, (_, i) => Math.floor(i / channels));
        const count = ground.length / channels;
        const strata: Strata = {
          ground,
          channels,
          body: new Uint16Array(count * 3).fill(1234),
          line: new Uint8Array(count).fill(255),
          relief: new Uint8Array(count).fill(254),
        };
        expect(largestDifference(run(strata, bare, depth, channels), ground)).toBe(0);
      }
  });

  it('is the body itself at full strength, and brings 8 bits to 16 by 257', () => {
    const body = Uint16Array.from({ length: 65536 * 3 }, (_, i) => Math.floor(i / 3));
    const line = new Uint8Array(65536);
    const relief = new Uint8Array(65536);
    const strata: Strata = { ground: new Uint8Array(65536 * 3).fill(9), channels: 3, body, line, relief };
    const painted = parametersWith({ 'body.strength': 1, 'line.strength': 0, 'ground.paper': 0 });
    expect(largestDifference(run(strata, painted, 16, 3), body)).toBe(0);
    const ground = Uint8Array.from({ length: 256 * 4 }, (_, i) => i >> 2);
    const bare = parametersWith({ 'body.strength': 0, 'line.strength': 0, 'ground.paper': 0 });
    const small: Strata = {
      ground,
      channels: 4,
      body: body.slice(0, 768),
      line: line.slice(0, 256),
      relief: relief.slice(0, 256),
    };
    expect(run(small, bare, 16, 4)).toEqual(Uint16Array.from(ground, (value) => value * 257));
  });

  it('leaves every tone as it is where the surface is flat', () => {
    const body = Uint16Array.from({ length: 65536 * 3 }, (_, i) => Math.floor(i / 3));
    const line = new Uint8Array(65536);
    const relief = new Uint8Array(65536).fill(127);
    const strata: Strata = { ground: new Uint8Array(65536 * 3), channels: 3, body, line, relief };
    const lit = parametersWith({ 'body.strength': 1, 'line.strength': 0, 'relief.strength': 1 });
    expect(largestDifference(run(strata, lit, 16, 3), body)).toBe(0);
  });

  it('makes opaque pixels where the ground has no alpha', () => {
    const strata = someStrata(9, 3, 8, 1);
    for (const depth of [8, 16] as const) {
      const own = run(strata, parametersWith({}), depth, 4);
      for (let i = 3; i < own.length; i += 4) expect(own[i]).toBe(depth === 8 ? 255 : 65535);
    }
  });
});
