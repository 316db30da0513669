import { mkdir, symlink } from 'node:fs/promises';
import sharp from 'sharp';
import { describe, expect, it } from 'vitest';
import { FileError } from '../../main/files/fileError.ts';
import { readPhotoSize } from '../../main/files/photoHeader.ts';
import { readPhoto } from '../../main/files/readPhoto.ts';
import { writePicture } from '../../main/files/writePicture.ts';
import { photographs } from '../fixtures/photographs.ts';
import { plainPng, pngColour } from '../fixtures/plainPng.ts';
import { plainTiff } from '../fixtures/plainTiff.ts';
import { temporaryFolder } from './temporaryFolder.ts';

const folder = temporaryFolder();

const gradient16 = Uint16Array.from({ length: 64 * 48 * 3 }, (_, i) => (i * 7919) % 65536);
const raw16 = { raw: { width: 64, height: 48, channels: 3 as const } };

describe('PNG of every kind (numbers set down by hand after the specification)', () => {
  it('1-bit grey is spread to 0 and 255', async () => {
    const rows = [Uint8Array.of(0b10110000), Uint8Array.of(0b01000000)];
    const png = plainPng({ widthPx: 4, heightPx: 2, bits: 1, colourType: pngColour.grey, rows });
    const photo = await readPhoto(await folder.file('1bit.png', png));
    const expected = [1, 0, 1, 1, 0, 1, 0, 0].flatMap((bit) => [bit * 255, bit * 255, bit * 255]);
    expect([...photo.pixels]).toEqual(expected);
    expect(photo.remarks).toHaveLength(1);
  });

  it('4-bit palette with transparency becomes straight RGBA', async () => {
    const png = plainPng({
      widthPx: 2,
      heightPx: 1,
      bits: 4,
      colourType: pngColour.palette,
      rows: [Uint8Array.of(0x01)],
      palette: [10, 20, 30, 200, 100, 50],
      transparency: [77, 0],
    });
    const photo = await readPhoto(await folder.file('palette.png', png));
    expect(photo.channels).toBe(4);
    expect([...photo.pixels]).toEqual([10, 20, 30, 77, 200, 100, 50, 0]);
  });

  it('16-bit RGBA keeps every number, also colours under transparent pixels', async () => {
    const row = Buffer.alloc(16);
    [1, 257, 65534, 0, 40000, 12345, 3, 32768].forEach((value, k) => {
      row.writeUInt16BE(value, k * 2);
    });
    const png = plainPng({ widthPx: 2, heightPx: 1, bits: 16, colourType: pngColour.rgbAlpha, rows: [row] });
    const photo = await readPhoto(await folder.file('rgba16.png', png));
    expect([...photo.pixels]).toEqual([1, 257, 65534, 0, 40000, 12345, 3, 32768]);
  });

  it('16-bit grey with alpha is repeated over R, G and B', async () => {
    const row = Buffer.from([0x12, 0x34, 0x80, 0x01]);
    const png = plainPng({ widthPx: 1, heightPx: 1, bits: 16, colourType: pngColour.greyAlpha, rows: [row] });
    const photo = await readPhoto(await folder.file('ga16.png', png));
    expect([...photo.pixels]).toEqual([0x1234, 0x1234, 0x1234, 0x8001]);
  });

  it('interlaced 16-bit', async () => {
    const png = await sharp(gradient16, raw16).toColourspace('rgb16').png({ progressive: true }).toBuffer();
    const photo = await readPhoto(await folder.file('interlaced.png', png));
    expect([...photo.pixels]).toEqual([...gradient16]);
  });
});

describe('TIFF of every kind', () => {
  const kinds = {
    none: { compression: 'none' },
    lzw: { compression: 'lzw', predictor: 'horizontal' },
    deflate: { compression: 'deflate' },
    tiled: { compression: 'lzw', tile: true, tileWidth: 32, tileHeight: 16 },
    bigTiff: { compression: 'deflate', bigtiff: true },
  } as const;
  for (const [name, settings] of Object.entries(kinds))
    it(`16-bit ${name} keeps every number`, async () => {
      const tiff = await sharp(gradient16, raw16).toColourspace('rgb16').tiff(settings).toBuffer();
      const photo = await readPhoto(await folder.file(`${name}.tif`, tiff));
      expect(photo.depth).toBe(16);
      expect([...photo.pixels]).toEqual([...gradient16]);
    });

  it('16-bit planar, big-endian', async () => {
    const planes = [0, 1, 2].map((c) => {
      const plane = Buffer.alloc(6 * 2);
      for (let i = 0; i < 6; i++) plane.writeUInt16BE(c * 20000 + i * 999, i * 2);
      return plane;
    });
    const tiff = plainTiff({
      widthPx: 3,
      heightPx: 2,
      bits: 16,
      channels: 3,
      photometric: 2,
      planes,
      bigEndian: true,
    });
    const photo = await readPhoto(await folder.file('planar.tif', tiff));
    const expected = [0, 1, 2, 3, 4, 5].flatMap((i) => [i * 999, 20000 + i * 999, 40000 + i * 999]);
    expect([...photo.pixels]).toEqual(expected);
  });

  it('floating point is refused with the way out', async () => {
    const plane = Buffer.alloc(4 * 3 * 4);
    const tiff = plainTiff({
      widthPx: 2,
      heightPx: 2,
      bits: 32,
      channels: 3,
      photometric: 2,
      planes: [plane],
      sampleFormat: 3,
    });
    const path = await folder.file('float.tif', tiff);
    await expect(readPhoto(path)).rejects.toThrow(
      new FileError(path, 'holds floating-point samples', 'Export it as a 16-bit TIFF and open that.'),
    );
  });
});

describe('colour', () => {
  it('keeps an RGB profile to the byte and the numbers as they are', async () => {
    const flat = Buffer.alloc(8 * 8 * 3, 0).map((_, i) => [250, 20, 30][i % 3]);
    const png = await sharp(flat, { raw: { width: 8, height: 8, channels: 3 } })
      .withIccProfile('p3')
      .png()
      .toBuffer();
    const metadata = await sharp(png).metadata();
    const stored = await sharp(png, { ignoreIcc: true }).raw().toBuffer();
    const photo = await readPhoto(await folder.file('p3.png', png));
    expect(metadata.icc!.length).toBeGreaterThan(400);
    expect(Buffer.compare(Buffer.from(photo.iccProfile!), metadata.icc!)).toBe(0);
    expect(Buffer.compare(Buffer.from(photo.pixels), stored)).toBe(0);
    // Display P3 needs less red than sRGB for the same colour: the numbers are the file's, not sRGB's.
    expect(photo.pixels[0]).toBeLessThan(250);
    expect(photo.remarks).toEqual([]);
  });

  it('brings CMYK through its profile to wide RGB of 16 bits and says so', async () => {
    const cmyk = await sharp({ create: { width: 8, height: 8, channels: 3, background: '#c02020' } })
      .toColourspace('cmyk')
      .withIccProfile('cmyk')
      .jpeg({ quality: 100 })
      .toBuffer();
    expect((await sharp(cmyk).metadata()).space).toBe('cmyk');
    const photo = await readPhoto(await folder.file('cmyk.jpg', cmyk));
    expect(photo.channels).toBe(3);
    expect(photo.remarks.join()).toMatch(/CMYK: converted through its embedded profile/);
    expect(photo.depth).toBe(16);
    // What it is by the library's own colour engine, which reads the profile that comes along.
    const written = folder.path('cmyk as wide.tif');
    await writePicture(written, { ...photo, format: 'tiff' });
    // Named outright: for 16 bits the library's own choice would be P3.
    const { data } = await sharp(written).withIccProfile('srgb').raw().toBuffer({ resolveWithObject: true });
    const [red, green, blue] = data;
    expect(Math.max(Math.abs(red - 0xc0), Math.abs(green - 0x20), Math.abs(blue - 0x20))).toBeLessThan(24);
  });

  it('leaves out a damaged profile and says so', async () => {
    const png = await sharp({ create: { width: 4, height: 4, channels: 3, background: 'red' } })
      .withIccProfile('p3')
      .tiff({ compression: 'none' })
      .toBuffer();
    const at = png.indexOf('acsp');
    expect(at).toBeGreaterThan(0);
    png.write('xxxx', at, 'latin1');
    const photo = await readPhoto(await folder.file('broken.tif', png));
    expect(photo.iccProfile).toBeUndefined();
    expect(photo.remarks.join()).toContain('damaged');
  });
});

describe('odd but valid', () => {
  it.each([
    [1, 1],
    [1, 5000],
    [5000, 1],
  ])('%i × %i', async (width, height) => {
    const jpeg = await sharp({ create: { width, height, channels: 3, background: '#336699' } })
      .jpeg()
      .toBuffer();
    const photo = await readPhoto(await folder.file(`${width}x${height}.jpg`, jpeg));
    expect([photo.widthPx, photo.heightPx, photo.pixels.length]).toEqual([width, height, width * height * 3]);
  });

  it('WebP, AVIF and GIF', async () => {
    const source = sharp(photographs.nagasakiBoats).resize(80);
    for (const format of ['webp', 'avif', 'gif'] as const) {
      const photo = await readPhoto(
        await folder.file(`boats.${format}`, await source.clone().toFormat(format).toBuffer()),
      );
      expect([photo.format, photo.widthPx, photo.heightPx]).toEqual([format, 80, 64]);
    }
  });

  it('a photograph under a wrong extension, through a link', async () => {
    await symlink(photographs.alliumOreophilum, folder.path('flower.txt'));
    const photo = await readPhoto(folder.path('flower.txt'));
    expect([photo.format, photo.widthPx, photo.heightPx]).toEqual(['jpeg', 807, 1024]);
  });

  it('the size alone', async () => {
    expect(await readPhotoSize(photographs.dustBowlHome)).toMatchObject({
      widthPx: 1024,
      heightPx: 788,
      format: 'jpeg',
      depth: 8,
    });
  });
});

describe('what cannot be read', () => {
  async function failureOf(path: string): Promise<FileError> {
    const failure = await readPhoto(path).then(
      () => undefined,
      (reason) => reason,
    );
    expect(failure).toBeInstanceOf(FileError);
    expect(failure.path).toBe(path);
    expect(failure.message).not.toContain('\n');
    expect(failure.remedy).toMatch(/^[A-Z].*\.$/);
    return failure;
  }

  it('a missing file', async () => {
    expect((await failureOf(folder.path('nowhere.jpg'))).problem).toBe('there is no such file');
  });

  it('a folder', async () => {
    await mkdir(folder.path('folder.jpg'));
    expect((await failureOf(folder.path('folder.jpg'))).problem).toBe('is a folder, not a photo');
  });

  it('an empty file', async () => {
    expect((await failureOf(await folder.file('empty.jpg', ''))).problem).toBe('is empty');
  });

  it('a text, also one that draws', async () => {
    expect((await failureOf(await folder.file('text.jpg', 'Low water at six.\n'))).problem).toBe(
      'holds text, not a picture',
    );
    const drawing = '<svg xmlns="http://www.w3.org/2000/svg" width="4" height="4"/>';
    expect((await failureOf(await folder.file('drawing.jpg', drawing))).problem).toBe(
      'holds text, not a picture',
    );
  });

  it('zeros, as a failed copy leaves them', async () => {
    expect((await failureOf(await folder.file('zeros.jpg', Buffer.alloc(5000)))).problem).toBe(
      'holds nothing but zeros',
    );
  });

  it('a picture without size', async () => {
    const png = plainPng({ widthPx: 0, heightPx: 4, bits: 8, colourType: pngColour.rgb, rows: [] });
    await failureOf(await folder.file('zero.png', png));
  });

  it('a picture beyond the limit, before anything is decoded', async () => {
    const png = plainPng({ widthPx: 30000, heightPx: 20000, bits: 8, colourType: pngColour.grey, rows: [] });
    expect((await failureOf(await folder.file('huge.png', png))).problem).toBe(
      'has 600 megapixels, more than the 500 that can be painted',
    );
  });

  it('a camera raw file in a TIFF coat', async () => {
    const planes = [new Uint8Array(12)];
    const tiff = plainTiff({ widthPx: 2, heightPx: 2, bits: 8, channels: 3, photometric: 2, planes });
    expect((await failureOf(await folder.file('frame.DNG', tiff))).problem).toContain('camera raw');
  });

  it('nothing after an abort', async () => {
    const controller = new AbortController();
    const reading = readPhoto(photographs.nagasakiBoats, { signal: controller.signal });
    controller.abort();
    await expect(reading).rejects.toHaveProperty('name', 'AbortError');
  });
});
