import { execFileSync } from 'node:child_process';
import { existsSync } from 'node:fs';
import { readdir, readFile, rm, writeFile } from 'node:fs/promises';
import { join } from 'node:path';
import sharp from 'sharp';
import { afterEach, beforeEach, describe, expect, it } from 'vitest';
import { p3Profile } from '../../core/colour/matrixProfile.ts';
import type { HostError } from '../../core/hostProtocol/hostError.ts';
import type { OutputChange } from '../../core/recipes/outputSettings.ts';
import { verifyDeliveries } from '../../main/painting/verifyDelivery.ts';
import { makePhoto, makeTestHost, type TestHost } from './testHost.ts';
import { openAt, untilSaved, workOf } from './workOnPhoto.ts';

/*
 * What the window saves, by the print settings of the photo's recipe. Files are read by exiftool, which knows nothing
 * of ours; sizes are worked out by hand beside each case: 25.4 mm an inch is exact.
 */
const exiftool = ['/usr/bin/exiftool', '/usr/local/bin/exiftool'].find((path) => existsSync(path));
const inks = '/usr/share/color/icc/ghostscript/default_cmyk.icc';

let t: TestHost;
let path: string;
let photoId: string;
beforeEach(async () => {
  t = await makeTestHost();
  path = await makePhoto(join(t.photos, 'heron.png'), 400, 300);
  photoId = (await openAt(t, path)).photoId;
});
afterEach(() => t.close());

async function lay(output: OutputChange) {
  const memory = await t.caller.call('readMemory', { photoId });
  return t.caller.call('layWork', { photoId, work: { ...workOf(memory), output } });
}

function save(name = 'painted', output?: OutputChange) {
  return t.caller.call('savePainting', { photoId, parameters: {}, folder: t.photos, name, output });
}

const refusalOf = (promise: Promise<unknown>) =>
  promise.then(
    () => expect.fail('expected a refusal'),
    (error: HostError) => error,
  );

const tell = (file: string): Record<string, unknown> =>
  JSON.parse(execFileSync(exiftool!, ['-json', '-n', '-a', file], { encoding: 'utf8' }))[0];

/** 100 mm at 150 an inch: 590.55, so 591. A frame of 4:5 in 400 × 300 is 240 × 300: 472.8, so 473 by 591. */
const small = { printLongEdgeMm: 100, ppi: 150, isResampled: true } as const;
const cropped = { ...small, cropFrame: { aspect: 0.8, x01: 0.25, y01: 0.5 } };
/** 3 mm of bleed: 17.7, so 18; 8 mm of margin: 47.2, so 47; on both sides. */
const sheet = { ...cropped, bleedMm: 3, trimMarks: true, format: 'tiff', profile: 'p3' } as const;

describe.skipIf(!exiftool)('a file saved from the window, as exiftool reads it (skipped without it)', () => {
  it.each([
    ['its own pixels', { printLongEdgeMm: 101.6, format: 'tiff' }, 400, 300, 100],
    ['pixels an inch', { ...small, format: 'tiff' }, 591, 443, 150],
    ['a crop', { ...cropped, format: 'jpeg' }, 473, 591, 150],
    ['a crop of its own pixels', { cropFrame: cropped.cropFrame, printLongEdgeMm: 76.2 }, 240, 300, 100],
    ['bleed and marks', sheet, 473 + 36 + 94, 591 + 36 + 94, 150],
  ] as const)('has the pixels that were asked for: %s', async (_, output, widthPx, heightPx, ppi) => {
    await lay(output);
    const saved = await save();
    const told = tell(saved.path);
    expect([told.ImageWidth, told.ImageHeight]).toEqual([widthPx, heightPx]);
    expect([saved.widthPx, saved.heightPx]).toEqual([widthPx, heightPx]);
    if (told.FileType === 'PNG') expect(told.PixelsPerUnitX).toBe(Math.round(ppi / 0.0254));
    // An inch is 2 in TIFF 6.0 and 1 in JFIF.
    else {
      const inch = told.FileType === 'JPEG' ? 1 : 2;
      expect([told.XResolution, told.YResolution, told.ResolutionUnit]).toEqual([ppi, ppi, inch]);
    }
    expect(t.engine.openPhotos).toBe(1);
  });

  it('carries the profile that was asked for, and as much metadata', async () => {
    await lay({ format: 'tiff', profile: 'p3', depth: 16 });
    const told = tell((await save()).path);
    expect(told.ProfileDescription).toMatch(/P3/);
    expect(String(told.BitsPerSample)).toMatch(/^16\b/);
    expect(told.ImageDescription).toMatch(/^Painted by Oxgall/);
    await lay({ metadata: 'none' });
    expect(tell((await save()).path).ImageDescription).toBeUndefined();
  });
});

describe('a photo nobody has worked on', () => {
  it.each([8, 16] as const)('of %i bits is saved as an exact file of as many', async (depth) => {
    const own = join(t.photos, `bits-${depth}.png`);
    const pixels = depth === 8 ? new Uint8Array(48).fill(90) : new Uint16Array(48).fill(23_456);
    const image = sharp(pixels, { raw: { width: 4, height: 4, channels: 3 } });
    await (depth === 16 ? image.toColourspace('rgb16') : image).png().toFile(own);
    const { memory } = await openAt(t, own);
    expect(memory.recipe.work.output).toMatchObject({ format: 'png', depth });
  });
});

describe('a delivery from the window', () => {
  it('is noted with every setting, and is painted again to the pixel', async () => {
    await lay(sheet);
    const { memory } = await save();
    const [delivery] = memory.recipe.histories[0].deliveries;
    expect(delivery.output).toMatchObject(sheet);
    // What is asked for later is none of its business.
    const { recipe } = await lay({ ...small, ppi: 90, cropFrame: null });
    const verified = await verifyDeliveries(t.engine, path, recipe.photo.sha256, recipe);
    expect(verified).toMatchObject([{ path: 'painted.tif', verdict: 'identical', file: 'untouched' }]);
  });

  it('takes settings for itself alone, and leaves the recipe’s own', async () => {
    const before = await lay({ format: 'tiff', bleedMm: 3 });
    const { memory, name } = await save('proof', { format: 'jpeg', quality: 70 });
    expect(name).toBe('proof.jpg');
    expect(memory.recipe.work.output).toEqual(before.recipe.work.output);
    expect(memory.recipe.histories[0].deliveries[0].output).toMatchObject({
      format: 'jpeg',
      quality: 70,
      bleedMm: 3,
    });
  });

  it('can do without the recipe’s crop, and is painted again without it', async () => {
    await lay(cropped);
    const { memory } = await save('whole', { cropFrame: null, isResampled: false });
    const { recipe } = memory;
    expect(recipe.work.output.cropFrame).toEqual(cropped.cropFrame);
    expect(recipe.histories[0].deliveries[0].output).not.toHaveProperty('cropFrame');
    const [{ verdict }] = await verifyDeliveries(t.engine, path, recipe.photo.sha256, recipe);
    expect(verdict).toBe('identical');
  });

  it('leaves what was changed while it was painted', async () => {
    await lay({ bleedMm: 3 });
    t.engine.pauseMs = 2;
    const saving = save();
    await expect.poll(() => t.engine.paintingsStarted).toBe(1);
    await lay({ bleedMm: 5 });
    const { memory } = await saving;
    expect(memory.recipe.work.output.bleedMm).toBe(5);
    expect(memory.recipe.histories[0].deliveries[0].output.bleedMm).toBe(3);
  });

  it('has its layers beside it, under its name', async () => {
    await lay({ ...cropped, layers: 'ora' });
    expect(await save()).toMatchObject({ name: 'painted.png', layersName: 'painted.ora' });
    expect(await save()).toMatchObject({ name: 'painted 2.png', layersName: 'painted 2.ora' });
    const ora = await readFile(join(t.photos, 'painted.ora'));
    // The first entry of an OpenRaster file, stored as it is (OpenRaster specification, file layout).
    expect(ora.subarray(30, 54).toString()).toBe('mimetypeimage/openraster');
    await lay({ layers: 'tiff' });
    const { layersName } = await save('strata');
    const strata = await readdir(join(t.photos, layersName!));
    expect(strata.length).toBeGreaterThan(1);
    const first = strata.find((name) => name.endsWith('.tif'))!;
    expect(await sharp(join(t.photos, layersName!, first)).metadata()).toMatchObject({
      width: 473,
      height: 591,
      depth: 'ushort',
    });
  });
});

describe('what cannot be saved', () => {
  it('is told before anything is painted, with what to do', async () => {
    await t.host.offerPath(t.photos);
    await t.caller.call('listFolder', { path: t.photos });
    const gone = join(t.photos, 'press.icc');
    await lay({ profile: { file: gone } });
    expect(await refusalOf(save())).toMatchObject({
      kind: 'FileError',
      message: expect.stringMatching(/press\.icc.*no such file/),
      remedy: expect.stringMatching(/./),
    });
    await writeFile(gone, 'no profile');
    expect((await refusalOf(save())).message).toMatch(/is no colour profile/);
    expect(t.engine.paintingsStarted).toBe(0);
    expect((await readdir(t.photos)).filter((name) => name.startsWith('painted'))).toEqual([]);
  });

  it.skipIf(!existsSync(inks))('four inks in PNG (skipped without a CMYK profile)', async () => {
    await t.host.offerPath(t.photos);
    await t.caller.call('listFolder', { path: t.photos });
    const file = join(t.photos, 'inks.icc');
    await writeFile(file, await readFile(inks));
    await lay({ profile: { file }, format: 'png' });
    const refusal = await refusalOf(save());
    expect(`${refusal.message} ${refusal.remedy}`).toMatch(/CMYK.*Choose TIFF or JPEG/);
    expect(t.engine.paintingsStarted).toBe(0);
    await lay({ format: 'tiff' });
    expect((await sharp((await save()).path).metadata()).space).toBe('cmyk');
  });

  it('transparency in JPEG', async () => {
    const clear = join(t.photos, 'clear.png');
    await sharp({ create: { width: 40, height: 30, channels: 4, background: '#2a6c5f80' } }).toFile(clear);
    photoId = (await openAt(t, clear)).photoId;
    await lay({ format: 'jpeg' });
    expect((await refusalOf(save())).message).toMatch(/transparent/);
    expect(t.engine.paintingsStarted).toBe(0);
  });

  it('another print of a photo whose file has changed since it was opened', async () => {
    await makePhoto(path, 500, 300);
    await lay(small);
    expect((await refusalOf(save())).remedy).toMatch(/Open the photograph again/);
    expect(t.engine.openPhotos).toBe(1);
  });
});

describe('a colour profile', () => {
  it('is used only where somebody chose it, now or when the recipe was made', async () => {
    const file = join(t.folder, 'wide.icc');
    await writeFile(file, p3Profile());
    await lay({ profile: { file }, format: 'tiff' });
    expect((await refusalOf(save())).kind).toBe('NotAllowed');
    await untilSaved(t, photoId);
    await t.caller.call('closePhoto', { photoId });
    photoId = (await openAt(t, path)).photoId;
    expect((await save()).name).toBe('painted.tif');
    await rm(file);
  });

  it('is found by its folder, and told by its name, its inks and whether it changes anything', async () => {
    await writeFile(join(t.photos, 'wide.icc'), p3Profile());
    await t.host.offerPath(t.photos);
    expect((await t.caller.call('listFolder', { path: t.photos })).profiles).toEqual([
      { name: 'wide.icc', path: join(t.photos, 'wide.icc') },
    ]);
    const told = (profile: 'keep' | 'srgb' | { file: string }) =>
      t.caller.call('describeProfile', { photoId, profile });
    expect(await told({ file: join(t.photos, 'wide.icc') })).toEqual({
      name: 'Display P3',
      inks: 'RGB',
      isConverted: true,
    });
    expect(await told('keep')).toMatchObject({ inks: 'RGB', isConverted: false });
    // A photo without a profile is taken for sRGB: nothing to convert.
    expect(await told('srgb')).toMatchObject({ isConverted: false });
    if (!existsSync(inks)) return;
    await t.caller.call('listFolder', { wanted: 'profiles' });
    await t.caller.call('listFolder', { path: '/usr/share/color/icc' });
    await t.caller.call('listFolder', { path: '/usr/share/color/icc/ghostscript' });
    expect(await told({ file: inks })).toMatchObject({ inks: 'CMYK', isConverted: true });
  });
});
