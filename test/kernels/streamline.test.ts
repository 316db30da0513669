import { describe, expect, it } from 'vitest';
import { imageOf, type ReferenceImage, sampleAt } from '../../core/kernels/reference/referenceImage.ts';
import {
  streamlineReference,
  streamlineStepsReference,
  streamlineWeightsReference,
  type VectorAt,
} from '../../core/kernels/reference/streamline.reference.ts';
import { seededRandom, testPicture } from './testPictures.ts';
import { largestDifference, WasmTiles } from './wasmTiles.ts';

const tiles = new WasmTiles();
const stepPx = 2;
/** Grain vectors are whole numbers of this part of a pixel. */
const vectorUnit = 16384;
const cellPx = 8;
/** No streamline is left out with a threshold above everything. */
const everything = 1e9;
const blank = 2;

interface Walk {
  sigmaPx: number;
  threshold?: number;
  /** Cut off at the right and at the bottom, as the tiles of odd pictures are. */
  odd?: [x: number, y: number];
}

/** Streamlines over an area of even sides, for the part inside the margin. */
function streamlines(across: ReferenceImage, vectorAt: VectorAt, walk: Walk) {
  tiles.reset();
  const { kernels } = tiles;
  const { widthPx, heightPx } = across;
  const [oddX, oddY] = walk.odd ?? [0, 0];
  const steps = kernels.streamlineSteps(walk.sigmaPx, stepPx);
  const margin = 2 * Math.ceil((steps * stepPx + 1) / 2);
  const table = tiles.allocate((steps + 1) * 4);
  kernels.streamlineTable(walk.sigmaPx, stepPx, steps, table);
  const weights = [...tiles.floats(table, steps + 1)];
  const source = tiles.tileOf(across, 0, undefined, 1);
  const vectorsStride = widthPx / 2;
  const vectors = tiles.allocate(vectorsStride * (heightPx / 2) * 4);
  const all = new Int16Array(tiles.memory.buffer, vectors, vectorsStride * heightPx);
  for (let y = 0; y < heightPx / 2; y++)
    for (let x = 0; x < vectorsStride; x++)
      all.set(
        vectorAt(x, y).map((part) => part * vectorUnit),
        2 * (y * vectorsStride + x),
      );
  const [cellsX, cellsY] = [Math.ceil(widthPx / cellPx), Math.ceil(heightPx / cellPx)];
  const cells = tiles.allocate(cellsX * cellsY * 4);
  kernels.cellMinima(source.pointer, source.strideElements, widthPx, heightPx, cells, cellsX);
  const minima = tiles.floats(cells, cellsX * cellsY).slice();
  const [width, height] = [widthPx - oddX - 2 * margin, heightPx - oddY - 2 * margin];
  const target = tiles.blankTile(width, height, 1, 1);
  kernels.streamlines(
    source.pointer,
    source.strideElements,
    widthPx - oddX,
    heightPx - oddY,
    margin,
    vectors,
    vectorsStride,
    cells,
    cellsX,
    cellsY,
    Math.ceil((steps * stepPx) / cellPx) + 1,
    walk.threshold ?? everything,
    blank,
    steps,
    table,
    target.pointer,
    target.strideElements,
  );
  expect(tiles.isHaloUntouched(target)).toBe(true);
  return { smoothed: tiles.imageOf(target), margin, steps, weights, minima };
}

const towards = (angle: number): readonly [number, number] => [
  Math.round(Math.cos(angle) * vectorUnit) / vectorUnit,
  Math.round(Math.sin(angle) * vectorUnit) / vectorUnit,
];

/** Bends through every direction, and turns its sign round at random, as tensors leave it open. */
function bentField(seed: number, blocksX: number, blocksY: number): VectorAt {
  const random = seededRandom(seed);
  const signs = Array.from({ length: blocksX * blocksY }, () => (random() < 0.5 ? 0 : Math.PI));
  return (x, y) => towards(0.21 * x + 0.13 * y + Math.sin(x * y) + signs[y * blocksX + x]);
}

describe('streamlines', () => {
  it('have a Gaussian’s weights, as many as 2 σ takes, sum 1 over both sides', () => {
    for (const sigmaPx of [2, 4.8, 9.5]) {
      const { steps, weights } = streamlines(
        imageOf(64, 64, 1, () => 0),
        () => [1, 0],
        { sigmaPx },
      );
      expect(steps).toBe(streamlineStepsReference(sigmaPx, stepPx));
      expect(largestDifference(weights, streamlineWeightsReference(sigmaPx, stepPx, steps))).toBeLessThan(
        1e-7,
      );
      expect(weights.reduce((sum, weight) => sum + 2 * weight, 0) - weights[0]).toBeCloseTo(1, 6);
    }
  });

  it('agree with the plain walk through bent fields of any sign, at many sizes, cut off or not', () => {
    for (const [widthPx, heightPx] of [
      [26, 26],
      [30, 44],
      [58, 28],
      [64, 50],
    ])
      for (const odd of [
        [0, 0],
        [1, 1],
      ] as [number, number][]) {
        const across = testPicture(widthPx, heightPx, 1);
        const vectorAt = bentField(widthPx, widthPx / 2, heightPx / 2);
        const { smoothed, margin, weights } = streamlines(across, vectorAt, { sigmaPx: 4.8, odd });
        const area = imageOf(widthPx - odd[0], heightPx - odd[1], 1, (x, y) => sampleAt(across, x, y));
        const expected = imageOf(smoothed.widthPx, smoothed.heightPx, 1, (x, y) =>
          streamlineReference(area, vectorAt, x + margin, y + margin, stepPx, weights),
        );
        expect(largestDifference(smoothed.values, expected.values)).toBeLessThan(1e-6);
      }
  });

  it('are plain Gaussian sums along straight level and upright grain', () => {
    const across = testPicture(60, 60, 1);
    for (const [dx, dy] of [
      [1, 0],
      [0, 1],
    ] as [number, number][]) {
      const { smoothed, margin, weights } = streamlines(across, () => [dx, dy], { sigmaPx: 4 });
      const expected = imageOf(smoothed.widthPx, smoothed.heightPx, 1, (x, y) => {
        const at = (step: number) =>
          sampleAt(across, x + margin + step * stepPx * dx, y + margin + step * stepPx * dy);
        return weights.reduce(
          (sum, weight, i) => sum + (i === 0 ? weight * at(0) : weight * (at(i) + at(-i))),
          0,
        );
      });
      expect(largestDifference(smoothed.values, expected.values)).toBeLessThan(1e-6);
    }
  });

  it('leave flat S as it is, whatever the field', () => {
    const { smoothed } = streamlines(
      imageOf(60, 48, 1, () => 0.37),
      bentField(4, 30, 24),
      { sigmaPx: 6 },
    );
    for (const value of smoothed.values) expect(value).toBeCloseTo(0.37, 6);
  });

  it('stay on circles, where straight strokes would leave them', () => {
    // S changes across circles about (60, 60) only; the grain runs along them.
    const wave = (x: number, y: number) => Math.sin(Math.hypot(x + 0.5 - 60, y + 0.5 - 60) / 2.5);
    const across = imageOf(120, 120, 1, wave);
    const circle: VectorAt = (x, y) => towards(Math.atan2(2 * y + 1 - 60, 2 * x + 1 - 60) + Math.PI / 2);
    const { smoothed, margin } = streamlines(across, circle, { sigmaPx: 6 });
    let [sum, count, straight] = [0, 0, 0];
    for (let y = 0; y < smoothed.heightPx; y++)
      for (let x = 0; x < smoothed.widthPx; x++) {
        const [X, Y] = [x + margin, y + margin];
        const radius = Math.hypot(X + 0.5 - 60, Y + 0.5 - 60);
        if (radius < 18) continue;
        sum += Math.abs(sampleAt(smoothed, x, y) - wave(X, Y));
        // A stroke of one σ along the tangent ends this far outside its circle.
        straight += Math.abs(Math.sin(Math.hypot(radius, 12) / 2.5) - wave(X, Y));
        count++;
      }
    expect(sum / count).toBeLessThan(0.16);
    expect(straight / count).toBeGreaterThan(0.3);
  });
});

describe('leaving out what no ink can reach', () => {
  it('finds the least value of every cell of 8 × 8', () => {
    const across = testPicture(46, 34, 1);
    const { minima } = streamlines(across, () => [1, 0], { sigmaPx: 2 });
    const expected = imageOf(6, 5, 1, (cx, cy) => {
      let least = Number.POSITIVE_INFINITY;
      for (let y = cy * 8; y < Math.min(34, cy * 8 + 8); y++)
        for (let x = cx * 8; x < Math.min(46, cx * 8 + 8); x++)
          least = Math.min(least, sampleAt(across, x, y));
      return least;
    });
    expect([...minima]).toEqual([...expected.values]);
  });

  it('changes no value below the threshold, and leaves out a good part of an empty picture', () => {
    const threshold = 0.1;
    // Bare but for a few dark strokes.
    const random = seededRandom(11);
    const across = imageOf(160, 120, 1, (x, y) =>
      Math.abs(x - 40 - y / 3) < 2 || Math.hypot(x - 120, y - 90) < 4 ? -1.5 + random() : 0.4 + random(),
    );
    const vectorAt = bentField(3, 80, 60);
    const all = streamlines(across, vectorAt, { sigmaPx: 4.8 }).smoothed;
    const some = streamlines(across, vectorAt, { sigmaPx: 4.8, threshold }).smoothed;
    let leftOut = 0;
    all.values.forEach((value, i) => {
      if (some.values[i] === blank) {
        leftOut++;
        expect(value).toBeGreaterThanOrEqual(threshold);
      } else expect(some.values[i]).toBe(value);
    });
    expect(leftOut).toBeGreaterThan(all.values.length / 10);
    expect(all.values.filter((value) => value < threshold).length).toBeGreaterThan(100);
  });

  it('leaves everything out where nothing is below the threshold', () => {
    const { smoothed } = streamlines(
      imageOf(60, 60, 1, () => 0.5),
      () => [1, 0],
      { sigmaPx: 4, threshold: 0.1 },
    );
    for (const value of smoothed.values) expect(value).toBe(blank);
  });
});
