import { mkdir, readdir, readFile, writeFile } from 'node:fs/promises';
import sharp from 'sharp';
import { afterAll, beforeAll, describe, expect, it } from 'vitest';
import type { Engine } from '../../main/engine/engineApi.ts';
import { createEngine } from '../../main/engine/paintEngine.ts';
import { placeNew } from '../../main/host/placeFile.ts';
import { paintToFile } from '../../main/painting/paintToFile.ts';
import { parametersWith } from '../engine/pictures.ts';
import { photographs } from '../fixtures/photographs.ts';
import { largestDifference, readOpenRaster, readStrataFolder } from './layeredFiles.ts';
import { temporaryFolder } from './temporaryFolder.ts';

const folder = temporaryFolder();
let engine: Engine;
let photo: string;
beforeAll(async () => {
  engine = await createEngine({ workers: 2 });
  photo = folder.path('heron.png');
  // Colour under a ramp of alpha.
  const base = sharp(photographs.nagasakiBoats).resize(420).removeAlpha();
  const { data, info } = await base.raw().toBuffer({ resolveWithObject: true });
  const pixels = Buffer.alloc(info.width * info.height * 4);
  for (let at = 0; at < info.width * info.height; at++) {
    data.copy(pixels, at * 4, at * 3, at * 3 + 3);
    pixels[at * 4 + 3] = Math.min(255, (at % info.width) * 2);
  }
  await sharp(pixels, { raw: { width: info.width, height: info.height, channels: 4 } })
    .withMetadata({ density: 240 })
    .png()
    .toFile(photo);
});
afterAll(() => engine.close());

const parameters = parametersWith({ 'body.brush': '12px', 'line.strength': 0.8, 'relief.strength': 0.3 });
const order = (out: string, layers?: 'ora' | 'tiff', depth?: 8 | 16) => ({
  parameters,
  out: folder.path(out),
  format: 'png' as const,
  depth,
  printLongEdgeMm: 300,
  layers,
});

describe('layers beside a painting', () => {
  it('are painted with it, once: the same picture as without them', async () => {
    const plain = await paintToFile(engine, photo, order('plain.png'));
    const layered = await paintToFile(engine, photo, order('layered.png', 'ora'));
    expect(plain.layersPath).toBeNull();
    expect(layered.layersPath).toBe(folder.path('layered.ora'));
    expect(layered.pixelsSha256).toBe(plain.pixelsSha256);
    const { layers, merged, image } = await readOpenRaster(layered.layersPath!);
    expect(image).toMatchObject({ xres: '240', yres: '240' });
    expect(layers.map(({ name }) => name)).toEqual(['Ground', 'Body', 'Line', 'Relief', 'Transparency']);
    expect(largestDifference(layers, merged)).toBeLessThanOrEqual(1.0001 / 255);
    const delivered = await sharp(layered.path).raw().toBuffer();
    for (let at = 0; at < delivered.length / 4; at += 11)
      expect(merged.pixel(at)).toEqual([0, 1, 2, 3].map((k) => delivered[at * 4 + k] / 255));
  });

  it('of a photo that is too large for the memory are the same, file for file', async () => {
    const held = await paintToFile(engine, photo, order('held.png', 'ora', 16));
    const spilled = await paintToFile(engine, photo, order('spilled.png', 'ora', 16), { inMemoryPixels: 0 });
    expect(spilled.pixelsSha256).toBe(held.pixelsSha256);
    const [one, other] = await Promise.all(
      [held, spilled].map(({ layersPath }) => readOpenRaster(layersPath!)),
    );
    for (const [k, { name }] of one.layers.entries())
      for (let at = 0; at < one.merged.widthPx * one.merged.heightPx; at += 5)
        expect(other.layers[k].picture.pixel(at), name).toEqual(one.layers[k].picture.pixel(at));
  });

  it('as a folder of TIFFs have 16 bits, also beside a picture of 8', async () => {
    const { layersPath } = await paintToFile(engine, photo, order('folder.png', 'tiff'));
    expect(layersPath).toBe(folder.path('folder.strata'));
    const { layers, composed } = await readStrataFolder(layersPath!);
    for (const { picture } of layers) expect(picture.depth).toBe('ushort');
    expect(largestDifference(layers, composed)).toBeLessThanOrEqual(1.0001 / 255);
  });

  it('take a number where nothing may be written over, be they a file or a folder', async () => {
    await mkdir(folder.path('numbered'));
    await mkdir(folder.path('numbered/a.strata'));
    await writeFile(folder.path('numbered/a.ora'), 'somebody else’s');
    for (const kind of ['ora', 'tiff'] as const) {
      const painted = await paintToFile(engine, photo, order('numbered/a.png', kind), { place: placeNew });
      expect(painted.layersPath).toBe(
        folder.path(kind === 'ora' ? 'numbered/a 2.ora' : 'numbered/a 2.strata'),
      );
    }
    expect(await readFile(folder.path('numbered/a.ora'), 'utf8')).toBe('somebody else’s');
    expect((await readdir(folder.path('numbered'))).sort()).toEqual(
      ['a 2.ora', 'a 2.png', 'a 2.strata', 'a.ora', 'a.png', 'a.strata'].sort(),
    );
  });

  it('leave nothing behind when the painting is stopped', async () => {
    await mkdir(folder.path('stopped'));
    for (const inMemoryPixels of [undefined, 0]) {
      const stop = new AbortController();
      const onProgress = (fraction01: number) => fraction01 > 0.5 && stop.abort(new Error('stopped'));
      const options = { signal: stop.signal, onProgress, inMemoryPixels };
      await expect(paintToFile(engine, photo, order('stopped/a.png', 'ora'), options)).rejects.toThrow(
        'stopped',
      );
    }
    expect(await readdir(folder.path('stopped'))).toEqual([]);
  });
});
