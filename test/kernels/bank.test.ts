import { describe, expect, it } from 'vitest';
import { grainOfNumbers } from '../../core/kernels/reference/grain.reference.ts';
import { windowSamplesReference } from '../../core/kernels/reference/grainWise.reference.ts';
import { sectorCount, sectorWeightsReference } from '../../core/kernels/reference/sectorWeights.reference.ts';
import { seededRandom } from './testPictures.ts';
import { WasmTiles } from './wasmTiles.ts';

const tiles = new WasmTiles();
const strideElements = 101;
const kernelCount = 1024;
const indexRowBytes = 4 * (sectorCount + 1);

/** A sector's weights by place, `dx,dy`. */
type SectorMap = Map<string, number>;

interface Bank {
  bytes: number;
  /** Weights of sector `k` of kernel `number`, as fractions of one. */
  sector(number: number, k: number): SectorMap;
}

/** Takes distances in bytes apart, for tiles of 16 bytes a pixel. */
function placeOf(distanceBytes: number): [dx: number, dy: number] {
  const elements = distanceBytes / 16;
  const dy = Math.round(elements / strideElements);
  return [elements - dy * strideElements, dy];
}

function buildBank(form: 'float' | 'fixed', radiusPx: number, pull: number): Bank {
  tiles.reset();
  const { kernels } = tiles;
  const capacity = kernels.bankBytes(radiusPx, pull);
  const bank = tiles.allocate(capacity);
  const guard = tiles.allocate(64);
  const scratch = tiles.allocate(kernels.bankScratchBytes(radiusPx, pull));
  const scratchGuard = tiles.allocate(64);
  const build = form === 'float' ? kernels.buildBank : kernels.buildFixedBank;
  const bytes = build(radiusPx, pull, strideElements, bank, scratch);
  expect(bytes).toBeLessThanOrEqual(capacity);
  for (const pointer of [guard, scratchGuard])
    expect(tiles.bytes(pointer, 64).every((byte) => byte === 0xff)).toBe(true);
  const view = new DataView(tiles.memory.buffer, bank, bytes);
  const sector = (number: number, k: number): SectorMap => {
    const row = number * indexRowBytes + 4 * k;
    const weights: SectorMap = new Map();
    for (let at = view.getInt32(row, true); at < view.getInt32(row + 4, true); at += 8) {
      const [dx, dy] = placeOf(view.getInt32(at, true));
      if (form === 'float') weights.set(`${dx},${dy}`, view.getFloat32(at + 4, true));
      else
        for (const i of [0, 1]) {
          const weight = view.getInt16(at + 4 + 2 * i, true);
          if (weight !== 0) weights.set(`${dx + i},${dy}`, weight / 32767);
        }
    }
    return weights;
  };
  return { bytes, sector };
}

describe('sector weights of the module', () => {
  const weightsAt = (x: number, y: number) => {
    tiles.reset();
    const pointer = tiles.allocate(64);
    const inside = tiles.kernels.sectorWeights(x, y, pointer);
    return inside ? [...new Float64Array(tiles.memory.buffer, pointer, 8)] : null;
  };

  // Kyprianidis, Semmo, Kang, Döllner 2010, on the unit disc; numbers computed independently of the project.
  it('are the computed numbers', () => {
    for (const weight of weightsAt(0, 0)!) expect(weight).toBeCloseTo(0.125, 12);
    const half = weightsAt(0.5, 0)!;
    for (const [k, share] of [0.882352, 0.058824, 0, 0, 0, 0, 0, 0.058824].entries())
      expect(half[k]).toBeCloseTo(share * 0.457833, 5);
    const [c, s] = [Math.cos(Math.PI / 8), Math.sin(Math.PI / 8)];
    const rim = weightsAt(c, s)!;
    for (const [k, share] of [0.5, 0.5, 0, 0, 0, 0, 0, 0].entries())
      expect(rim[k]).toBeCloseTo(share * Math.exp(-3.125), 10);
  });

  it('agree with the plain version on the disc and end at its rim', () => {
    const random = seededRandom(3);
    for (let i = 0; i < 2000; i++) {
      const [radius, angle] = [Math.sqrt(random()), 2 * Math.PI * random()];
      const [x, y] = [radius * Math.cos(angle), radius * Math.sin(angle)];
      const expected = sectorWeightsReference(x, y);
      weightsAt(x, y)!.forEach((weight, k) => {
        expect(weight).toBeCloseTo(expected[k], 12);
      });
    }
    expect(weightsAt(1.001, 0)).toBeNull();
    expect(weightsAt(0.8, 0.7)).toBeNull();
  });
});

describe.each(['float', 'fixed'] as const)('kernel bank, %s', (form) => {
  // Weights of whole 32767ths are off by half of one, but for the largest, which takes what is left over.
  const tolerance = form === 'float' ? 1e-7 : 0.51 / 32767;
  const sumTolerance = form === 'float' ? 1e-6 : 0;

  it.each([
    [3, 1],
    [4.3, 0.35],
    [6, 2],
    [1, 1],
    [5.5, 0],
  ])('holds the plain windows, each sector of sum 1: radius %d, pull %d', (radiusPx, pull) => {
    const bank = buildBank(form, radiusPx, pull);
    expect(tiles.kernels.bankReachPx(radiusPx, pull)).toBe(Math.ceil(radiusPx * (1 + pull)));
    for (let number = 0; number < kernelCount; number += 37) {
      const { tangentRad, anisotropy } = grainOfNumbers(number >> 4, number & 15);
      const samples = windowSamplesReference(radiusPx, pull, tangentRad, anisotropy);
      for (let k = 0; k < sectorCount; k++) {
        const sum = samples.reduce((total, { weights }) => total + weights[k], 0);
        const sector = bank.sector(number, k);
        const total = [...sector.values()].reduce((a, b) => a + b, 0);
        expect(Math.abs(total - 1)).toBeLessThanOrEqual(sumTolerance + 1e-12);
        const off = samples.map(({ dx, dy, weights }) => {
          const own = sector.get(`${dx},${dy}`) ?? 0;
          sector.delete(`${dx},${dy}`);
          return Math.abs(own - weights[k] / sum);
        });
        const [worst, second = 0] = off.sort((a, b) => b - a);
        expect(second).toBeLessThanOrEqual(tolerance);
        const rest = form === 'fixed' ? samples.length / 2 / 32767 : 0;
        expect(worst).toBeLessThanOrEqual(tolerance + rest);
        // Nothing outside the window.
        expect([...sector.keys()]).toEqual([]);
      }
    }
  });

  it('fits the bytes it asks for, whatever radius and pull', () => {
    for (const radiusPx of [1, 1.3, 2, 3.999, 6, 9.7, 14])
      for (const pull of [0, 0.5, 1, 2]) expect(buildBank(form, radiusPx, pull).bytes).toBeGreaterThan(0);
  });

  it('turns by a quarter with the orientation', () => {
    const bank = buildBank(form, 4, 1);
    for (const [o, i] of [
      [3, 12],
      [20, 5],
      [31, 15],
    ]) {
      const upright = bank.sector(o * 16 + i, 1);
      const turned = bank.sector((o + 32) * 16 + i, 1);
      expect(turned.size).toBe(upright.size);
      for (const [place, weight] of upright) {
        const [dx, dy] = place.split(',').map(Number);
        expect(turned.get(`${0 - dy},${dx}`)).toBeCloseTo(weight, 4);
      }
    }
  });
});
