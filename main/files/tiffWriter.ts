import { promisify } from 'node:util';
import { deflate } from 'node:zlib';
import type { CarriedParts } from './carriedParts.ts';
import { exifFields } from './exifBlock.ts';
import { Turns } from './interruption.ts';
import type { AnyPictureFile } from './photoFile.ts';
import { depthOf, samplesOf } from './pictureRows.ts';
import type { PixelFacts } from './spilledPixels.ts';
import { directoryBytes, fieldType, type TiffField, tiffHeader, tiffPixelsAt } from './tiffDirectory.ts';
import type { UnfinishedFile } from './unfinishedFile.ts';

// Written here and not by the image library: strips go to the disk as they are packed, on every core, so no
// second copy of the picture is held, an abort is noticed between strips, and the profile is embedded without
// touching a number. 24 megapixels, 16 bits, two cores: see deflateLevel.

const pack = promisify(deflate);

const { short: shortType, long: longType, rational: rationalType, undefined: undefinedType } = fieldType;

const noCompression = 1;
const deflateCompression = 8;
const horizontalPredictor = 2;
const rgbPhotometric = 2;
const separatedPhotometric = 5;
const straightAlphaSample = 2;
const perInch = 2;

const stripBytes = 256 * 1024;
const stripsInFlight = 4;
const deflateLevel = 1;

/** Writes a picture as a baseline TIFF 6.0 with deflate and horizontal differencing; 16 bits stay 16 bits. */
export async function writeTiff(
  file: UnfinishedFile,
  picture: AnyPictureFile,
  parts: CarriedParts,
  signal?: AbortSignal,
): Promise<void> {
  await file.append(tiffHeader(0));
  const strips = await writeStrips(file, picture, signal);
  // Directories start on a word boundary.
  if (file.bytesWritten % 2 === 1) await file.append(Uint8Array.of(0));
  const layout = { ...strips, bits: depthOf(picture), compression: deflateCompression };
  const fields = fieldsOf(picture, parts, layout);
  if (parts.exif) fields.push(...(await appendExif(file, parts.exif)));
  fields.sort((a, b) => a.tag - b.tag);
  const directoryAt = file.bytesWritten;
  await file.append(directoryBytes(fields, directoryAt), signal);
  await file.patch(tiffHeader(directoryAt), 0);
}

const exifDirectoryTag = 34665;
const gpsDirectoryTag = 34853;

/** Capture data and place go into directories of their own; what is left belongs into the picture's. */
async function appendExif(file: UnfinishedFile, exif: Uint8Array): Promise<TiffField[]> {
  const { main, capture, place } = exifFields(exif);
  const fields: TiffField[] = [...main];
  for (const [tag, directory] of [
    [exifDirectoryTag, capture],
    [gpsDirectoryTag, place],
  ] as const) {
    if (directory.length === 0) continue;
    fields.push({ tag, type: longType, values: [file.bytesWritten] });
    const bytes = directoryBytes(
      [...directory].sort((a, b) => a.tag - b.tag),
      file.bytesWritten,
    );
    await file.append(bytes.length % 2 === 0 ? bytes : Buffer.concat([bytes, Uint8Array.of(0)]));
  }
  return fields;
}

/** What stands before and behind the pixels of an uncompressed TIFF whose pixels begin at `tiffPixelsAt`. */
export function uncompressedTiff(facts: PixelFacts & { space?: 'RGB' | 'CMYK' }): {
  header: Uint8Array;
  tail: Uint8Array;
  tailAt: number;
} {
  const rowBytes = facts.widthPx * facts.channels * facts.bytesPerSample;
  const rows = Math.max(1, Math.floor(stripBytes / rowBytes));
  const count = Math.ceil(facts.heightPx / rows);
  const offsets = Array.from({ length: count }, (_, k) => tiffPixelsAt + k * rows * rowBytes);
  const sizes = offsets.map((_, k) => Math.min(rows, facts.heightPx - k * rows) * rowBytes);
  const end = tiffPixelsAt + facts.heightPx * rowBytes;
  const tailAt = end + (end % 2);
  const bits = facts.bytesPerSample * 8;
  const fields = fieldsOf(facts, {}, { rows, offsets, sizes, bits, compression: noCompression });
  return { header: tiffHeader(tailAt), tail: directoryBytes(fields, tailAt), tailAt };
}

interface Strips {
  rows: number;
  offsets: number[];
  sizes: number[];
}

async function writeStrips(
  file: UnfinishedFile,
  picture: AnyPictureFile,
  signal?: AbortSignal,
): Promise<Strips> {
  const { heightPx } = picture;
  const rowSamples = picture.widthPx * picture.channels;
  const rowBytes = (rowSamples * depthOf(picture)) / 8;
  const rows = Math.max(1, Math.min(heightPx, Math.floor(stripBytes / rowBytes)));
  const strips: Strips = { rows, offsets: [], sizes: [] };
  const turns = new Turns(signal);
  const packing: Promise<Uint8Array>[] = [];
  const writeOldest = async () => {
    const packed = await packing.shift()!;
    strips.offsets.push(file.bytesWritten);
    strips.sizes.push(packed.length);
    await file.append(packed, signal);
  };
  try {
    for (let top = 0; top < heightPx; top += rows) {
      const bottom = Math.min(top + rows, heightPx);
      const differences = differencesAlongRows(
        await samplesOf(picture, top, bottom, signal),
        rowSamples,
        picture.channels,
      );
      packing.push(pack(differences, { level: deflateLevel, memLevel: 9 }));
      if (packing.length >= stripsInFlight) await writeOldest();
      if (turns.due) await turns.pause();
    }
    while (packing.length > 0) await writeOldest();
  } finally {
    await Promise.allSettled(packing);
  }
  return strips;
}

/** Each sample less its left neighbour, modulo the sample's range (TIFF 6.0, section 14). */
function differencesAlongRows(
  strip: Uint8Array | Uint16Array,
  rowSamples: number,
  channels: number,
): Uint8Array {
  const differences = strip.slice();
  for (let rowStart = 0; rowStart < strip.length; rowStart += rowSamples) {
    const rowEnd = rowStart + rowSamples;
    for (let i = rowStart + channels; i < rowEnd; i++) differences[i] = strip[i] - strip[i - channels];
  }
  return new Uint8Array(differences.buffer, differences.byteOffset, differences.byteLength);
}

function fieldsOf(
  picture: { widthPx: number; heightPx: number; channels: 3 | 4; space?: 'RGB' | 'CMYK' },
  parts: CarriedParts,
  { bits, compression, ...strips }: Strips & { bits: number; compression: number },
): TiffField[] {
  const { channels } = picture;
  const fields: TiffField[] = [
    { tag: 256, type: longType, values: [picture.widthPx] },
    { tag: 257, type: longType, values: [picture.heightPx] },
    { tag: 258, type: shortType, values: Array(channels).fill(bits) },
    { tag: 259, type: shortType, values: [compression] },
    { tag: 262, type: shortType, values: [picture.space === 'CMYK' ? separatedPhotometric : rgbPhotometric] },
    { tag: 273, type: longType, values: strips.offsets },
    { tag: 274, type: shortType, values: [1] },
    { tag: 277, type: shortType, values: [channels] },
    { tag: 278, type: longType, values: [strips.rows] },
    { tag: 279, type: longType, values: strips.sizes },
    { tag: 284, type: shortType, values: [1] },
  ];
  if (compression !== noCompression)
    fields.push({ tag: 317, type: shortType, values: [horizontalPredictor] });
  if (parts.densityPpi) {
    const resolution = [Math.round(parts.densityPpi * 1000), 1000];
    fields.push({ tag: 282, type: rationalType, values: resolution });
    fields.push({ tag: 283, type: rationalType, values: resolution });
    fields.push({ tag: 296, type: shortType, values: [perInch] });
  }
  if (channels === 4 && picture.space !== 'CMYK')
    fields.push({ tag: 338, type: shortType, values: [straightAlphaSample] });
  if (parts.iccProfile) fields.push({ tag: 34675, type: undefinedType, values: parts.iccProfile });
  return fields.sort((a, b) => a.tag - b.tag);
}
