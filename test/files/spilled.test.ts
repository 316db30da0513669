import { spawnSync } from 'node:child_process';
import { mkdir, readdir, readFile, writeFile } from 'node:fs/promises';
import { join } from 'node:path';
import sharp, { type Sharp } from 'sharp';
import { afterAll, afterEach, beforeAll, describe, expect, it } from 'vitest';
import type { OutputFormat, PictureFile } from '../../main/files/photoFile.ts';
import { readPhoto } from '../../main/files/readPhoto.ts';
import type { SpilledPixels } from '../../main/files/spilledPixels.ts';
import { removeAbandonedSpills, SpillFile } from '../../main/files/spillFile.ts';
import { spillPhoto } from '../../main/files/spillPhoto.ts';
import { PictureSpill } from '../../main/files/spillPicture.ts';
import { discardUnfinished } from '../../main/files/unfinishedFile.ts';
import { writePicture } from '../../main/files/writePicture.ts';
import { exifOfCamera } from '../fixtures/exifOfCamera.ts';
import { photographs } from '../fixtures/photographs.ts';
import { temporaryFolder } from './temporaryFolder.ts';

const folder = temporaryFolder();
const usual = process.env.TMPDIR;
let spills = '';

beforeAll(async () => {
  spills = folder.path('spills');
  await mkdir(spills);
  process.env.TMPDIR = spills;
});
afterAll(() => {
  if (usual === undefined) delete process.env.TMPDIR;
  else process.env.TMPDIR = usual;
});
// Whatever a test did, it leaves nothing.
afterEach(async () => expect(await readdir(spills)).toEqual([]));

/** More rows than are turned at once, in both directions; numbers that no two neighbours share. */
function scattered(channels: 1 | 3 | 4, depth: 8 | 16, widthPx = 610, heightPx = 300) {
  const full = depth === 16 ? 65536 : 256;
  const length = widthPx * heightPx * channels;
  const pixels = depth === 16 ? new Uint16Array(length) : new Uint8Array(length);
  for (let i = 0; i < length; i++) pixels[i] = (i * 7919 + 5 * (i >> 9)) % full;
  const image = sharp(pixels, { raw: { width: widthPx, height: heightPx, channels } });
  return depth === 16 ? image.toColourspace(channels === 1 ? 'grey16' : 'rgb16') : image;
}

async function allRows(pixels: SpilledPixels): Promise<Uint8Array> {
  // In steps that match no strip and no block.
  const pieces: Uint8Array[] = [];
  for (let top = 0; top < pixels.heightPx; top += 101) {
    const rows = Math.min(101, pixels.heightPx - top);
    const piece = new Uint8Array(rows * pixels.widthPx * pixels.pixelBytes);
    await pixels.readRows(top, rows, piece);
    pieces.push(piece);
  }
  return Buffer.concat(pieces);
}

const bytesOf = (samples: Uint8Array | Uint16Array) =>
  Buffer.from(samples.buffer, samples.byteOffset, samples.byteLength);

async function expectAsInMemory(path: string): Promise<void> {
  const { pixels: expected, ...facts } = await readPhoto(path);
  const { pixels, ...spilled } = await spillPhoto(path);
  try {
    expect(spilled).toEqual(facts);
    expect(pixels.bytesPerSample).toBe(expected.BYTES_PER_ELEMENT);
    expect(bytesOf(expected).equals(await allRows(pixels))).toBe(true);
    expect(await readdir(spills)).toHaveLength(1);
  } finally {
    pixels.discard();
  }
}

describe('a photo unpacked to a file has the pixels and facts of one in memory', () => {
  const kinds: [string, () => Sharp][] = [
    ['a JPEG with a profile', () => scattered(3, 8).withIccProfile('p3').jpeg()],
    ['a progressive JPEG', () => scattered(3, 8).jpeg({ progressive: true })],
    ['a grey JPEG', () => scattered(1, 8).toColourspace('b-w').jpeg()],
    ['a CMYK JPEG', () => scattered(3, 8).toColourspace('cmyk').jpeg()],
    ['a PNG with alpha', () => scattered(4, 8).png()],
    ['a palette PNG', () => scattered(3, 8).png({ palette: true, colours: 16 })],
    ['a 16-bit PNG', () => scattered(3, 16).png()],
    ['a 16-bit interlaced PNG with alpha', () => scattered(4, 16).png({ progressive: true })],
    ['a 16-bit grey PNG', () => scattered(1, 16).png()],
    ['a tiled 16-bit TIFF', () => scattered(3, 16).tiff({ compression: 'lzw', tile: true })],
    ['a WebP with alpha', () => scattered(4, 8).webp({ lossless: true })],
  ];
  it.each(kinds)('%s', async (name, make) => {
    const path = await folder.file(name.replaceAll(' ', '-'), await make().toBuffer());
    await expectAsInMemory(path);
  });

  it.each([2, 3, 4, 5, 6, 7, 8])('orientation %i, 8 and 16 bits', async (orientation) => {
    const jpeg = await scattered(3, 8).withMetadata({ orientation }).jpeg().toBuffer();
    await expectAsInMemory(await folder.file(`o${orientation}.jpg`, jpeg));
    const tiff = await scattered(4, 16, 257, 513)
      .withMetadata({ orientation })
      .tiff({ compression: 'deflate' })
      .toBuffer();
    const path = await folder.file(`o${orientation}.tif`, tiff);
    expect(await sharp(path).metadata()).toMatchObject({ orientation, depth: 'ushort', channels: 4 });
    await expectAsInMemory(path);
  });

  it.each(Object.entries(photographs))('%s', async (_name, path) => expectAsInMemory(path));
});

describe('a photo that cannot be unpacked', () => {
  it('is refused in the words of one in memory, and leaves no file', async () => {
    const whole = await scattered(3, 8).jpeg().toBuffer();
    const cut = await folder.file('cut.jpg', whole.subarray(0, whole.length >> 1));
    const words = await readPhoto(cut).catch((error) => error.message);
    await expect(spillPhoto(cut)).rejects.toThrow(words);
    await expect(spillPhoto(folder.path('absent.jpg'))).rejects.toThrow(/no such file/);
  });

  it('leaves no file when it is given up', async () => {
    const large = await scattered(3, 8, 4000, 3000).jpeg().toBuffer();
    const path = await folder.file('large.jpg', large);
    for (const afterMs of [0, 5, 30, 60]) {
      const controller = new AbortController();
      const reason = new Error('enough');
      setTimeout(() => controller.abort(reason), afterMs);
      await expect(spillPhoto(path, { signal: controller.signal })).rejects.toBe(reason);
    }
    // The library ends what it had begun.
    await expect.poll(() => readdir(spills), { timeout: 10_000 }).toEqual([]);
  });
});

describe('a picture written from a file', () => {
  const cases: [OutputFormat, 8 | 16, 3 | 4][] = [
    ['jpeg', 8, 3],
    ['png', 8, 3],
    ['png', 8, 4],
    ['png', 16, 3],
    ['png', 16, 4],
    ['tiff', 8, 3],
    ['tiff', 8, 4],
    ['tiff', 16, 3],
    ['tiff', 16, 4],
    ['webp', 8, 3],
    ['webp', 8, 4],
  ];

  async function spilled(picture: PictureFile): Promise<SpilledPixels> {
    const { widthPx, heightPx, channels, pixels } = picture;
    const bytesPerSample = pixels.BYTES_PER_ELEMENT as 1 | 2;
    const spill = await PictureSpill.begin({ widthPx, heightPx, channels, bytesPerSample });
    for (let top = 0; top < heightPx; top += 37)
      await spill.append(pixels.subarray(top * widthPx * channels, (top + 37) * widthPx * channels));
    return spill.finish();
  }

  it.each(cases)('%s, %i bits, %i channels: is the same to the byte', async (format, depth, channels) => {
    const { data, info } = await scattered(channels, depth, 301, 407)
      .blur(3)
      .raw(depth === 16 ? { depth: 'ushort' } : {})
      .toBuffer({ resolveWithObject: true });
    const pixels = depth === 16 ? new Uint16Array(new Uint8Array(data).buffer) : new Uint8Array(data);
    const icc = await sharp(await scattered(3, 8, 2, 2).withIccProfile('p3').png().toBuffer()).metadata();
    const picture: PictureFile = {
      widthPx: info.width,
      heightPx: info.height,
      channels,
      pixels,
      format,
      iccProfile: icc.icc && new Uint8Array(icc.icc),
      densityPpi: 300,
      exif: exifOfCamera({ orientation: 6, widthPx: 407, heightPx: 301 }),
    };
    const extension = { jpeg: 'jpg', png: 'png', tiff: 'tif', webp: 'webp' }[format];
    const inMemory = folder.path(`memory-${depth}-${channels}.${extension}`);
    const fromFile = folder.path(`file-${depth}-${channels}.${extension}`);
    const expected = await writePicture(inMemory, picture);
    const source = await spilled(picture);
    const written = await writePicture(fromFile, { ...picture, pixels: source });
    source.discard();
    expect(written).toEqual(expected);
    expect((await readFile(fromFile)).equals(await readFile(inMemory))).toBe(true);
  });

  it('is refused where JPEG would lose its transparency, and where rows are missing', async () => {
    const pixels = new Uint8Array(20 * 10 * 4).fill(255);
    pixels[403] = 254;
    const picture: PictureFile = { widthPx: 20, heightPx: 10, channels: 4, pixels, format: 'jpeg' };
    const source = await spilled(picture);
    const path = folder.path('clear.jpg');
    await expect(writePicture(path, { ...picture, pixels: source })).rejects.toThrow(/partly transparent/);
    source.discard();
    const spill = await PictureSpill.begin({ widthPx: 20, heightPx: 10, channels: 4, bytesPerSample: 1 });
    await spill.append(pixels.subarray(80));
    await expect(spill.finish()).rejects.toThrow(RangeError);
    spill.discard();
  });

  it('leaves nothing when writing is stopped', async () => {
    const pixels = new Uint8Array(3000 * 2000 * 3).map((_, i) => (i * 7919) >> 3);
    const picture: PictureFile = { widthPx: 3000, heightPx: 2000, channels: 3, pixels, format: 'png' };
    const source = await spilled(picture);
    const target = folder.path('stopped');
    await mkdir(target);
    for (const afterMs of [0, 40, 150]) {
      const controller = new AbortController();
      setTimeout(() => controller.abort(new Error('enough')), afterMs);
      const writing = writePicture(
        join(target, 'a.png'),
        { ...picture, pixels: source },
        { signal: controller.signal },
      );
      await expect(writing).rejects.toThrow('enough');
    }
    source.discard();
    expect(await readdir(target)).toEqual([]);
    await expect.poll(() => readdir(spills), { timeout: 10_000 }).toEqual([]);
  });
});

describe('temporary files', () => {
  it('go when the program is about to end', async () => {
    const file = await SpillFile.create('.v');
    await file.write(new Uint8Array(1000), 0);
    expect(await readdir(spills)).toHaveLength(1);
    discardUnfinished();
    expect(await readdir(spills)).toEqual([]);
    await expect(file.read(new Uint8Array(10), 0)).rejects.toThrow(/given up/);
  });

  it('of a killed run go at the next start; those of a running one stay', async () => {
    const file = await SpillFile.create('.v');
    const [own] = await readdir(spills);
    // A process that has ended.
    const { pid } = spawnSync(process.execPath, ['-e', '0']);
    for (const ending of ['', '.v']) {
      const name = own.replace(`-${process.pid}-`, `-${pid}-`).replace(/\.v$/, ending);
      await writeFile(join(spills, name), 'left behind');
    }
    expect(await readdir(spills)).toHaveLength(3);
    await removeAbandonedSpills();
    expect(await readdir(spills)).toEqual([own]);
    file.discard();
  });
});
