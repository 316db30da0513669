import { execFileSync } from 'node:child_process';
import { existsSync } from 'node:fs';
import { fileURLToPath } from 'node:url';
import sharp from 'sharp';
import { beforeAll, describe, expect, it } from 'vitest';
import { temporaryFolder } from '../files/temporaryFolder.ts';
import { photographs } from '../fixtures/photographs.ts';

/*
 * Files for the printer, made by the program and read by exiftool, which knows nothing of ours. Sizes are worked out by
 * hand beside each case: 25.4 mm an inch is exact.
 */
const program = fileURLToPath(new URL('../../dist/main/commandLine.js', import.meta.url));
const exiftool = ['/usr/bin/exiftool', '/usr/local/bin/exiftool'].find((path) => existsSync(path));
const folder = temporaryFolder();
let photo: string;

beforeAll(async () => {
  photo = folder.path('heron.jpg');
  await sharp(photographs.nagasakiBoats).resize(400, 300, { fit: 'fill' }).jpeg().toFile(photo);
  if (!exiftool) return;
  const tags = [
    '-EXIF:Copyright=Odalys Brook',
    '-EXIF:DateTimeOriginal=2025:10:11 12:13:14',
    '-EXIF:Orientation#=1',
  ];
  const place = ['-GPSLatitude=51.5', '-GPSLatitudeRef=N', '-GPSLongitude=3.6', '-GPSLongitudeRef=E'];
  execFileSync(exiftool, ['-q', '-overwrite_original', ...tags, ...place, photo]);
});

function paint(out: string, ...words: string[]): string {
  const path = folder.path(out);
  execFileSync(process.execPath, [program, 'paint', photo, '--out', path, ...words], {
    env: { ...process.env, OXGALL_DATA: folder.path('data') },
    stdio: ['ignore', 'ignore', 'pipe'],
  });
  return path;
}

function tell(path: string): Record<string, unknown> {
  return JSON.parse(execFileSync(exiftool!, ['-json', '-n', '-a', path], { encoding: 'utf8' }))[0];
}

describe.skipIf(!exiftool)('a file for the printer, as exiftool reads it (skipped without it)', () => {
  // 100 mm at 150 an inch: 590.55, so 591. A frame of 4:5 in 400 × 300 is 240 × 300; 591 · 240/300 = 472.8, so 473.
  // 3 mm of bleed: 17.7, so 18 on every side. Marks: 8 mm of margin, 47.2, so 47 on every side.
  const size = ['--print-long-edge', '100', '--ppi', '150'];
  const bleed = [...size, '--crop', '4:5', '--bleed', '3'];
  it.each([
    ['size alone', [...size], 591, 443],
    ['crop', [...size, '--crop', '4:5'], 473, 591],
    ['crop and bleed', bleed, 473 + 36, 591 + 36],
    ['crop, bleed and marks', [...bleed, '--trim-marks'], 473 + 36 + 94, 591 + 36 + 94],
  ])('has the pixels that were asked for: %s', (name, words, widthPx, heightPx) => {
    for (const ending of ['tif', 'jpg', 'png', 'webp']) {
      const told = tell(paint(`${name}.${ending}`, ...words));
      expect([told.ImageWidth, told.ImageHeight], ending).toEqual([widthPx, heightPx]);
      if (ending === 'png') expect(told.PixelsPerUnitX).toBe(Math.round(150 / 0.0254));
      else expect([told.XResolution, told.YResolution, told.ResolutionUnit], ending).toEqual([150, 150, 2]);
    }
  });

  it('keeps its own pixels, and says how fine they lie, where only the size is asked for', () => {
    // 400 pixels over 101.6 mm, which are 4 inches.
    const told = tell(paint('own.tif', '--print-long-edge', '101.6'));
    expect([told.ImageWidth, told.ImageHeight, told.XResolution]).toEqual([400, 300, 100]);
  });

  it.each(['tif', 'jpg', 'png', 'webp'])('keeps copyright and capture date, not the place: %s', (ending) => {
    const told = tell(paint(`data.${ending}`));
    expect(told).toMatchObject({ Copyright: 'Odalys Brook', DateTimeOriginal: '2025:10:11 12:13:14' });
    expect(Object.keys(told).filter((name) => name.startsWith('GPS'))).toEqual([]);
    expect(told.ImageDescription).toMatch(/^Painted by Oxgall: .+, State [IVXLCDM]+$/);
    expect(told.ColorSpaceData).toBe('RGB ');
    expect(tell(paint(`place.${ending}`, '--metadata', 'all')).GPSLatitude).toBe(51.5);
    const bare = tell(paint(`bare.${ending}`, '--metadata', 'none'));
    expect(
      bare.Copyright ?? bare.DateTimeOriginal ?? bare.GPSLatitude ?? bare.ImageDescription,
    ).toBeUndefined();
    expect(bare.ColorSpaceData).toBe('RGB ');
  });
});

describe('a painting with bleed', () => {
  it('is the painting without it, mirrored beyond its edge', async () => {
    const [plain, bled] = await Promise.all(
      [
        paint('plain.png', '--ppi', '100', '--print-long-edge', '101.6'),
        paint('bled.png', '--ppi', '100', '--print-long-edge', '101.6', '--bleed', '2.54'),
      ].map((path) => sharp(path, { ignoreIcc: true }).raw().toBuffer({ resolveWithObject: true })),
    );
    const margin = 10;
    expect([bled.info.width, bled.info.height]).toEqual([plain.info.width + 20, plain.info.height + 20]);
    const fold = (place: number, size: number) =>
      place < 0 ? -1 - place : place >= size ? 2 * size - 1 - place : place;
    let wrong = 0;
    for (let y = 0; y < bled.info.height; y++)
      for (let x = 0; x < bled.info.width; x++) {
        const from =
          fold(y - margin, plain.info.height) * plain.info.width + fold(x - margin, plain.info.width);
        for (let c = 0; c < 3; c++)
          if (bled.data[(y * bled.info.width + x) * 3 + c] !== plain.data[from * 3 + c]) wrong++;
      }
    expect(wrong).toBe(0);
  });
});
