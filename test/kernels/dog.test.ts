import { describe, expect, it } from 'vitest';
import {
  dogLineReach,
  dogLineReference,
  dogLineWeightsReference,
} from '../../core/kernels/reference/dogLine.reference.ts';
import { imageOf, type ReferenceImage, sampleAt } from '../../core/kernels/reference/referenceImage.ts';
import { seededRandom, testPicture } from './testPictures.ts';
import { largestDifference, sizeMatrix, WasmTiles } from './wasmTiles.ts';

const tiles = new WasmTiles();
const p = 20;

type VectorAt = (blockX: number, blockY: number) => readonly [number, number];
/** Grain vectors are whole numbers of this part of a pixel. */
const vectorUnit = 16384;

const towards =
  (angleRad: number): VectorAt =>
  () => [
    Math.round(Math.cos(angleRad) * vectorUnit) / vectorUnit,
    Math.round(Math.sin(angleRad) * vectorUnit) / vectorUnit,
  ];

function dogAcross(luma: ReferenceImage, vectorAt: VectorAt, sigmaPx: number): ReferenceImage {
  tiles.reset();
  const { kernels } = tiles;
  const [blocksX, blocksY] = [luma.widthPx / 2, luma.heightPx / 2];
  const reach = kernels.dogReachPx(sigmaPx);
  const table = tiles.allocate(kernels.dogTableBytes(sigmaPx));
  kernels.dogTable(sigmaPx, p, table);
  const source = tiles.tileOf(luma, reach + 2, undefined, 1);
  const vectorsStride = blocksX + 1;
  const vectors = tiles.allocate(vectorsStride * blocksY * 4);
  const all = new Int16Array(tiles.memory.buffer, vectors, vectorsStride * blocksY * 2);
  for (let y = 0; y < blocksY; y++)
    for (let x = 0; x < blocksX; x++)
      all.set(
        vectorAt(x, y).map((part) => part * vectorUnit),
        2 * (y * vectorsStride + x),
      );
  const target = tiles.blankTile(luma.widthPx, luma.heightPx, 1, 1);
  kernels.dogAcross(
    source.pointer,
    source.strideElements,
    blocksX,
    blocksY,
    vectors,
    vectorsStride,
    table,
    reach,
    target.pointer,
    target.strideElements,
  );
  expect(tiles.isHaloUntouched(target)).toBe(true);
  return tiles.imageOf(target);
}

/** Integral of a function against a Gaussian, by the midpoint rule over ±6 σ. */
function gaussianMean(f: (t: number) => number, sigma: number): number {
  const steps = 4000;
  let [sum, weights] = [0, 0];
  for (let i = 0; i < steps; i++) {
    const t = ((i + 0.5) / steps - 0.5) * 12 * sigma;
    const weight = Math.exp(-(t * t) / (2 * sigma * sigma));
    sum += weight * f(t);
    weights += weight;
  }
  return sum / weights;
}

describe('difference of Gaussians across the grain', () => {
  it('has the weights of the plain version for every slope, sum 1', () => {
    for (const sigmaPx of [0.5, 1.2, 1.7, 2.39]) {
      tiles.reset();
      const reach = tiles.kernels.dogReachPx(sigmaPx);
      expect(reach).toBe(dogLineReach(sigmaPx));
      const bytes = tiles.kernels.dogTableBytes(sigmaPx);
      const table = tiles.allocate(bytes);
      tiles.kernels.dogTable(sigmaPx, p, table);
      for (let i = 0; i <= 32; i++) {
        const own = tiles.floats(table + i * (reach + 1) * 4, reach + 1);
        const expected = dogLineWeightsReference(sigmaPx, p, i / 32);
        expect(largestDifference(own, expected)).toBeLessThan(2e-6);
        const sum = own.reduce((total, weight) => total + 2 * weight, 0) - own[0];
        expect(sum).toBeCloseTo(1, 4);
      }
      expect(33 * (reach + 1) * 4).toBe(bytes);
    }
  });

  it('agrees with the plain version at every size, for every direction', () => {
    for (const [blocksX, blocksY] of sizeMatrix)
      for (const sigmaPx of [0.5, 1.9]) {
        const luma = testPicture(2 * blocksX, 2 * blocksY, 1);
        const random = seededRandom(blocksX * 20 + blocksY);
        const angles = Array.from({ length: blocksX * blocksY }, () => 2 * Math.PI * random());
        // The axes and the diagonals, where the major axis changes, among them.
        angles.forEach((_, i) => {
          if (i % 3 === 0) angles[i] = ((i / 3) % 8) * (Math.PI / 4);
        });
        const vectorAt: VectorAt = (x, y) => towards(angles[y * blocksX + x])(x, y);
        const own = dogAcross(luma, vectorAt, sigmaPx);
        const expected = dogLineReference(luma, vectorAt, sigmaPx, p);
        // Weights reach 20; float32 sums of them are good to some 1e-5.
        const name = `${blocksX} × ${blocksY} blocks, σ ${sigmaPx}`;
        expect(largestDifference(own.values, expected.values), name).toBeLessThan(3e-5);
      }
  });

  it('is a one-dimensional difference of Gaussians, added up by hand, across upright and level edges', () => {
    const sigmaPx = 1.5;
    const reach = 6;
    const edge = (t: number) => (t < 13 ? 0.3 : 0.7);
    const expected = (t: number) => {
      const mean = (sigma: number) => {
        let [sum, weights] = [0, 0];
        for (let d = -reach; d <= reach; d++) {
          const weight = Math.exp(-(d * d) / (2 * sigma * sigma));
          sum += weight * edge(t + d);
          weights += weight;
        }
        return sum / weights;
      };
      return (1 + p) * mean(sigmaPx) - p * mean(1.6 * sigmaPx);
    };
    const upright = dogAcross(imageOf(26, 20, 1, edge), towards(Math.PI / 2), sigmaPx);
    const level = dogAcross(
      imageOf(20, 26, 1, (_x, y) => edge(y)),
      towards(0),
      sigmaPx,
    );
    for (let t = 7; t < 19; t++) {
      expect(sampleAt(upright, t, 9)).toBeCloseTo(expected(t), 4);
      expect(sampleAt(level, 9, t)).toBeCloseTo(expected(t), 4);
    }
  });

  it('finds the same S across a soft edge of any direction: the integral over the edge’s profile', () => {
    const sigmaPx = 2;
    const [low, high, softness] = [0.3, 0.8, 2.5];
    const profile = (t: number) => low + (high - low) / (1 + Math.exp((-1.7 * t) / softness));
    const exact = (t: number) =>
      (1 + p) * gaussianMean((d) => profile(t + d), sigmaPx) -
      p * gaussianMean((d) => profile(t + d), 1.6 * sigmaPx);
    const swing = exact(3) - exact(-3);
    for (let degrees = 0; degrees < 180; degrees += 11) {
      const angle = (degrees * Math.PI) / 180;
      const [nx, ny] = [-Math.sin(angle), Math.cos(angle)];
      const luma = imageOf(60, 60, 1, (x, y) => profile((x - 30) * nx + (y - 30) * ny));
      const own = dogAcross(luma, towards(angle), sigmaPx);
      let worst = 0;
      for (let y = 20; y < 40; y++)
        for (let x = 20; x < 40; x++)
          worst = Math.max(worst, Math.abs(sampleAt(own, x, y) - exact((x - 30) * nx + (y - 30) * ny)));
      // Cutting the wider Gaussian at 2.5 σ and reading between pixels linearly cost a few per cent of the swing.
      expect(worst / swing, `${degrees}°`).toBeLessThan(0.08);
    }
  });

  it('gives a flat region its own value, and sees no edge that the grain runs across', () => {
    const flat = dogAcross(
      imageOf(16, 12, 1, () => 0.37),
      (x, y) => towards(x + 0.3 * y)(x, y),
      1.7,
    );
    for (const value of flat.values) expect(value).toBeCloseTo(0.37, 4);
    const edge = imageOf(30, 30, 1, (x) => (x < 15 ? 0.3 : 0.7));
    const along = dogAcross(edge, towards(0), 1.7);
    expect(largestDifference(along.values, edge.values)).toBeLessThan(3e-5);
  });
});
