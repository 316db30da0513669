import { existsSync, readFileSync } from 'node:fs';
import { describe, expect, it } from 'vitest';
import { matrixProfile, p3Profile, srgbPrimaries, wideProfile } from '../../core/colour/matrixProfile.ts';
import { readPhoto } from '../../main/files/readPhoto.ts';
import { spillPhoto } from '../../main/files/spillPhoto.ts';
import { writePicture } from '../../main/files/writePicture.ts';
import { temporaryFolder } from './temporaryFolder.ts';

const folder = temporaryFolder();
const cmykPath = '/usr/share/color/icc/ghostscript/default_cmyk.icc';

/** `curv` with one number is a power, in 256ths (ICC.1, 10.6). */
const straightCurve = Uint8Array.from([...Buffer.from('curv'), 0, 0, 0, 0, 0, 0, 0, 1, 1, 0]);

async function fileOf(name: string, channels: 3 | 4, pixels: Uint16Array, iccProfile: Uint8Array) {
  const path = folder.path(name);
  const heightPx = 3;
  const widthPx = pixels.length / channels / heightPx;
  await writePicture(path, { widthPx, heightPx, channels, pixels, iccProfile, format: 'tiff' });
  return path;
}

describe('a photo whose numbers are amounts of light', () => {
  const linear = matrixProfile('Linear', srgbPrimaries, straightCurve);

  it('is brought to numbers made for looking at, alpha as it was', async () => {
    const light = [0, 0.05, 0.18, 0.5, 0.9, 1];
    const pixels = Uint16Array.from(
      [...light, ...light, ...light].flatMap((y) => [y, y, y, 0.3]),
      (y) => Math.round(y * 65535),
    );
    const photo = await readPhoto(await fileOf('linear.tif', 4, pixels, linear));
    expect(photo.remarks.join()).toContain('amounts of light');
    expect([photo.depth, photo.channels]).toEqual([16, 4]);
    expect(photo.iccProfile).toEqual(wideProfile());
    // The encoding of IEC 61966-2-1, whatever the primaries: neutrals stay neutral.
    const encoded = light.map((y) => (y <= 0.0031308 ? 12.92 * y : 1.055 * y ** (1 / 2.4) - 0.055));
    for (const [x, value] of encoded.entries())
      for (let c = 0; c < 3; c++)
        expect(Math.abs(photo.pixels[x * 4 + c] / 65535 - value), `${light[x]}`).toBeLessThan(0.0006);
    expect(photo.pixels[3]).toBe(Math.round(0.3 * 65535));
  });

  it('keeps its numbers where its curve is made for looking at, gamma 1.8 to 2.4', async () => {
    for (const gamma of [1.8, 2.2, 2.4]) {
      const power = Math.round(gamma * 256);
      const curve = Uint8Array.from([...straightCurve.subarray(0, 12), power >> 8, power & 255]);
      const profile = matrixProfile('Power', srgbPrimaries, curve);
      const pixels = Uint16Array.from({ length: 36 }, (_, i) => i * 1801);
      const photo = await readPhoto(await fileOf(`${gamma}.tif`, 3, pixels, profile));
      expect(photo.iccProfile).toEqual(profile);
      expect([...photo.pixels]).toEqual([...pixels]);
      expect(photo.remarks).toEqual([]);
    }
  });
});

describe('a photo with a damaged profile', () => {
  it.each([
    ['no tags', (bytes: Uint8Array) => bytes.fill(0, 128, 132)],
    ['a curve of no kind', (bytes: Uint8Array) => bytes.fill(0x41, Buffer.from(bytes).indexOf('para'))],
    ['a column beyond its end', (bytes: Uint8Array) => bytes.fill(0x7f, 184, 188)],
  ])('is taken for sRGB, and says so: %s', async (name, damage) => {
    const profile = damage(p3Profile());
    const pixels = Uint16Array.from({ length: 36 }, (_, i) => i * 1801);
    const photo = await readPhoto(await fileOf(`${name}.tif`, 3, pixels, profile));
    expect(photo.iccProfile).toBeUndefined();
    expect([...photo.pixels]).toEqual([...pixels]);
    expect(photo.remarks).toEqual(['The embedded colour profile is damaged: left out, sRGB assumed.']);
  });
});

describe.skipIf(!existsSync(cmykPath))(
  'a CMYK photo (skipped without a printing profile of the system)',
  () => {
    it.each([8, 16] as const)('of %i bits is the same in memory and through a file', async (depth) => {
      const [widthPx, heightPx] = [67, 41];
      const length = widthPx * heightPx * 4;
      const pixels =
        depth === 8
          ? Uint8Array.from({ length }, (_, i) => (i * 7919) >> 3)
          : Uint16Array.from({ length }, (_, i) => i * 7919);
      const path = folder.path(`inks ${depth}.tif`);
      const iccProfile = new Uint8Array(readFileSync(cmykPath));
      const format = 'tiff';
      await writePicture(path, { widthPx, heightPx, channels: 4, space: 'CMYK', pixels, iccProfile, format });
      const { pixels: expected, ...facts } = await readPhoto(path);
      const { pixels: spilled, ...spilledFacts } = await spillPhoto(path);
      try {
        expect(spilledFacts).toEqual(facts);
        expect(facts.iccProfile).toEqual(wideProfile());
        expect(await spilled.samples(0, heightPx)).toEqual(expected);
      } finally {
        spilled.discard();
      }
    });
  },
);
