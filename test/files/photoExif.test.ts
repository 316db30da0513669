import { execFileSync } from 'node:child_process';
import { existsSync } from 'node:fs';
import sharp from 'sharp';
import { describe, expect, it } from 'vitest';
import { exifFields, withCredits } from '../../main/files/exifBlock.ts';
import { creditsOf } from '../../main/files/photoCredits.ts';
import { readPhoto } from '../../main/files/readPhoto.ts';
import { spillPhoto } from '../../main/files/spillPhoto.ts';
import { readTiffExif } from '../../main/files/tiffExif.ts';
import { writePicture } from '../../main/files/writePicture.ts';
import { exifOfCamera } from '../fixtures/exifOfCamera.ts';
import { temporaryFolder } from './temporaryFolder.ts';

const folder = temporaryFolder();
/** The independent writer and reader. */
const exiftool = ['/usr/bin/exiftool', '/usr/local/bin/exiftool'].find((path) => existsSync(path));
const tiffcp = ['/usr/bin/tiffcp', '/usr/local/bin/tiffcp'].find((path) => existsSync(path));

function tell(path: string): Record<string, unknown> {
  return JSON.parse(execFileSync(exiftool!, ['-json', '-G1', '-n', path], { encoding: 'utf8' }))[0];
}

function tag(path: string, ...tags: string[]): void {
  execFileSync(exiftool!, ['-q', '-q', '-m', '-overwrite_original', ...tags, path]);
}

const picture = sharp({ create: { width: 24, height: 16, channels: 3, background: '#5a6b7c' } });

const kinds = {
  'a TIFF': () => picture.clone().tiff().toBuffer(),
  'a JPEG': () => picture.clone().jpeg().toBuffer(),
  'a PNG': () => picture.clone().png().toBuffer(),
  'a WebP': () => picture.clone().webp().toBuffer(),
};

describe.skipIf(!exiftool)('what exiftool wrote into a photo and reads in its painting', () => {
  it.each(Object.entries(kinds))(
    'from %s: author, rights, date and capture data; no place',
    async (name, make) => {
      const path = await folder.file(`${name}.photo`, await make());
      tag(
        path,
        '-IFD0:Artist=Odalys Brook',
        '-IFD0:Copyright=© Odalys Brook',
        '-ExifIFD:DateTimeOriginal=2025:03:04 05:06:07',
        '-ExifIFD:FNumber=2.8',
        '-ExifIFD:ExposureTime=1/250',
        '-GPS:GPSLatitude=10.5',
        '-GPS:GPSLatitudeRef=N',
      );
      const photo = await readPhoto(path);
      for (const format of ['jpeg', 'tiff'] as const) {
        const out = folder.path(`${name} out.${format}`);
        await writePicture(out, { ...photo, format });
        const told = tell(out);
        expect(told).toMatchObject({
          'IFD0:Artist': 'Odalys Brook',
          'IFD0:Copyright': '© Odalys Brook',
          'ExifIFD:DateTimeOriginal': '2025:03:04 05:06:07',
          'ExifIFD:FNumber': 2.8,
          'ExifIFD:ExposureTime': 1 / 250,
        });
        expect(JSON.stringify(told)).not.toMatch(/GPS|Warning|Error/);
        await writePicture(out, { ...photo, format, metadata: 'all' });
        expect(tell(out)['GPS:GPSLatitude']).toBe(10.5);
      }
    },
  );

  it.skipIf(!tiffcp)('from a BigTIFF that libtiff made: the author, which is all it copies', async () => {
    const path = await folder.file('small.tif', await kinds['a TIFF']());
    tag(path, '-IFD0:Artist=Odalys Brook');
    execFileSync(tiffcp!, ['-8', path, folder.path('big.tif')]);
    const out = folder.path('from big.jpg');
    await writePicture(out, { ...(await readPhoto(folder.path('big.tif'))), format: 'jpeg' });
    expect(tell(out)['IFD0:Artist']).toBe('Odalys Brook');
  });

  it.each([
    ['XMP', ['-XMP-dc:Creator=Odalys Brook', '-XMP-dc:Rights=© Brook & heirs']],
    [
      'IPTC',
      ['-codedcharacterset=utf8', '-IPTC:By-line=Odalys Brook', '-IPTC:CopyrightNotice=© Brook & heirs'],
    ],
  ])('author and rights that only %s names', async (kind, tags) => {
    const path = await folder.file(`${kind}.jpg`, await kinds['a JPEG']());
    tag(path, ...tags);
    const out = folder.path(`${kind} out.tif`);
    await writePicture(out, { ...(await readPhoto(path)), format: 'tiff' });
    expect(tell(out)).toMatchObject({ 'IFD0:Artist': 'Odalys Brook', 'IFD0:Copyright': '© Brook & heirs' });
  });

  it('is the same for a photo that is read through a file', async () => {
    const path = await folder.file('large.tif', await kinds['a TIFF']());
    tag(path, '-IFD0:Artist=Odalys Brook', '-ExifIFD:FNumber=8');
    const [held, spilled] = [await readPhoto(path), await spillPhoto(path)];
    spilled.pixels.discard();
    expect(held.exif).toBeDefined();
    expect(spilled.exif).toEqual(held.exif);
  });
});

describe('EXIF of a TIFF', () => {
  it('is given up, without a fault, where the file is damaged', async () => {
    const path = folder.path('whole.tif');
    const exif = new Uint8Array(exifOfCamera({ orientation: 1, widthPx: 4, heightPx: 4 }));
    const pixels = new Uint8Array(4 * 4 * 3);
    await writePicture(path, { widthPx: 4, heightPx: 4, channels: 3, pixels, exif, format: 'tiff' });
    const { readFile } = await import('node:fs/promises');
    const whole = new Uint8Array(await readFile(path));
    const found = await readTiffExif(whole);
    expect(exifFields(found!).main.length).toBeGreaterThan(0);
    for (let length = 0; length < whole.length; length++) await readTiffExif(whole.subarray(0, length));
    let seed = 11;
    for (let round = 0; round < 500; round++) {
      const damaged = whole.slice();
      for (let i = 0; i < 5; i++) {
        seed = (Math.imul(seed, 1664525) + 1013904223) >>> 0;
        damaged[seed % damaged.length] = seed >>> 24;
      }
      await readTiffExif(damaged);
    }
  });
});

describe('credits', () => {
  const utf8 = (text: string) => new Uint8Array(Buffer.from(text, 'utf8'));

  // After the examples of ISO 16684-1, 8.2 (arrays and language alternatives).
  it('are read from XMP: every creator, and the notice in its default language', () => {
    const xmp = `<rdf:Description><dc:creator><rdf:Seq><rdf:li>Odalys Brook</rdf:li><rdf:li>The &quot;Heron&quot;</rdf:li></rdf:Seq></dc:creator>
      <dc:rights><rdf:Alt><rdf:li xml:lang="x-default">&#169; Brook &amp; Co</rdf:li><rdf:li xml:lang="de">anders</rdf:li></rdf:Alt></dc:rights></rdf:Description>`;
    expect(creditsOf(utf8(xmp), undefined)).toEqual({
      creator: 'Odalys Brook; The "Heron"',
      copyright: '© Brook & Co',
    });
    expect(creditsOf(utf8('<dc:rights><rdf:Alt><rdf:li/></rdf:Alt></dc:rights>'), undefined)).toEqual({});
  });

  it('never take the place of what EXIF names', () => {
    const block = new Uint8Array(exifOfCamera({ orientation: 1, widthPx: 4, heightPx: 4 }));
    expect(withCredits(block, { copyright: 'somebody else' })).toBe(block);
    const added = withCredits(block, { creator: 'Odalys Brook' });
    const artist = exifFields(added!).main.find((field) => field.tag === 0x013b);
    expect(Buffer.from(artist!.values as Uint8Array).toString()).toBe('Odalys Brook\0');
  });

  it('are given up where IPTC is cut off', () => {
    const whole = Buffer.from('\x1c\x02\x74\x00\x05Brook', 'latin1');
    expect(creditsOf(undefined, whole).copyright).toBe('Brook');
    for (let length = 0; length < whole.length; length++)
      expect(creditsOf(undefined, whole.subarray(0, length)).copyright).toBeUndefined();
  });
});
