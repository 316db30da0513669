import { execFileSync } from 'node:child_process';
import { existsSync } from 'node:fs';
import { describe, expect, it } from 'vitest';
import { exifFields, exifForPainting } from '../../main/files/exifBlock.ts';
import { writePicture } from '../../main/files/writePicture.ts';
import { exifOfCamera } from '../fixtures/exifOfCamera.ts';
import { temporaryFolder } from './temporaryFolder.ts';

const folder = temporaryFolder();
/** The independent reader. */
const exiftool = ['/usr/bin/exiftool', '/usr/local/bin/exiftool'].find((path) => existsSync(path));

function tell(path: string): Record<string, unknown> {
  const out = execFileSync(exiftool!, ['-json', '-G1', '-n', '-a', path], { encoding: 'utf8' });
  return JSON.parse(out)[0];
}

const picture = (format: 'jpeg' | 'png' | 'tiff' | 'webp') => ({
  widthPx: 24,
  heightPx: 16,
  channels: 3 as const,
  pixels: new Uint8Array(24 * 16 * 3).fill(90),
  format,
  densityPpi: 300,
  description: 'Painted by Oxgall: Low Water, State III',
  software: 'Oxgall, engine 1',
});

describe.skipIf(!exiftool)('metadata of a painting, as exiftool reads it', () => {
  it.each(['jpeg', 'png', 'tiff', 'webp'] as const)('goes into %s as far as is asked for', async (format) => {
    const exif = new Uint8Array(exifOfCamera({ orientation: 6, widthPx: 24, heightPx: 16 }));
    for (const metadata of ['essential', 'all', 'none'] as const) {
      const path = folder.path(`${format} ${metadata}.${format}`);
      await writePicture(path, { ...picture(format), exif, metadata });
      const told = tell(path);
      const names = Object.keys(told);
      const has = (pattern: RegExp) => names.some((name) => pattern.test(name));
      expect(has(/Error|Warning/), JSON.stringify(told)).toBe(false);
      expect(has(/GPS(Latitude|Longitude)/)).toBe(metadata === 'all');
      expect(has(/Copyright$/)).toBe(metadata !== 'none');
      expect(has(/DateTimeOriginal$/)).toBe(metadata !== 'none');
      expect(has(/:Software$/)).toBe(metadata !== 'none');
      if (metadata !== 'none') expect(told['IFD0:ImageDescription']).toBe(picture(format).description);
      const orientation = told['IFD0:Orientation'];
      expect(orientation === undefined || orientation === 1).toBe(true);
    }
  });

  it('tells what painted it where the photo told nothing', async () => {
    const path = folder.path('bare.jpg');
    await writePicture(path, picture('jpeg'));
    expect(tell(path)['IFD0:ImageDescription']).toBe(picture('jpeg').description);
  });
});

describe('texts in an EXIF block', () => {
  it('survive damage of any kind without a fault', () => {
    const whole = new Uint8Array(exifOfCamera({ orientation: 6, widthPx: 24, heightPx: 16 }));
    const changes = { widthPx: 5, heightPx: 5, description: 'a', software: 'Oxgall, engine 1' };
    for (let length = 0; length <= whole.length; length += 3) {
      const made = exifForPainting(whole.subarray(0, length), changes);
      if (made) expect(() => exifFields(made)).not.toThrow();
    }
    let seed = 5;
    for (let round = 0; round < 400; round++) {
      const damaged = whole.slice();
      for (let i = 0; i < 6; i++) {
        seed = (Math.imul(seed, 1664525) + 1013904223) >>> 0;
        damaged[seed % damaged.length] = seed >>> 24;
      }
      const made = exifForPainting(damaged, changes);
      if (made) expect(() => exifFields(made)).not.toThrow();
    }
  });
});
