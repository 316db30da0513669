import { afterAll, beforeAll, describe, expect, it, vi } from 'vitest';
import type { Parameters } from '../../core/parameters/table.ts';
import type { DecodedPhoto } from '../../core/pixels/photo.ts';
import type { Engine, EnginePhoto, RowSource } from '../../main/engine/engineApi.ts';
import { createEngine } from '../../main/engine/paintEngine.ts';
import { SharedHeap } from '../../main/engine/sharedHeap.ts';
import { differingStrata, parametersWith, sameSamples, testPhoto } from './pictures.ts';

// Paintings from rows and in bands, on engines that keep no level, or only the coarsest, whole, are held to those
// of an engine that has the photo and its pyramid in memory.
let whole: Engine;
let sliding: Engine[] = [];
let heap: SharedHeap;

beforeAll(async () => {
  whole = await createEngine({ workers: 2 });
  const allocate = vi.spyOn(SharedHeap.prototype, 'allocate');
  sliding = [
    await createEngine({ workers: 2, tileSize: { widthPx: 66, heightPx: 18 }, wholeLevelPixels: 0 }),
  ];
  heap = allocate.mock.contexts[0] as SharedHeap;
  allocate.mockRestore();
  sliding.push(
    await createEngine({ workers: 1, tileSize: { widthPx: 130, heightPx: 34 }, wholeLevelPixels: 14_000 }),
  );
});
afterAll(() => Promise.all([whole, ...sliding].map((engine) => engine.close())));

/** Hands out a photo's rows, and remembers how many were asked for at once and in all. */
class CountedRows implements RowSource {
  readonly widthPx: number;
  readonly heightPx: number;
  readonly channels: 3 | 4;
  readonly bytesPerSample: 1 | 2;
  most = 0;
  total = 0;
  closed = 0;

  constructor(readonly photo: DecodedPhoto) {
    this.widthPx = photo.widthPx;
    this.heightPx = photo.heightPx;
    this.channels = photo.channels;
    this.bytesPerSample = photo.pixels.BYTES_PER_ELEMENT as 1 | 2;
  }

  close(): void {
    this.closed += 1;
  }

  async readRows(topRow: number, rowCount: number, to: Uint8Array): Promise<void> {
    const { pixels } = this.photo;
    const rowBytes = this.widthPx * this.channels * this.bytesPerSample;
    expect(to.byteLength).toBe(rowCount * rowBytes);
    expect(topRow + rowCount).toBeLessThanOrEqual(this.heightPx);
    to.set(new Uint8Array(pixels.buffer, pixels.byteOffset + topRow * rowBytes, to.byteLength));
    this.most = Math.max(this.most, rowCount);
    this.total += rowCount;
  }
}

async function paintedWhole(photo: DecodedPhoto, parameters: Parameters, depth?: 8 | 16) {
  const held = await whole.open(photo);
  const composed = await whole.paintPicture(held, parameters, { depth });
  const pixels = composed.pixels.slice();
  composed.release();
  held.close();
  return { pixels, noiseFloor: held.noiseFloor };
}

async function paintedInBands(
  engine: Engine,
  held: EnginePhoto,
  parameters: Parameters,
  bandRows: number,
  depth?: 8 | 16,
) {
  const pieces: (Uint8Array | Uint16Array)[] = [];
  let next = 0;
  await engine.paintBands(
    held,
    parameters,
    ({ topRow, rowCount, pixels }) => {
      expect(topRow).toBe(next);
      expect(pixels.length).toBe(rowCount * held.widthPx * held.channels);
      next += rowCount;
      pieces.push(pixels.slice());
    },
    { bandRows, depth },
  );
  expect(next).toBe(held.heightPx);
  const Samples = pieces[0].constructor as Uint8ArrayConstructor;
  const all = new Samples(pieces.reduce((sum, piece) => sum + piece.length, 0));
  let at = 0;
  for (const piece of pieces) {
    all.set(piece, at);
    at += piece.length;
  }
  return all;
}

const looks: [string, Partial<Parameters>][] = [
  ['multi-scale', { 'body.brush': '40px', 'line.width': '2px' }],
  ['multi-scale, no line', { 'body.brush': '90px', 'line.strength': 0 }],
  [
    'multi-scale, one coat, line from the photo',
    { 'body.brush': '24px', 'body.coats': 1, 'line.source': 'photo', 'line.width': '11px' },
  ],
  [
    'multi-scale, no coats, pull 2, fine line from the photo',
    { 'body.brush': '17px', 'body.pull': 2, 'body.coats': 0, 'line.source': 'photo', 'line.width': '2px' },
  ],
  ['wide line and relief', { 'body.brush': '30px', 'line.width': '9px', 'relief.strength': 0.7 }],
  ['relief alone', { 'body.strength': 0, 'line.strength': 0, 'relief.strength': 1, 'relief.bristle': '8px' }],
  ['grain-wise', { 'body.method': 'grain-wise', 'body.brush': '9px' }],
  ['sectors', { 'body.method': 'sectors', 'body.brush': '8px' }],
  ['quadrant', { 'body.method': 'quadrant', 'body.brush': '14px' }],
  ['bilateral', { 'body.method': 'bilateral', 'body.brush': '10px', 'line.strength': 0 }],
  ['nothing at all', { 'body.strength': 0, 'line.strength': 0, 'ground.paper': 0 }],
];

describe.each(looks)('bands of %s', (_name, look) => {
  it.each([
    [517, 389, 3, 8],
    [203, 431, 4, 16],
    [3, 200, 3, 8],
    [61, 1, 4, 8],
    [1, 1, 3, 16],
  ] as const)(
    'equal the whole to the bit: %d × %d px, %d channels of %d bits',
    async (widthPx, heightPx, channels, depth) => {
      const photo = testPhoto(widthPx, heightPx, channels, depth);
      const parameters = parametersWith(look);
      const expected = await paintedWhole(photo, parameters);
      for (const [i, engine] of sliding.entries()) {
        const held = await engine.openRows(new CountedRows(photo));
        expect(held.noiseFloor).toBe(expected.noiseFloor);
        const inMemory = await engine.open(photo);
        for (const bandRows of [18, 61, 1000]) {
          const where = `engine ${i}, ${bandRows} rows a band`;
          const fromRows = await paintedInBands(engine, held, parameters, bandRows);
          expect(sameSamples(fromRows, expected.pixels), where).toBe(true);
        }
        const fromMemory = await paintedInBands(engine, inMemory, parameters, 61);
        expect(sameSamples(fromMemory, expected.pixels), `engine ${i}, photo in memory`).toBe(true);
        held.close();
        inMemory.close();
      }
    },
  );
});

describe('a photo read by rows', () => {
  it('paints 8 bits from 16 and 16 from 8 like one in memory', async () => {
    const parameters = parametersWith({ 'body.brush': '24px' });
    for (const [own, asked] of [
      [8, 16],
      [16, 8],
    ] as const) {
      const photo = testPhoto(221, 163, 4, own);
      const { pixels } = await paintedWhole(photo, parameters, asked);
      const held = await sliding[0].openRows(new CountedRows(photo));
      expect(sameSamples(await paintedInBands(sliding[0], held, parameters, 40, asked), pixels)).toBe(true);
      held.close();
    }
  });

  it('has the strata of every level and region of one in memory', async () => {
    const photo = testPhoto(419, 377, 4, 16);
    const parameters = parametersWith({ 'body.brush': '60px', 'line.width': '6px', 'relief.strength': 0.5 });
    const fromPhoto = parametersWith({ 'body.brush': '20px', 'line.source': 'photo', 'line.width': '8px' });
    const inMemory = await whole.open(photo);
    for (const engine of sliding) {
      const held = await engine.openRows(new CountedRows(photo));
      for (const where of [
        { level: 0 },
        { level: 0, region: { xPx: 201, yPx: 133, widthPx: 77, heightPx: 51 } },
        { level: 0, region: { xPx: 0, yPx: 300, widthPx: 419, heightPx: 77 } },
        { level: 1 },
        { level: 1, region: { xPx: 31, yPx: 101, widthPx: 90, heightPx: 60 } },
        { level: 2 },
        { level: 5 },
      ])
        for (const look of [parameters, fromPhoto]) {
          const expected = await whole.paintStrata(inMemory, look, where);
          const { strata } = await engine.paintStrata(held, look, where);
          expect(differingStrata(strata, expected.strata), JSON.stringify(where)).toEqual([]);
        }
      held.close();
    }
    inMemory.close();
  });

  it('takes a tone map like one in memory', async () => {
    const photo = testPhoto(160, 210);
    const toneMap = {
      matrix: [
        [1.1, 0, 0],
        [0, 0.9, 0.1],
        [0, 0, 1.2],
      ],
      offset: [0.02, -0.01, 0],
    } as never;
    const parameters = parametersWith({ 'body.brush': '20px' });
    const inMemory = await whole.open(photo, { toneMap });
    const composed = await whole.paintPicture(inMemory, parameters, { depth: 16 });
    const held = await sliding[0].openRows(new CountedRows(photo), { toneMap });
    expect(held.noiseFloor).toBe(inMemory.noiseFloor);
    const inBands = await paintedInBands(sliding[0], held, parameters, 50, 16);
    expect(sameSamples(inBands, composed.pixels)).toBe(true);
    composed.release();
    inMemory.close();
    held.close();
  });

  it('is read no more than twice from top to bottom: once for the noise, once for the painting', async () => {
    const rows = new CountedRows(testPhoto(120, 800));
    const held = await sliding[0].openRows(rows);
    expect(rows.total).toBe(800);
    await paintedInBands(sliding[0], held, parametersWith({ 'body.brush': '40px' }), 36);
    expect(rows.total).toBe(1600);
    expect(rows.most).toBeLessThan(400);
    expect(rows.closed).toBe(0);
    held.close();
    held.close();
    expect(rows.closed).toBe(1);
  });
});

describe('memory of bands', () => {
  const parameters = parametersWith({ 'body.brush': '20px', 'line.width': '2px' });

  async function peakBytes(heightPx: number): Promise<number> {
    const held = await sliding[0].openRows(new CountedRows(testPhoto(100, heightPx)));
    let most = 0;
    const before = heap.usedBytes;
    await sliding[0].paintBands(
      held,
      parameters,
      () => {
        most = Math.max(most, heap.usedBytes - before);
      },
      {
        bandRows: 18,
      },
    );
    held.close();
    return most;
  }

  it('grows with the tensor of the second level alone, whatever the height', async () => {
    const [low, high] = [await peakBytes(600), await peakBytes(2400)];
    // A block of the second level and of the third, three float32 each, stands for 16 pixels of the photo.
    const tensorBytes = ((100 * 1800) / 16) * 12 * 1.4;
    expect(high - low).toBeLessThan(tensorBytes);
  });

  it('comes back, also where the receiver fails or the painting is stopped', async () => {
    const held = await sliding[0].openRows(new CountedRows(testPhoto(200, 300, 4, 16)));
    await paintedInBands(sliding[0], held, parameters, 40);
    const before = heap.usedBytes;
    await paintedInBands(sliding[0], held, parameters, 40);
    expect(heap.usedBytes).toBe(before);
    const failure = new Error('no room');
    const failing = sliding[0].paintBands(held, parameters, () => Promise.reject(failure), { bandRows: 40 });
    await expect(failing).rejects.toBe(failure);
    expect(heap.usedBytes).toBe(before);
    const controller = new AbortController();
    let bands = 0;
    const stopped = sliding[0].paintBands(
      held,
      parameters,
      () => {
        bands += 1;
        if (bands === 2) controller.abort(new Error('stopped'));
      },
      { bandRows: 40, signal: controller.signal },
    );
    await expect(stopped).rejects.toThrow('stopped');
    expect(bands).toBe(2);
    expect(heap.usedBytes).toBe(before);
    held.close();
  });

  it('tells how far the whole is after every band', async () => {
    const held = await sliding[1].openRows(new CountedRows(testPhoto(200, 300)));
    const told: number[] = [];
    await sliding[1].paintBands(held, parameters, () => {}, {
      bandRows: 34,
      onProgress: (f) => told.push(f),
    });
    expect(told.length).toBeGreaterThanOrEqual(9);
    expect([...told].sort((a, b) => a - b)).toEqual(told);
    expect(told.at(-1)).toBe(1);
    held.close();
  });
});
