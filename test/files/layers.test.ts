import { execFileSync } from 'node:child_process';
import { mkdir, readdir, readFile, writeFile } from 'node:fs/promises';
import sharp from 'sharp';
import { afterAll, beforeAll, describe, expect, it } from 'vitest';
import { layerStack } from '../../core/composition/layerStack.ts';
import { type Parameters, parameterTable } from '../../core/parameters/table.ts';
import type { DecodedPhoto } from '../../core/pixels/photo.ts';
import type { Engine } from '../../main/engine/engineApi.ts';
import { createEngine } from '../../main/engine/paintEngine.ts';
import { layersBeside, writeLayers } from '../../main/files/layers/writeLayers.ts';
import { parametersWith, photographAt, testPhoto } from '../engine/pictures.ts';
import { photographs } from '../fixtures/photographs.ts';
import { laidOver } from '../oracles/compositing.ts';
import { largestDifference, readOpenRaster, readStrataFolder, takenApart } from './layeredFiles.ts';
import { temporaryFolder } from './temporaryFolder.ts';

const folder = temporaryFolder();
let engine: Engine;
beforeAll(async () => {
  engine = await createEngine({ workers: 2 });
});
afterAll(() => engine.close());

const oneStep = 1 / 255;
const modes = parameterTable['line.blend'].choices.map(({ value }) => value);
let files = 0;

/** Every stratum has a part, none hides another. */
const mixed = (changes: Partial<Parameters> = {}) =>
  parametersWith({
    'body.brush': '10px',
    'body.strength': 0.8,
    'line.strength': 0.85,
    'line.threshold': 0.4,
    'line.width': '2px',
    ...changes,
  });

async function written(photo: DecodedPhoto, parameters: Parameters, depth: 8 | 16, inFiles = false) {
  const { picture, store } = await takenApart(engine, photo, parameters, { depth, inFiles });
  const path = folder.path(`painting-${files++}.ora`);
  await writeLayers(path, picture, 'ora');
  store.discard();
  return readOpenRaster(path);
}

describe('the W3C formulas, as written for these tests', () => {
  // Worked by hand from the document's text.
  it('give what can be worked out by hand', () => {
    expect(laidOver([0, 0, 0, 0], [0.2, 0.4, 0.6, 0.5], 'multiply')).toEqual([0.2, 0.4, 0.6, 0.5]);
    const grey = [0.5, 0.5, 0.5, 1] as const;
    expect(laidOver(grey, [0.5, 1, 0, 1], 'multiply')).toEqual([0.25, 0.5, 0, 1]);
    expect(laidOver(grey, [0.5, 1, 0, 0.5], 'src-over')).toEqual([0.5, 0.75, 0.25, 1]);
    expect(laidOver(grey, [1, 1, 1, 0.25], 'dst-out')).toEqual([0.5, 0.5, 0.5, 0.75]);
    expect(laidOver([1, 0.5, 0.2, 1], [0, 0.8, 0.5, 1], 'color-burn')).toEqual([1, 1 - 0.5 / 0.8, 0, 1]);
  });
});

describe('an OpenRaster file flattens to our own composite', () => {
  for (const depth of [8, 16] as const)
    for (const mode of modes)
      it(`${mode} ink, ${depth} bits, with paper`, async () => {
        const parameters = mixed({ 'line.blend': mode, 'line.colour': '#7a2f1c', 'ground.paper': 0.3 });
        const { layers, merged } = await written(testPhoto(120, 90), parameters, depth);
        expect(layers.map(({ name }) => name)).toEqual(['Ground', 'Paper', 'Body', 'Line']);
        expect(layers.at(-1)!.picture.pixel).toBeTypeOf('function');
        expect(largestDifference(layers, merged)).toBeLessThanOrEqual(oneStep * 1.0001);
      });

  for (const depth of [8, 16] as const)
    for (const [photoDepth, channels] of [
      [8, 4],
      [16, 3],
      [16, 4],
    ] as const)
      it(`relief, a photo of ${channels} channels and ${photoDepth} bits, ${depth} bits`, async () => {
        const parameters = mixed({
          'relief.strength': 0.7,
          'relief.bristle': '3px',
          'line.blend': 'overlay',
        });
        const photo = testPhoto(131, 77, channels, photoDepth);
        const { layers, merged } = await written(photo, parameters, depth);
        const names = ['Ground', 'Body', 'Line', 'Relief', ...(channels === 4 ? ['Transparency'] : [])];
        expect(layers.map(({ name }) => name)).toEqual(names);
        expect(merged.channels).toBe(channels);
        expect(largestDifference(layers, merged)).toBeLessThanOrEqual(oneStep * 1.0001);
      });

  it('of a photograph, painted with the default preset; and no longer with a layer left out', async () => {
    const photo = await photographAt(photographs.nagasakiBoats, 640);
    const { layers, merged } = await written(photo, mixed({ 'body.strength': 0.9 }), 8);
    expect(largestDifference(layers, merged)).toBeLessThanOrEqual(oneStep * 1.0001);
    for (const name of ['Body', 'Line'])
      expect(
        largestDifference(
          layers.filter((layer) => layer.name !== name),
          merged,
        ),
      ).toBeGreaterThan(0.1);
  });

  it('the same to the byte from temporary files, which are gone afterwards', async () => {
    const photo = testPhoto(150, 110, 4, 16);
    const [held, spilled] = [await written(photo, mixed(), 16), await written(photo, mixed(), 16, true)];
    held.layers.forEach((layer, k) => {
      for (let at = 0; at < 150 * 110; at += 7)
        expect(spilled.layers[k].picture.pixel(at)).toEqual(layer.picture.pixel(at));
    });
  });
});

describe('an OpenRaster file holds to its specification', () => {
  it('type first, stored, at a fixed place; stack, layers, merged picture, thumbnail', async () => {
    const photo = testPhoto(600, 400);
    const { picture, store } = await takenApart(engine, photo, mixed(), { depth: 8 });
    const path = folder.path('spec.ora');
    await writeLayers(path, { ...picture, densityPpi: 300 }, 'ora');
    store.discard();
    const bytes = await readFile(path);
    expect(bytes.toString('latin1', 0, 4)).toBe('PK\x03\x04');
    expect(bytes.toString('latin1', 30, 54)).toBe('mimetypeimage/openraster');
    const { entries, image, layers, merged } = await readOpenRaster(path);
    expect(entries[0]).toMatchObject({ name: 'mimetype', method: 'stored', at: 0, extraBytes: 0 });
    expect(entries.map(({ name }) => name).sort()).toEqual([
      'Thumbnails/thumbnail.png',
      'data/body.png',
      'data/ground.png',
      'data/line.png',
      'mergedimage.png',
      'mimetype',
      'stack.xml',
    ]);
    expect(image).toEqual({ version: '0.0.5', w: '600', h: '400', xres: '300', yres: '300' });
    expect(layers.map(({ attributes }) => attributes)).toEqual([
      layerAttributes('Ground', 'ground', '1', 'src-over'),
      layerAttributes('Body', 'body', '0.8', 'src-over'),
      layerAttributes('Line', 'line', '0.85', 'multiply'),
    ]);
    for (const { picture: layer } of layers) expect([layer.widthPx, layer.heightPx]).toEqual([600, 400]);
    expect([merged.widthPx, merged.heightPx]).toEqual([600, 400]);
    const thumbnail = entries.find(({ name }) => name === 'Thumbnails/thumbnail.png')!;
    const facts = await sharp(thumbnail.bytes).metadata();
    expect(facts).toMatchObject({
      format: 'png',
      width: 256,
      height: 171,
      depth: 'uchar',
      isProgressive: false,
    });
  });

  const layerAttributes = (name: string, file: string, opacity: string, operator: string) => ({
    name,
    src: `data/${file}.png`,
    x: '0',
    y: '0',
    opacity,
    visibility: 'visible',
    'composite-op': `svg:${operator}`,
  });

  it('16-bit layers where 16 bits are asked for, 8 where they do', async () => {
    const depthsOf = async (depth: 8 | 16, changes: Partial<Parameters> = {}) => {
      const { layers } = await written(testPhoto(60, 40), mixed(changes), depth);
      return layers.map(({ picture }) => picture.depth);
    };
    expect(await depthsOf(16)).toEqual(['ushort', 'ushort', 'ushort']);
    expect(await depthsOf(8)).toEqual(['uchar', 'uchar', 'uchar']);
    // Colour burn makes much of little: half a step of rounding beneath it would be seen.
    expect(await depthsOf(8, { 'line.blend': 'colour-burn' })).toEqual(['ushort', 'ushort', 'uchar']);
  });

  it('the profile in every picture but the thumbnail, which is sRGB', async () => {
    const p3 = (
      await sharp({ create: { width: 8, height: 8, channels: 3, background: 'red' } })
        .withIccProfile('p3')
        .png()
        .toBuffer()
        .then((file) => sharp(file).metadata())
    ).icc!;
    const { picture, store } = await takenApart(engine, testPhoto(300, 200), mixed(), { depth: 16 });
    const path = folder.path('p3.ora');
    const flat = { ...picture.composed, pixels: new Uint16Array(300 * 200 * 3) };
    // Display P3's own red, which lies outside sRGB.
    for (let i = 0; i < flat.pixels.length; i += 3) flat.pixels[i] = 0.9 * 65535;
    await writeLayers(path, { ...picture, composed: flat, iccProfile: p3 }, 'ora');
    store.discard();
    const { entries, layers } = await readOpenRaster(path);
    const merged = entries.find(({ name }) => name === 'mergedimage.png')!;
    for (const { bytes } of [...layers, merged])
      expect(Buffer.compare((await sharp(bytes).metadata()).icc!, p3)).toBe(0);
    const thumbnail = entries.find(({ name }) => name.startsWith('Thumbnails/'))!.bytes;
    const [red, green] = (await sharp(thumbnail).stats()).channels;
    expect(red.mean).toBeGreaterThan(245);
    expect(green.mean).toBeLessThan(2);
  });

  it('passes the checks of other zip readers', async (context) => {
    const path = folder.path('spec.ora');
    const readers: [string, string[]][] = [
      ['python3', ['-c', `import sys,zipfile; print(zipfile.ZipFile(sys.argv[1]).testzip())`, path]],
      ['unzip', ['-tqq', path]],
    ];
    const ran = readers.filter(([tool, words]) => {
      try {
        const out = execFileSync(tool, words, { encoding: 'utf8' });
        if (tool === 'python3') expect(out.trim()).toBe('None');
        return true;
      } catch (failure) {
        if ((failure as NodeJS.ErrnoException).code === 'ENOENT') return false;
        throw failure;
      }
    });
    if (ran.length === 0) return context.skip('neither Python nor unzip is installed');
  });
});

describe('a folder of strata', () => {
  it('holds 16-bit TIFFs that flatten to our own composite, and says how', async () => {
    const parameters = mixed({ 'line.blend': 'colour-burn', 'relief.strength': 0.5, 'ground.paper': 0.2 });
    const { picture, store } = await takenApart(engine, testPhoto(140, 100, 4), parameters, {
      depth: 8,
      layersDepth: 16,
    });
    const path = folder.path('ferry.strata');
    await writeLayers(path, { ...picture, densityPpi: 240 }, 'tiff');
    store.discard();
    const { list, layers, composed } = await readStrataFolder(path);
    expect(list).toMatchObject({ format: 'oxgall-strata', schema: 1, widthPx: 140, heightPx: 100, ppi: 240 });
    expect(list.parameters).toEqual(parameters);
    expect(list.strata.map(({ file }: { file: string }) => file)).toEqual([
      'ground.tif',
      'paper.tif',
      'body.tif',
      'line.tif',
      'relief.tif',
      'transparency.tif',
    ]);
    for (const { picture: layer } of layers) expect(layer.depth).toBe('ushort');
    expect(largestDifference(layers, composed)).toBeLessThanOrEqual(oneStep * 1.0001);
    expect((await sharp(`${path}/body.tif`).metadata()).density).toBe(240);
  });

  it('takes the place of an earlier one, and of nothing else', async () => {
    const { picture, store } = await takenApart(engine, testPhoto(60, 40), mixed(), { depth: 16 });
    const path = folder.path('again.strata');
    await writeLayers(path, picture, 'tiff');
    await writeFile(`${path}/left.txt`, 'goes with the folder');
    await writeLayers(path, picture, 'tiff');
    expect(await readdir(path)).not.toContain('left.txt');
    const foreign = folder.path('foreign.strata');
    await mkdir(foreign);
    await writeFile(`${foreign}/letters.txt`, 'not ours');
    await expect(writeLayers(foreign, picture, 'tiff')).rejects.toThrow(/foreign\.strata: is there already/);
    expect(await readdir(foreign)).toEqual(['letters.txt']);
    store.discard();
  });
});

describe('layers', () => {
  it('leave nothing behind when they are stopped or cannot be written', async () => {
    const { picture, store } = await takenApart(engine, testPhoto(200, 150), mixed(), { depth: 16 });
    await mkdir(folder.path('stopped'));
    for (const [kind, out] of [
      ['ora', 'stopped/a.ora'],
      ['tiff', 'stopped/a.strata'],
    ] as const) {
      const stop = new AbortController();
      const writing = writeLayers(folder.path(out), picture, kind, { signal: stop.signal });
      setTimeout(() => stop.abort(new Error('stopped')), 5);
      await expect(writing).rejects.toThrow('stopped');
      await expect(writeLayers(folder.path(`none/${out}`), picture, kind)).rejects.toThrow(
        /there is no such file/,
      );
    }
    expect(await readdir(folder.path('stopped'))).toEqual([]);
    const broken = { ...picture, layers: [{ ...picture.layers[0], pixels: new Uint8Array(7) }] };
    await expect(writeLayers(folder.path('stopped/b.ora'), broken, 'ora')).rejects.toThrow(/b\.ora/);
    expect(await readdir(folder.path('stopped'))).toEqual([]);
    store.discard();
  });

  it('lie beside the picture, under its name', () => {
    expect(layersBeside('/plates/heron.painted.png', 'ora')).toBe('/plates/heron.painted.ora');
    expect(layersBeside('/plates/heron.painted.tif', 'tiff')).toBe('/plates/heron.painted.strata');
  });

  it('are those that have a part in the picture', () => {
    const names = (changes: Partial<Parameters>) =>
      layerStack(parametersWith(changes), { channels: 3 }, 8).map(({ name }) => name);
    expect(names({ 'body.strength': 0, 'line.strength': 0 })).toEqual(['Ground']);
    expect(names({ 'relief.strength': 0.1 })).toEqual(['Ground', 'Body', 'Line', 'Relief']);
  });
});
