import { extname } from 'node:path';
import { FileError } from './fileError.ts';
import type { PhotoFile } from './photoFile.ts';

export type PhotoFormat = PhotoFile['format'];

const exportRemedy = 'Export it as JPEG, PNG or 16-bit TIFF and open that.';

/** Raw files that wear a TIFF coat: the library would open the small preview inside and call it the photo. */
const rawInTiffCoat = new Set(
  '.3fr .arw .cr2 .dcr .dng .erf .iiq .k25 .kdc .mef .mos .nef .nrw .pef .sr2 .srf .srw'.split(' '),
);

const foreign: { name: string; at: number; magic: string }[] = [
  { name: 'a JPEG XL picture', at: 0, magic: '\xff\x0a' },
  { name: 'a JPEG XL picture', at: 4, magic: 'JXL ' },
  { name: 'a JPEG 2000 picture', at: 4, magic: 'jP  ' },
  { name: 'a JPEG 2000 picture', at: 0, magic: '\xff\x4f\xff\x51' },
  { name: 'a camera raw file', at: 4, magic: 'ftypcrx ' },
  { name: 'a camera raw file', at: 0, magic: 'FUJIFILM' },
  { name: 'a camera raw file', at: 0, magic: 'IIRO' },
  { name: 'a camera raw file', at: 0, magic: 'IIU\0' },
  { name: 'a layered PSD picture', at: 0, magic: '8BPS' },
  { name: 'a PDF document', at: 0, magic: '%PDF' },
  { name: 'a PostScript document', at: 0, magic: '%!PS' },
  { name: 'a BMP picture', at: 0, magic: 'BM' },
  { name: 'a zip archive or office document', at: 0, magic: 'PK\x03\x04' },
];

/** Names the format from the first bytes alone; what the file is called does not count. */
export function recogniseFormat(head: Uint8Array): PhotoFormat | undefined {
  const text = Buffer.from(head).toString('latin1');
  if (text.startsWith('\xff\xd8\xff')) return 'jpeg';
  if (text.startsWith('\x89PNG\r\n\x1a\n')) return 'png';
  if (/^(II[*+]\0|MM\0[*+])/.test(text)) return 'tiff';
  if (text.startsWith('RIFF') && text.slice(8, 12) === 'WEBP') return 'webp';
  if (/^GIF8[79]a/.test(text)) return 'gif';
  if (text.slice(4, 8) === 'ftyp') {
    const brands = text.slice(8, 64);
    if (/avi[fs]/.test(brands)) return 'avif';
    if (/hei[cxms]|hev[cx]|mif1|msf1/.test(brands)) return 'heif';
  }
  return undefined;
}

/**
 * The format of a photo by its first bytes.
 * @param head at least 64 bytes from the start of the file, or all of a shorter file
 * @throws FileError for anything that is not a photo this program reads
 */
export function requirePhotoFormat(path: string, head: Uint8Array): PhotoFormat {
  if (head.every((byte) => byte === 0))
    throw new FileError(path, 'holds nothing but zeros', 'Copy it again from the camera or the card.');
  const format = recogniseFormat(head);
  if (format === 'tiff' && rawInTiffCoat.has(extname(path).toLowerCase()))
    throw new FileError(path, 'is a camera raw file, which is not read here', exportRemedy);
  if (format === 'heif')
    throw new FileError(path, 'is an HEIC picture, which is not read here', exportRemedy);
  if (format) return format;
  const text = Buffer.from(head).toString('latin1');
  const known = foreign.find(({ at, magic }) => text.startsWith(magic, at));
  if (known) throw new FileError(path, `is ${known.name}, which is not read here`, exportRemedy);
  const isText = head.every((byte) => byte >= 32 || byte === 9 || byte === 10 || byte === 13 || byte === 12);
  throw new FileError(
    path,
    isText ? 'holds text, not a picture' : 'is not a picture in a format read here',
    'Choose a JPEG, PNG, TIFF, WebP, AVIF or GIF file.',
  );
}
