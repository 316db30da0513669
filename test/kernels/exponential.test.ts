import { expect, it } from 'vitest';
import { WasmTiles } from './wasmTiles.ts';

const tiles = new WasmTiles();

function expOfMinus(values: number[]): Float32Array {
  tiles.reset();
  const room = values.length + 4;
  const source = tiles.allocate(room * 4);
  const target = tiles.allocate(room * 4);
  tiles.floats(source, values.length).set(values);
  tiles.kernels.expOfMinus(source, values.length, target);
  return tiles.floats(target, values.length).slice();
}

it('gives e^−x to 1e-6 relative over the whole range of arguments', () => {
  const values = Array.from({ length: 200_000 }, (_, i) => Math.fround((i / 200_000) ** 2 * 60));
  const results = expOfMinus(values);
  let worst = 0;
  values.forEach((x, i) => {
    worst = Math.max(worst, Math.abs(results[i] / Math.exp(-x) - 1));
  });
  expect(worst).toBeLessThan(2e-7);
});

it('gives exactly 1 at 0 and a negligible weight, no zero and no NaN, far out', () => {
  const [one, far, endless] = expOfMinus([0, 1000, Number.POSITIVE_INFINITY]);
  expect(one).toBe(1);
  expect(far).toBeGreaterThan(0);
  expect(far).toBeLessThan(1e-26);
  expect(endless).toBe(far);
});
