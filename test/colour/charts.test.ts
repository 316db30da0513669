import { execFileSync } from 'node:child_process';
import { existsSync } from 'node:fs';
import { mkdtemp, readFile, rm, writeFile } from 'node:fs/promises';
import { tmpdir } from 'node:os';
import { join } from 'node:path';
import { fileURLToPath } from 'node:url';
import { crc32, deflateSync } from 'node:zlib';
import sharp from 'sharp';
import { afterAll, beforeAll, describe, expect, it } from 'vitest';
import { ciede2000 } from '../../core/colour/ciede2000.ts';
import type { Triple } from '../../core/colour/lab.ts';
import {
  matrixProfile,
  p3Profile,
  srgbPrimaries,
  srgbProfile,
  wideProfile,
} from '../../core/colour/matrixProfile.ts';
import { writePicture } from '../../main/files/writePicture.ts';

/*
 * The independent colour engine is `transicc` of the system's own LittleCMS tools, which reads numbers and profiles and
 * nothing of ours. Without it these tests are skipped.
 */
const program = fileURLToPath(new URL('../../dist/main/commandLine.js', import.meta.url));
const hasTransicc = ['/usr/bin/transicc', '/usr/local/bin/transicc'].some((path) => existsSync(path));
/** A printing profile with tables, where the system has one. */
const cmykPath = '/usr/share/color/icc/ghostscript/default_cmyk.icc';

let folder: string;
beforeAll(async () => {
  folder = await mkdtemp(join(tmpdir(), 'oxgall-charts-'));
});
afterAll(() => rm(folder, { recursive: true, force: true }));

/** L*a*b* under D50 of pixels, 0…255 (or 0…100 for inks), relative colorimetric. */
function labOf(profilePath: string, pixels: readonly (readonly number[])[]): Triple[] {
  const out = execFileSync('transicc', [`-i${profilePath}`, '-o*Lab', '-t1', '-n'], {
    input: pixels.map((pixel) => pixel.join(' ')).join('\n'),
    encoding: 'utf8',
    stdio: ['pipe', 'pipe', 'ignore'],
  });
  const rows = out.trim().split('\n').slice(-pixels.length);
  return rows.map((row) => row.trim().split(/\s+/).map(Number) as unknown as Triple);
}

/** 140 patches: greys, the cube's edges and corners, and colours spread over the inside. */
function patches(channels: 1 | 3 | 4): number[][] {
  const count = 140;
  return Array.from({ length: count }, (_, i) => {
    if (channels === 1) return [Math.round((i * 255) / (count - 1))];
    if (i < 20) return Array.from({ length: channels }, (_, c) => (c === 3 ? 0 : Math.round((i * 255) / 19)));
    // Halton points: evenly spread without a grid.
    return [2, 3, 5, 7].slice(0, channels).map((base, c) => {
      const value = halton(i - 19, base) * 255;
      return Math.round(c === 3 ? value * 0.6 : value);
    });
  });
}

function halton(index: number, base: number): number {
  let [result, share, rest] = [0, 1, index];
  while (rest > 0) {
    share /= base;
    result += share * (rest % base);
    rest = Math.floor(rest / base);
  }
  return result;
}

async function paintedFlat(photo: string, out: string, ...words: string[]): Promise<void> {
  const flat = ['--set', 'body.strength=0', '--set', 'line.strength=0'];
  execFileSync(process.execPath, [program, 'paint', photo, ...flat, '--out', out, ...words], {
    env: { ...process.env, OXGALL_DATA: join(folder, 'data') },
    stdio: ['ignore', 'ignore', 'pipe'],
  });
}

/** The patches' pixels in a 16-bit file, in 255ths, and the profile that it carries. */
async function readChart(path: string): Promise<{ pixels: number[][]; profile: string }> {
  const { icc } = await sharp(path).metadata();
  const profile = `${path}.icc`;
  await writeFile(profile, icc!);
  const { data, info } = await sharp(path, { ignoreIcc: true })
    .toColourspace('rgb16')
    .raw({ depth: 'ushort' })
    .toBuffer({ resolveWithObject: true });
  const samples = new Uint16Array(data.buffer, data.byteOffset, data.byteLength / 2);
  const pixels = Array.from({ length: info.width }, (_, x) =>
    [0, 1, 2].map((c) => samples[x * info.channels + c] / 257),
  );
  return { pixels, profile };
}

function differences(one: Triple[], other: Triple[]): { mean: number; largest: number } {
  const all = one.map((lab, i) => ciede2000(lab, other[i]));
  return { mean: all.reduce((a, b) => a + b) / all.length, largest: Math.max(...all) };
}

/** A chart of one row, 16 bits where it is RGB. */
async function writeChart(
  path: string,
  colours: number[][],
  iccProfile: Uint8Array | undefined,
): Promise<void> {
  const pixels = Uint16Array.from(colours.flat(), (value) => value * 257);
  await writePicture(path, {
    widthPx: colours.length,
    heightPx: 1,
    channels: 3,
    pixels,
    iccProfile,
    format: 'tiff',
  });
}

describe.skipIf(!hasTransicc)('a colour chart of 140 patches, painted with nothing over it', () => {
  it.each([
    ['sRGB', srgbProfile()],
    ['Display P3', p3Profile()],
    ['a wide space', wideProfile()],
    ['no profile', undefined],
  ])('comes back the same: %s', async (name, profile) => {
    const photo = join(folder, `${name}.tif`);
    const colours = patches(3);
    await writeChart(photo, colours, profile);
    await paintedFlat(photo, join(folder, `${name} out.tif`));
    const own = join(folder, `${name}.icc`);
    await writeFile(own, profile ?? srgbProfile());
    const back = await readChart(join(folder, `${name} out.tif`));
    const { mean, largest } = differences(labOf(own, colours), labOf(back.profile, back.pixels));
    expect(mean).toBeLessThan(0.2);
    expect(largest).toBeLessThan(1);
  });

  it('comes back the same: grey of gamma 2.2', async () => {
    const curve = Uint8Array.from([...Buffer.from('curv'), 0, 0, 0, 0, 0, 0, 0, 1, 2, 51]);
    const profile = greyProfile(curve);
    const path = join(folder, 'grey.icc');
    await writeFile(path, profile);
    const colours = patches(1);
    const photo = join(folder, 'grey.png');
    const raw = Buffer.from(colours.flat());
    const png = await sharp(raw, { raw: { width: 140, height: 1, channels: 1 } })
      .toColourspace('b-w')
      .png()
      .toBuffer();
    await writeFile(photo, withPngProfile(png, profile));
    expect((await sharp(photo).metadata()).space).toBe('b-w');
    await paintedFlat(photo, join(folder, 'grey out.tif'), '--depth', '16');
    const back = await readChart(join(folder, 'grey out.tif'));
    const { mean, largest } = differences(labOf(path, colours), labOf(back.profile, back.pixels));
    expect(mean).toBeLessThan(0.2);
    expect(largest).toBeLessThan(1);
  });

  it.skipIf(!existsSync(cmykPath))('comes back as RGB of the same colours: CMYK', async () => {
    const colours = patches(4);
    const photo = join(folder, 'inks.tif');
    await writePicture(photo, {
      widthPx: 140,
      heightPx: 1,
      channels: 4,
      space: 'CMYK',
      pixels: Uint8Array.from(colours.flat()),
      iccProfile: new Uint8Array(await readFile(cmykPath)),
      format: 'tiff',
    });
    await paintedFlat(photo, join(folder, 'inks out.tif'));
    const back = await readChart(join(folder, 'inks out.tif'));
    const inks = colours.map((pixel) => pixel.map((value) => (value * 100) / 255));
    const { mean } = differences(labOf(cmykPath, inks), labOf(back.profile, back.pixels));
    expect(mean).toBeLessThan(1);
  });

  it('does not drift in ten rounds of saving and opening', async () => {
    const colours = patches(3);
    let photo = join(folder, 'round 0.tif');
    await writeChart(photo, colours, p3Profile());
    for (let round = 1; round <= 10; round++) {
      const out = join(folder, `round ${round}.tif`);
      await paintedFlat(photo, out);
      photo = out;
    }
    const back = await readChart(photo);
    expect(back.pixels).toEqual(colours);
  });

  it('keeps a red that only P3 has, painted flat by the default preset', async () => {
    const photo = join(folder, 'red.tif');
    const pixels = new Uint16Array(64 * 48 * 3);
    for (let i = 0; i < pixels.length; i += 3) pixels[i] = 65535;
    await writePicture(photo, {
      widthPx: 64,
      heightPx: 48,
      channels: 3,
      pixels,
      iccProfile: p3Profile(),
      format: 'tiff',
    });
    const out = join(folder, 'red out.tif');
    execFileSync(process.execPath, [program, 'paint', photo, '--out', out], {
      env: { ...process.env, OXGALL_DATA: join(folder, 'data') },
    });
    const { icc } = await sharp(out).metadata();
    expect(Buffer.compare(icc!, p3Profile())).toBe(0);
    const { data } = await sharp(out, { ignoreIcc: true })
      .toColourspace('rgb16')
      .raw({ depth: 'ushort' })
      .toBuffer({ resolveWithObject: true });
    const samples = new Uint16Array(data.buffer, data.byteOffset, data.byteLength / 2);
    expect([...samples.subarray(0, 3)]).toEqual([65535, 0, 0]);
    expect(samples.every((value, i) => value === samples[i % 3])).toBe(true);
  });

  it('goes to another profile as the independent engine would take it', async () => {
    const photo = join(folder, 'to p3.tif');
    const colours = patches(3);
    await writeChart(photo, colours, srgbProfile());
    await paintedFlat(photo, join(folder, 'to p3 out.tif'), '--profile', 'p3', '--depth', '16');
    const own = join(folder, 'own.icc');
    await writeFile(own, srgbProfile());
    const back = await readChart(join(folder, 'to p3 out.tif'));
    const { mean, largest } = differences(labOf(own, colours), labOf(back.profile, back.pixels));
    // sRGB lies inside of P3: nothing has to give way.
    expect(mean).toBeLessThan(0.2);
    expect(largest).toBeLessThan(1);
  });
});

describe('profiles made here', () => {
  // Linear sRGB to XYZ under D50, published matrices multiplied (sRGB primaries and Bradford as in ICC.1 annex E).
  it('say what their spaces are', () => {
    const profile = srgbProfile();
    const view = new DataView(profile.buffer);
    expect(view.getUint32(0)).toBe(profile.length);
    const text = (at: number, length: number) =>
      Buffer.from(profile.subarray(at, at + length)).toString('latin1');
    expect([text(12, 12), text(36, 4)]).toEqual(['mntrRGB XYZ ', 'acsp']);
    expect(matrixProfile('sRGB IEC 61966-2-1', srgbPrimaries)).toEqual(profile);
  });
});

/** A grey profile of one curve, made by hand from ICC.1 so that the reader is not tested against its writer. */
function greyProfile(curve: Uint8Array): Uint8Array {
  const description = Buffer.concat([
    Buffer.from('desc\0\0\0\0\0\0\0\x05grey\0', 'latin1'),
    Buffer.alloc(78),
  ]);
  const white = Buffer.alloc(20);
  white.write('XYZ ', 'latin1');
  for (const [i, part] of [0.9642, 1, 0.8249].entries())
    white.writeInt32BE(Math.round(part * 65536), 8 + 4 * i);
  const padded = (data: Uint8Array) => Buffer.concat([data, Buffer.alloc((4 - (data.length % 4)) % 4)]);
  const tags: [string, Uint8Array][] = [
    ['desc', description],
    ['wtpt', white],
    ['kTRC', curve],
    ['cprt', Buffer.from('text\0\0\0\0none\0', 'latin1')],
  ];
  const table = Buffer.alloc(4 + 12 * tags.length);
  table.writeUInt32BE(tags.length);
  let offset = 128 + table.length;
  const bodies = tags.map(([name, data], i) => {
    table.write(name, 4 + 12 * i, 'latin1');
    table.writeUInt32BE(offset, 8 + 12 * i);
    table.writeUInt32BE(data.length, 12 + 12 * i);
    const body = padded(data);
    offset += body.length;
    return body;
  });
  const header = Buffer.alloc(128);
  header.writeUInt32BE(offset, 0);
  header.writeUInt32BE(0x02400000, 8);
  header.write('mntrGRAYXYZ ', 12, 'latin1');
  header.write('acsp', 36, 'latin1');
  for (const [i, part] of [0.9642, 1, 0.8249].entries())
    header.writeInt32BE(Math.round(part * 65536), 68 + 4 * i);
  return new Uint8Array(Buffer.concat([header, table, ...bodies]));
}

/** A PNG with a profile put in before its pixels (PNG, second edition, 11.3.3.3). */
function withPngProfile(png: Buffer, profile: Uint8Array): Buffer {
  const data = Buffer.concat([Buffer.from('grey\0\0', 'latin1'), deflateSync(profile)]);
  const body = Buffer.concat([Buffer.from('iCCP', 'latin1'), data]);
  const chunk = Buffer.alloc(12 + data.length);
  chunk.writeUInt32BE(data.length, 0);
  body.copy(chunk, 4);
  chunk.writeUInt32BE(crc32(body), 8 + data.length);
  return Buffer.concat([png.subarray(0, 33), chunk, png.subarray(33)]);
}
