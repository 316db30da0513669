import { describe, expect, it } from 'vitest';
import {
  anisotropyCount,
  grainReference,
  orientationCount,
  quantiseGrain,
} from '../../core/kernels/reference/grain.reference.ts';
import { seededRandom } from './testPictures.ts';
import { sizeMatrix, WasmTiles } from './wasmTiles.ts';

const tiles = new WasmTiles();

type Tensor = [e: number, f: number, g: number];

/** Tensors of every strength, direction and anisotropy, as float32. */
function someTensors(count: number, seed: number): Tensor[] {
  const random = seededRandom(seed);
  return Array.from({ length: count }, () => {
    const scale = 10 ** (-8 * random());
    const angle = random() * Math.PI;
    const [lambda1, lambda2] = [scale, scale * random()];
    const [c, s] = [Math.cos(angle), Math.sin(angle)];
    return [
      Math.fround(lambda1 * c * c + lambda2 * s * s),
      Math.fround((lambda1 - lambda2) * c * s),
      Math.fround(lambda1 * s * s + lambda2 * c * c),
    ];
  });
}

/** Planes e, f, g of blocksX × blocksY, rows padded to a stride of its own. */
function storeTensors(tensors: Tensor[], blocksX: number, blocksY: number) {
  tiles.reset();
  const stride = ((blocksX + 3) & ~3) + 4;
  const planes = [0, 1, 2].map((plane) => {
    const pointer = tiles.allocate(stride * blocksY * 4);
    const values = tiles.floats(pointer, stride * blocksY);
    tensors.forEach((tensor, i) => {
      values[Math.floor(i / blocksX) * stride + (i % blocksX)] = tensor[plane];
    });
    return pointer;
  });
  return { planes, stride };
}

function numbersOf(tensors: Tensor[], blocksX: number, blocksY: number): number[] {
  const { planes, stride } = storeTensors(tensors, blocksX, blocksY);
  const [e, f, g] = planes;
  const numbersStride = ((blocksX + 3) & ~3) + 8;
  const pointer = tiles.allocate(numbersStride * blocksY * 2);
  tiles.kernels.grainNumbers(e, f, g, stride, blocksX, blocksY, pointer, numbersStride);
  const numbers = new Uint16Array(tiles.memory.buffer, pointer, numbersStride * blocksY);
  for (let y = 0; y < blocksY; y++)
    for (let x = (blocksX + 3) & ~3; x < numbersStride; x++)
      expect(numbers[y * numbersStride + x]).toBe(0xffff);
  return tensors.map((_, i) => numbers[Math.floor(i / blocksX) * numbersStride + (i % blocksX)]);
}

/** Distance of `value` from the nearest border between two steps, in steps. */
const fromTie = (value: number) => Math.abs(value - Math.floor(value) - 0.5);

describe('grain numbers', () => {
  it('are those of the plain version at every size, but where it is a tie', () => {
    for (const [blocksX, blocksY] of sizeMatrix) {
      const tensors = someTensors(blocksX * blocksY, blocksX * 100 + blocksY);
      const numbers = numbersOf(tensors, blocksX, blocksY);
      tensors.forEach((tensor, i) => {
        const grain = grainReference(...tensor);
        const expected = quantiseGrain(grain);
        const name = `block ${i} of ${blocksX} × ${blocksY}`;
        // The module's arctangent is good to 1e-5 rad, 2e-4 of a step.
        if (fromTie((grain.tangentRad * orientationCount) / Math.PI) > 1e-3)
          expect(numbers[i] >> 4, name).toBe(expected.orientation);
        if (fromTie(grain.anisotropy * (anisotropyCount - 1)) > 1e-3)
          expect(numbers[i] & 15, name).toBe(expected.anisotropy);
        expect(numbers[i]).toBeLessThan(orientationCount * anisotropyCount);
      });
    }
  });

  it('run along the form: computed numbers', () => {
    // (.05, .02, .02): A = .7142857, −63.4349°; (.09, .03, .01): A = 1, −71.5651°, both from the definition.
    const steps = (degrees: number) => Math.round((((degrees + 180) % 180) * 64) / 180);
    const [first, second] = numbersOf(
      [
        [0.05, 0.02, 0.02],
        [0.09, 0.03, 0.01],
      ],
      2,
      1,
    );
    expect([first >> 4, first & 15]).toEqual([steps(-63.4349), Math.round(0.7142857 * 15)]);
    expect([second >> 4, second & 15]).toEqual([steps(-71.5651), 15]);
  });

  it('have no anisotropy where nothing changes', () => {
    const [number] = numbersOf([[0, 0, 0]], 1, 1);
    expect(number & 15).toBe(0);
  });
});

/** Grain vectors are whole numbers of this part of a pixel. */
const vectorUnit = 16384;

describe('grain vectors', () => {
  it('are unit vectors along the plain version’s tangent, at every size', () => {
    for (const [blocksX, blocksY] of sizeMatrix) {
      const tensors = someTensors(blocksX * blocksY, blocksX * 100 + blocksY);
      const { planes, stride } = storeTensors(tensors, blocksX, blocksY);
      const [e, f, g] = planes;
      const vectorsStride = blocksX + 1;
      const pointer = tiles.allocate(vectorsStride * blocksY * 4);
      tiles.kernels.grainVectors(e, f, g, stride, blocksX, blocksY, pointer, vectorsStride);
      const vectors = new Int16Array(tiles.memory.buffer, pointer, vectorsStride * blocksY * 2);
      tensors.forEach((tensor, i) => {
        const at = 2 * (Math.floor(i / blocksX) * vectorsStride + (i % blocksX));
        const [x, y] = [vectors[at] / vectorUnit, vectors[at + 1] / vectorUnit];
        expect(Math.hypot(x, y)).toBeCloseTo(1, 4);
        const { tangentRad, anisotropy } = grainReference(...tensor);
        // Direction is ill-defined where E ≈ G and F ≈ 0: float32 leaves an angle of about 1e-7 / A.
        if (anisotropy < 0.01) return;
        expect(Math.abs(Math.cos(tangentRad) * y - Math.sin(tangentRad) * x)).toBeLessThan(1e-3);
      });
      for (let y = 0; y < blocksY; y++) expect(vectors[2 * (y * vectorsStride + blocksX)]).toBe(-1);
    }
  });

  it('are upright where nothing changes: any direction will do, but it must be one', () => {
    const { planes, stride } = storeTensors([[0, 0, 0]], 1, 1);
    const [e, f, g] = planes;
    const pointer = tiles.allocate(4);
    tiles.kernels.grainVectors(e, f, g, stride, 1, 1, pointer, 1);
    const vector = new Int16Array(tiles.memory.buffer, pointer, 2);
    expect([...vector].map(Math.abs)).toEqual([0, vectorUnit]);
  });
});
