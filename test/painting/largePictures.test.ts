import { mkdir, readdir, readFile } from 'node:fs/promises';
import { join } from 'node:path';
import sharp from 'sharp';
import { afterAll, afterEach, beforeAll, describe, expect, it } from 'vitest';
import { defaultParameters } from '../../core/parameters/table.ts';
import type { Engine } from '../../main/engine/engineApi.ts';
import { createEngine } from '../../main/engine/paintEngine.ts';
import type { OutputFormat } from '../../main/files/photoFile.ts';
import type { PaintingOrder } from '../../main/painting/deliverPainting.ts';
import { paintToFile } from '../../main/painting/paintToFile.ts';
import { assertRoomToPaint, assertRoomToUnpack, type Room } from '../../main/painting/room.ts';
import { temporaryFolder } from '../files/temporaryFolder.ts';
import { photographs } from '../fixtures/photographs.ts';

// Small photos are sent the way of very large ones.
const inBands = { inMemoryPixels: 0 };

const folder = temporaryFolder();
const usual = process.env.TMPDIR;
let spills = '';
let engine: Engine;

beforeAll(async () => {
  engine = await createEngine({ wholeLevelPixels: 100_000 });
  spills = folder.path('spills');
  await mkdir(spills);
  process.env.TMPDIR = spills;
});
afterAll(async () => {
  if (usual === undefined) delete process.env.TMPDIR;
  else process.env.TMPDIR = usual;
  await engine.close();
});
afterEach(async () => {
  // The image library ends what it had begun before a painting was given up.
  await expect.poll(() => readdir(spills), { timeout: 10_000 }).toEqual([]);
});

function order(name: string, format: OutputFormat, changes: Partial<PaintingOrder> = {}): PaintingOrder {
  const parameters = { ...defaultParameters(), 'body.brush': '30px' as const };
  return { parameters, out: folder.path(name), format, printLongEdgeMm: 300, ...changes };
}

describe('a photo painted from file to file', () => {
  it.each([
    ['png', 'png', undefined],
    ['png', 'png', 16],
    ['jpg', 'jpeg', undefined],
    ['tif', 'tiff', undefined],
    ['tif', 'tiff', 16],
    ['webp', 'webp', undefined],
  ] as const)('gives the file it would give in memory: .%s %s %s', async (ending, format, depth) => {
    const photo = photographs.nagasakiBoats;
    const expected = await paintToFile(engine, photo, order(`whole.${ending}`, format, { depth }));
    const told: number[] = [];
    const painted = await paintToFile(engine, photo, order(`bands.${ending}`, format, { depth }), {
      ...inBands,
      onProgress: (fraction01) => told.push(fraction01),
    });
    expect(painted).toMatchObject({
      pixelsSha256: expected.pixelsSha256,
      noiseFloor: expected.noiseFloor,
      depth: expected.depth,
      remarks: expected.remarks,
    });
    expect((await readFile(painted.path)).equals(await readFile(expected.path))).toBe(true);
    expect(told.at(-1)).toBe(1);
    expect(told).toEqual([...told].sort((a, b) => a - b));
  });

  it('is refused before it is painted where the format has no room for its edges', async () => {
    const wide = { create: { width: 16_384, height: 4, channels: 3, background: 'teal' } } as const;
    const path = await folder.file('wide.png', await sharp(wide).png().toBuffer());
    const told: string[] = [];
    const painting = paintToFile(engine, path, order('wide.webp', 'webp'), {
      ...inBands,
      onProgress: (_fraction01, stage) => told.push(stage),
    });
    await expect(painting).rejects.toThrow(/WebP holds at most 16383 pixels an edge/);
    expect(told).toEqual([]);
  });

  it('is refused before it is painted where JPEG would lose its transparency', async () => {
    const clear = { create: { width: 60, height: 40, channels: 4, background: '#20808080' } } as const;
    const path = await folder.file('clear.png', await sharp(clear).png().toBuffer());
    const told: string[] = [];
    const options = { onProgress: (_fraction01: number, stage: string) => told.push(stage) };
    for (const way of [inBands, {}])
      await expect(
        paintToFile(engine, path, order('clear.jpg', 'jpeg'), { ...way, ...options }),
      ).rejects.toThrow(/partly transparent/);
    expect(told).toEqual([]);
  });

  it('leaves nothing when it is stopped in any part', async () => {
    const target = folder.path('stopped');
    await mkdir(target);
    const reason = new Error('enough');
    for (const at of [0.01, 0.3, 0.7, 0.9]) {
      const controller = new AbortController();
      const painting = paintToFile(
        engine,
        photographs.frenchAlpineLandscape,
        { ...order('', 'png'), out: join(target, 'a.png') },
        {
          ...inBands,
          signal: controller.signal,
          onProgress: (fraction01) => {
            if (fraction01 >= at) controller.abort(reason);
          },
        },
      );
      await expect(painting).rejects.toBe(reason);
      expect(await readdir(target)).toEqual([]);
    }
  });

  it('leaves nothing where the output cannot be written', async () => {
    const out = join(folder.path('nowhere'), 'a.png');
    const painting = paintToFile(engine, photographs.nagasakiBoats, { ...order('', 'png'), out }, inBands);
    await expect(painting).rejects.toThrow(/there is no folder/);
  });
});

describe('room', () => {
  const plenty: Room = { memoryBytes: () => 64e9, diskBytes: async () => 500e9 };
  const photo = { widthPx: 20_000, heightPx: 12_500, depth: 16, isTurned: true, hasAlpha: false } as const;
  const painting = { widthPx: 20_000, heightPx: 12_500, channels: 3, depth: 16 } as const;

  it('is asked for before anything is begun, in figures', async () => {
    await assertRoomToUnpack('a.tif', photo, plenty);
    await assertRoomToPaint('/x/a.png', { ...painting, format: 'png' }, plenty);
    await expect(assertRoomToUnpack('a.tif', photo, { ...plenty, memoryBytes: () => 0.7e9 })).rejects.toThrow(
      /a\.tif.*needs about 1\.\d GB of memory to be painted, and 0\.7 GB are free.*Close other programs/,
    );
    // 250 million pixels of six bytes, and as much again while they are turned.
    const disk = (bytes: number): Room => ({ ...plenty, diskBytes: async () => bytes });
    await assertRoomToUnpack('a.tif', photo, disk(3e9));
    await expect(assertRoomToUnpack('a.tif', photo, disk(2.9e9))).rejects.toThrow(
      /needs about 3\.0 GB for temporary files in ".*spills", where 2\.9 GB are free.*TMPDIR/,
    );
    await assertRoomToUnpack('a.tif', { ...photo, isTurned: false }, disk(1.5e9));
  });

  it('is asked for where the painting goes, too', async () => {
    const full: Room = { ...plenty, diskBytes: async (at) => (at === '/x' ? 0.2e9 : 500e9) };
    await expect(assertRoomToPaint('/x/a.tif', { ...painting, format: 'tiff' }, full)).rejects.toThrow(
      /in "\/x", where 0\.2 GB are free.*another disk/,
    );
    const tight: Room = { ...plenty, memoryBytes: () => 2e9 };
    await assertRoomToPaint('/x/a.png', { ...painting, format: 'png' }, tight);
    await expect(assertRoomToPaint('/x/a.webp', { ...painting, format: 'webp' }, tight)).rejects.toThrow(
      /of memory/,
    );
  });
});
