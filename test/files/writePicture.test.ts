import { chmod, mkdir, readdir, readFile, stat, writeFile } from 'node:fs/promises';
import { join } from 'node:path';
import sharp from 'sharp';
import { beforeAll, describe, expect, it } from 'vitest';
import { FileError } from '../../main/files/fileError.ts';
import type { OutputFormat, PictureFile } from '../../main/files/photoFile.ts';
import { readPhoto } from '../../main/files/readPhoto.ts';
import { fileErrorFrom } from '../../main/files/systemErrors.ts';
import { writePicture } from '../../main/files/writePicture.ts';
import { copyrightText, exifOfCamera } from '../fixtures/exifOfCamera.ts';
import { photographs } from '../fixtures/photographs.ts';
import { temporaryFolder } from './temporaryFolder.ts';

const folder = temporaryFolder();
let displayP3: Uint8Array;

beforeAll(async () => {
  const tagged = await sharp({ create: { width: 2, height: 2, channels: 3, background: 'red' } })
    .withIccProfile('p3')
    .png()
    .toBuffer();
  displayP3 = (await sharp(tagged).metadata()).icc!;
});

/** A colour gradient with an alpha ramp that runs from 0 to full along each row. */
function ramp(channels: 3 | 4, depth: 8 | 16, widthPx = 97, heightPx = 61): PictureFile {
  const full = depth === 16 ? 65535 : 255;
  const samples = Array.from({ length: widthPx * heightPx * channels }, (_, i) => {
    const pixel = Math.floor(i / channels);
    const x = pixel % widthPx;
    const y = Math.floor(pixel / widthPx);
    const alpha = widthPx > 1 ? x / (widthPx - 1) : 1;
    return Math.round(full * [x / widthPx, y / heightPx, ((x * 7 + y * 3) % 31) / 31, alpha][i % channels]);
  });
  const pixels = depth === 16 ? Uint16Array.from(samples) : Uint8Array.from(samples);
  return { widthPx, heightPx, channels, pixels, format: 'tiff' };
}

/** Decodes by the library alone. */
async function decoded(path: string, depth: 8 | 16): Promise<Uint8Array | Uint16Array> {
  const image = sharp(path, { ignoreIcc: true });
  if (depth === 8) return image.raw().toBuffer();
  const bytes = await image.toColourspace('rgb16').raw({ depth: 'ushort' }).toBuffer();
  return new Uint16Array(bytes.buffer, bytes.byteOffset, bytes.length / 2);
}

const lossless: [OutputFormat, 8 | 16, 3 | 4][] = [
  ['png', 8, 3],
  ['png', 8, 4],
  ['png', 16, 3],
  ['png', 16, 4],
  ['tiff', 8, 3],
  ['tiff', 8, 4],
  ['tiff', 16, 3],
  ['tiff', 16, 4],
];

describe.each(lossless)('%s, %i bits, %i channels', (format, depth, channels) => {
  it('comes back with every number, the profile and the density', async () => {
    const picture = { ...ramp(channels, depth), format, iccProfile: displayP3, densityPpi: 300 };
    const path = folder.path(`exact-${depth}-${channels}.${format}`);
    const { bytes, remarks } = await writePicture(path, picture);
    expect([(await stat(path)).size, remarks]).toEqual([bytes, []]);
    const metadata = await sharp(path).metadata();
    expect(metadata).toMatchObject({
      format,
      width: 97,
      height: 61,
      channels,
      depth: depth === 16 ? 'ushort' : 'uchar',
      density: 300,
    });
    expect(Buffer.compare(metadata.icc!, displayP3)).toBe(0);
    expect([...(await decoded(path, depth))]).toEqual([...picture.pixels]);
  });

  it('does not drift over ten loads and saves', async () => {
    const picture = { ...ramp(channels, depth, 23, 11), format, iccProfile: displayP3 };
    const path = folder.path(`drift-${depth}-${channels}.${format}`);
    await writePicture(path, picture);
    for (let k = 0; k < 10; k++) await writePicture(path, { ...(await readPhoto(path)), format });
    const last = await readPhoto(path);
    expect([...last.pixels]).toEqual([...picture.pixels]);
    expect(Buffer.compare(last.iccProfile!, displayP3)).toBe(0);
  });

  it.each([
    [1, 1],
    [1, 5000],
    [5000, 1],
  ])('%i × %i', async (widthPx, heightPx) => {
    const picture = { ...ramp(channels, depth, widthPx, heightPx), format };
    const path = folder.path(`odd.${format}`);
    await writePicture(path, picture);
    expect([...(await decoded(path, depth))]).toEqual([...picture.pixels]);
  });
});

it('a TIFF of many strips comes back exactly', async () => {
  const picture = ramp(4, 16, 1501, 997);
  const path = folder.path('strips.tif');
  await writePicture(path, picture);
  const back = await decoded(path, 16);
  expect(
    Buffer.compare(
      Buffer.from(back.buffer, back.byteOffset, back.byteLength),
      Buffer.from(picture.pixels.buffer),
    ),
  ).toBe(0);
});

it('pixels in shared memory are written alike', async () => {
  const plain = ramp(3, 8);
  const shared = new Uint8Array(new SharedArrayBuffer(plain.pixels.length));
  shared.set(plain.pixels);
  for (const format of ['png', 'tiff', 'jpeg', 'webp'] as const) {
    await writePicture(folder.path('plain'), { ...plain, format });
    await writePicture(folder.path('shared'), { ...plain, pixels: shared, format });
    expect(Buffer.compare(await readFile(folder.path('plain')), await readFile(folder.path('shared')))).toBe(
      0,
    );
  }
});

describe.each(['jpeg', 'webp'] as const)('%s', (format) => {
  it('looks like the photograph and carries its profile', async () => {
    const photo = await readPhoto(photographs.nagasakiBoats);
    const path = folder.path(`boats.${format}`);
    await writePicture(path, { ...photo, format, densityPpi: 240 });
    const metadata = await sharp(path).metadata();
    expect(Buffer.compare(metadata.icc!, photo.iccProfile!)).toBe(0);
    if (format === 'jpeg') expect(metadata).toMatchObject({ chromaSubsampling: '4:4:4', density: 240 });
    const back = await decoded(path, 8);
    let squares = 0;
    back.forEach((value, i) => {
      squares += (value - photo.pixels[i]) ** 2;
    });
    const psnr = 10 * Math.log10(255 ** 2 / (squares / back.length));
    expect(psnr).toBeGreaterThan(format === 'jpeg' ? 38 : 34);
  });

  it('carries a profile of several JPEG segments', async () => {
    const profile = Buffer.concat([displayP3, Buffer.alloc(150_001, 7)]);
    profile.writeUInt32BE(profile.length, 0);
    const path = folder.path(`long.${format}`);
    await writePicture(path, { ...ramp(3, 8), format, iccProfile: profile });
    expect(Buffer.compare((await sharp(path).metadata()).icc!, profile)).toBe(0);
  });
});

it('WebP keeps the alpha ramp exactly', async () => {
  const picture: PictureFile = { ...ramp(4, 8), format: 'webp', iccProfile: displayP3 };
  const path = folder.path('alpha.webp');
  await writePicture(path, picture);
  const back = await decoded(path, 8);
  const alpha = (samples: Uint8Array | Uint16Array) => [...samples].filter((_, i) => i % 4 === 3);
  expect(alpha(back)).toEqual(alpha(picture.pixels));
});

describe('camera data', () => {
  it.each(['jpeg', 'png', 'webp'] as const)('%s: kept, upright and without the place', async (format) => {
    const exif = exifOfCamera({ orientation: 6, widthPx: 61, heightPx: 97 });
    const path = folder.path(`camera.${format}`);
    const { remarks } = await writePicture(path, { ...ramp(3, 8), format, exif });
    expect(remarks).toEqual([]);
    const metadata = await sharp(path).metadata();
    expect(metadata.orientation).toBe(1);
    expect(metadata.exif!.toString('latin1')).toContain(copyrightText);
    const photo = await readPhoto(path);
    expect([photo.widthPx, photo.heightPx]).toEqual([97, 61]);
  });

  it('that is damaged is left out with a remark', async () => {
    const path = folder.path('damaged-camera.jpg');
    const { remarks } = await writePicture(path, {
      ...ramp(3, 8),
      format: 'jpeg',
      exif: Buffer.from('nonsense, no EXIF'),
    });
    expect(remarks).toEqual(['The camera data of the photo is damaged and was left out.']);
    expect((await sharp(path).metadata()).exif).toBeUndefined();
  });
});

describe('what a format cannot hold', () => {
  it('transparency in JPEG', async () => {
    const path = folder.path('transparent.jpg');
    await expect(writePicture(path, { ...ramp(4, 8), format: 'jpeg' })).rejects.toThrow(
      new FileError(
        path,
        'the picture is partly transparent, which JPEG cannot hold',
        'Choose PNG, TIFF or WebP.',
      ),
    );
    const opaque = ramp(4, 8);
    opaque.pixels.forEach((_, i) => {
      if (i % 4 === 3) opaque.pixels[i] = 255;
    });
    await writePicture(path, { ...opaque, format: 'jpeg' });
    expect((await sharp(path).metadata()).channels).toBe(3);
  });

  it('edges beyond 16383 pixels in WebP', async () => {
    const picture = { ...ramp(3, 8, 16384, 1), format: 'webp' as const };
    await expect(writePicture(folder.path('long.webp'), picture)).rejects.toThrow('Choose TIFF or PNG.');
  });

  it('16 bits in JPEG, which is a fault of the caller', async () => {
    await expect(writePicture(folder.path('deep.jpg'), { ...ramp(3, 16), format: 'jpeg' })).rejects.toThrow(
      RangeError,
    );
  });
});

describe('a write that fails', () => {
  it.each(['jpeg', 'png', 'tiff', 'webp'] as const)(
    '%s: an abort at any moment leaves the old file',
    async (format) => {
      const inside = join(folder.path('.'), `abort-${format}`);
      await mkdir(inside);
      const path = join(inside, `picture.${format}`);
      await writeFile(path, 'the old file');
      const picture = { ...ramp(3, 8, 900, 700), format };
      let aborted = 0;
      for (const afterMs of [0, 1, 2, 4, 8, 16]) {
        const controller = new AbortController();
        const writing = writePicture(path, picture, { signal: controller.signal });
        setTimeout(() => controller.abort(), afterMs);
        const name = await writing.then(
          () => 'done',
          (reason) => reason.name,
        );
        expect(['AbortError', 'done']).toContain(name);
        if (name === 'AbortError') aborted++;
        expect(await readdir(inside)).toEqual([`picture.${format}`]);
        if (name === 'AbortError') expect(await readFile(path, 'utf8')).toBe('the old file');
        await writeFile(path, 'the old file');
      }
      expect(aborted).toBeGreaterThan(0);
    },
  );

  it('a folder that is not there', async () => {
    const path = folder.path('missing/out.png');
    const failure = await writePicture(path, { ...ramp(3, 8), format: 'png' }).catch((reason) => reason);
    expect(failure).toBeInstanceOf(FileError);
    expect(failure.path).toBe(path);
  });

  it.skipIf(process.getuid?.() === 0)('a folder that takes no files (root may write anywhere)', async () => {
    const path = folder.path('sealed');
    await mkdir(path);
    await chmod(path, 0o500);
    await expect(writePicture(join(path, 'a.png'), { ...ramp(3, 8), format: 'png' })).rejects.toThrow(
      FileError,
    );
  });

  it('a folder in the place of the target: refused, and nothing is left beside it', async () => {
    const inside = folder.path('occupied');
    await mkdir(join(inside, 'out.tif'), { recursive: true });
    const path = join(inside, 'out.tif');
    const failure = await writePicture(path, ramp(3, 8)).catch((reason) => reason);
    expect(failure).toBeInstanceOf(FileError);
    expect(failure.problem).toBe('is a folder, not a file');
    expect(await readdir(inside)).toEqual(['out.tif']);
  });

  it('a full disk is told in words', () => {
    const failure = fileErrorFrom('out.tif', Object.assign(new Error('ENOSPC: write'), { code: 'ENOSPC' }));
    expect(failure).toMatchObject({ name: 'FileError', path: 'out.tif', problem: 'the disk is full' });
  });
});
