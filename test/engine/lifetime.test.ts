import { afterAll, beforeAll, describe, expect, it, vi } from 'vitest';
import { imageOf } from '../../core/kernels/reference/referenceImage.ts';
import { autoNoiseFloor } from '../../core/noise/autoNoiseFloor.ts';
import type { Engine } from '../../main/engine/engineApi.ts';
import { createEngine } from '../../main/engine/paintEngine.ts';
import { SharedHeap } from '../../main/engine/sharedHeap.ts';
import { seededNormal } from '../kernels/testPictures.ts';
import { differingStrata, parametersWith, photoOf, testPhoto } from './pictures.ts';

let engine: Engine;
let heap: SharedHeap;

beforeAll(async () => {
  // The engine keeps its heap to itself: listen to who allocates while it starts.
  const allocate = vi.spyOn(SharedHeap.prototype, 'allocate');
  engine = await createEngine({ workers: 2, tileSize: { widthPx: 64, heightPx: 32 } });
  heap = allocate.mock.contexts[0] as SharedHeap;
  allocate.mockRestore();
});
afterAll(() => engine.close());

const looks = [
  parametersWith({ 'body.brush': '40px' }),
  parametersWith({ 'body.brush': '12px', 'line.source': 'photo', 'line.width': '9px' }),
  parametersWith({ 'body.method': 'quadrant', 'body.brush': '12px' }),
  parametersWith({ 'body.method': 'bilateral', 'body.brush': '8px', 'line.strength': 0 }),
  parametersWith({ 'body.method': 'sectors', 'body.brush': '8px' }),
];

/** Opens, paints in several ways, closes. */
async function paintRound(): Promise<void> {
  const held = await engine.open(testPhoto(190, 130, 4, 16));
  for (const parameters of looks) {
    await engine.paintStrata(held, parameters, { level: 1 });
    const region = { xPx: 31, yPx: 17, widthPx: 50, heightPx: 40 };
    await engine.paintStrata(held, parameters, { level: 0, region });
    const composed = await engine.paintPicture(held, parameters);
    composed.release();
  }
  held.close();
}

describe('memory', () => {
  it('comes back: after many pictures as much is in use as after the second', async () => {
    // The first rounds fill the store of kernel banks and the workers' scratch.
    await paintRound();
    await paintRound();
    const usedBytes = heap.usedBytes;
    const totalBytes = heap.memory.buffer.byteLength;
    for (let i = 0; i < 6; i++) await paintRound();
    expect(heap.usedBytes).toBe(usedBytes);
    expect(heap.memory.buffer.byteLength).toBe(totalBytes);
  });

  it('comes back with the photo, whatever is released twice', async () => {
    const before = heap.usedBytes;
    const held = await engine.open(testPhoto(300, 200));
    expect(heap.usedBytes).toBeGreaterThanOrEqual(before + 300 * 200 * 3);
    held.close();
    held.close();
    expect(heap.usedBytes).toBe(before);
  });

  it('stays with a photo that is closed while it is painted, and no longer', async () => {
    const before = heap.usedBytes;
    const photo = testPhoto(190, 130);
    const held = await engine.open(photo);
    const painting = engine.paintStrata(held, looks[0], { level: 0 });
    held.close();
    const { strata } = await painting;
    expect(heap.usedBytes).toBe(before);
    const again = await engine.open(photo);
    expect(differingStrata(strata, (await engine.paintStrata(again, looks[0], { level: 0 })).strata)).toEqual(
      [],
    );
    again.close();
    await expect(engine.paintStrata(again, looks[0], { level: 0 })).rejects.toThrow(/closed/);
  });

  it('of composed pixels lasts until it is released', async () => {
    const before = heap.usedBytes;
    const held = await engine.open(testPhoto(100, 80));
    const composed = await engine.paintPicture(held, looks[0]);
    held.close();
    const copy = composed.pixels.slice();
    expect(heap.usedBytes).toBeGreaterThanOrEqual(before + copy.byteLength);
    await paintRound();
    expect(composed.pixels.slice()).toEqual(copy);
    composed.release();
    expect(heap.usedBytes).toBe(before);
  });
});

describe('stopping', () => {
  it('rejects soon with the given reason, gives the memory back and leaves the engine in order', async () => {
    const photo = testPhoto(900, 700);
    const held = await engine.open(photo);
    const parameters = parametersWith({ 'body.brush': '40px' });
    const { strata: expected } = await engine.paintStrata(held, parameters, { level: 1 });
    held.close();
    const before = heap.usedBytes;
    for (const waitMs of [0, 3, 20, 60]) {
      const stopped = await engine.open(photo);
      const controller = new AbortController();
      const painting = engine.paintPicture(stopped, parameters, { signal: controller.signal });
      await new Promise((resolve) => setTimeout(resolve, waitMs));
      const reason = new Error(`stopped after ${waitMs} ms`);
      const startMs = performance.now();
      controller.abort(reason);
      await expect(painting).rejects.toBe(reason);
      // A tile takes some ten milliseconds; the machine may be busy.
      expect(performance.now() - startMs).toBeLessThan(500);
      stopped.close();
      expect(heap.usedBytes).toBe(before);
    }
    const again = await engine.open(photo);
    const { strata } = await engine.paintStrata(again, parameters, { level: 1 });
    again.close();
    expect(differingStrata(strata, expected)).toEqual([]);
  });

  it('of one painting leaves another of the same photo alone', async () => {
    const held = await engine.open(testPhoto(400, 300));
    const parameters = [parametersWith({ 'body.brush': '30px' }), parametersWith({ 'body.brush': '14px' })];
    const { strata: expected } = await engine.paintStrata(held, parameters[1], { level: 0 });
    const controller = new AbortController();
    const stopped = engine.paintStrata(held, parameters[0], { level: 0 }, { signal: controller.signal });
    const kept = engine.paintStrata(held, parameters[1], { level: 0 });
    controller.abort();
    await expect(stopped).rejects.toThrow(/abort/i);
    expect(differingStrata((await kept).strata, expected)).toEqual([]);
    held.close();
  });

  it('before the start does no work at all', async () => {
    const signal = AbortSignal.abort();
    const before = heap.usedBytes;
    await expect(engine.open(testPhoto(50, 40), { signal })).rejects.toThrow(/abort/i);
    const held = await engine.open(testPhoto(50, 40));
    await expect(engine.paintPicture(held, looks[0], { signal })).rejects.toThrow(/abort/i);
    held.close();
    expect(heap.usedBytes).toBe(before);
  });
});

describe('progress', () => {
  it('goes up through body, line and composition, never back, and stays within 0…1', async () => {
    const held = await engine.open(testPhoto(1400, 1000));
    const seen: [string, number][] = [];
    const composed = await engine.paintPicture(held, parametersWith({ 'body.brush': '60px' }), {
      onProgress: (fraction01, stage) => seen.push([stage, fraction01]),
    });
    composed.release();
    held.close();
    expect(seen.length).toBeGreaterThan(3);
    const order = ['grain', 'body', 'line', 'compose'];
    for (let i = 0; i < seen.length; i++) {
      const [stage, fraction01] = seen[i];
      expect(fraction01).toBeGreaterThanOrEqual(0);
      expect(fraction01).toBeLessThanOrEqual(1);
      if (i === 0) continue;
      const [lastStage, lastFraction] = seen[i - 1];
      expect(order.indexOf(stage)).toBeGreaterThanOrEqual(order.indexOf(lastStage));
      if (stage === lastStage) expect(fraction01).toBeGreaterThanOrEqual(lastFraction - 1e-9);
    }
  });
});

describe('the measured noise floor', () => {
  // Simulated noise of a known deviation; the estimate is held to Immerkær's numbers elsewhere.
  it.each([0, 0.01, 0.03])('is that of the photo’s noise: σ = %d', async (sigma01) => {
    const normal = seededNormal(5);
    const grey = imageOf(400, 300, 3, () => 0);
    for (let i = 0; i < 400 * 300; i++) grey.values.fill(0.5 + sigma01 * normal(), i * 3, i * 3 + 3);
    const held = await engine.open(photoOf(grey, 3, 16));
    const expected = Math.hypot(0.01, Math.sqrt(3) * sigma01);
    expect(held.noiseFloor / expected).toBeCloseTo(1, 1);
    expect(autoNoiseFloor(sigma01)).toBeCloseTo(expected, 12);
    held.close();
  });

  it('is what `auto` paints with', async () => {
    const held = await engine.open(testPhoto(150, 100));
    const paint = async (noiseFloor: 'auto' | number) =>
      (await engine.paintStrata(held, parametersWith({ 'body.noiseFloor': noiseFloor }), { level: 0 }))
        .strata;
    const auto = await paint('auto');
    expect(differingStrata(auto, await paint(held.noiseFloor))).toEqual([]);
    expect(differingStrata(auto, await paint(held.noiseFloor * 2))).toContain('body');
    held.close();
  });
});
