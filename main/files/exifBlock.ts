import type { PhotoCredits } from './photoCredits.ts';
import { bytesOfType, fieldType, type TiffField } from './tiffDirectory.ts';

// EXIF travels as a small TIFF: a byte-order mark, directories of 12-byte entries, values by offset
// (CIPA DC-008). Everything is changed in place, so offsets inside maker notes stay true.

const tag = {
  orientation: 0x0112,
  xResolution: 0x011a,
  yResolution: 0x011b,
  resolutionUnit: 0x0128,
  exifDirectory: 0x8769,
  gpsDirectory: 0x8825,
  pixelWidth: 0xa002,
  pixelHeight: 0xa003,
  imageDescription: 0x010e,
  software: 0x0131,
  artist: 0x013b,
  copyright: 0x8298,
  makerNote: 0x927c,
};
const { ascii: asciiType, short: shortType, long: longType, rational: rationalType } = fieldType;

interface Entry {
  tag: number;
  type: number;
  count: number;
  /** Where the value itself lies. */
  valueAt: number;
  /** Where the entry lies. */
  at: number;
}

interface Directory {
  at: number;
  entries: Entry[];
  /** Where the offset of the next directory is stored. */
  nextAt: number;
}

interface ExifBytes {
  bytes: Uint8Array;
  view: DataView;
  littleEndian: boolean;
}

function readDirectory({ view, littleEndian }: ExifBytes, at: number): Directory | undefined {
  if (at < 8 || at + 2 > view.byteLength) return undefined;
  const count = view.getUint16(at, littleEndian);
  const nextAt = at + 2 + count * 12;
  if (nextAt + 4 > view.byteLength) return undefined;
  const entries: Entry[] = [];
  for (let entryAt = at + 2; entryAt < nextAt; entryAt += 12) {
    const type = view.getUint16(entryAt + 2, littleEndian);
    const valueCount = view.getUint32(entryAt + 4, littleEndian);
    const size = (bytesOfType[type] ?? 1) * valueCount;
    const valueAt = size <= 4 ? entryAt + 8 : view.getUint32(entryAt + 8, littleEndian);
    if (valueAt + size > view.byteLength) continue;
    entries.push({
      tag: view.getUint16(entryAt, littleEndian),
      type,
      count: valueCount,
      valueAt,
      at: entryAt,
    });
  }
  return { at, entries, nextAt };
}

function setNumber(exif: ExifBytes, entry: Entry | undefined, value: number): void {
  if (entry?.count !== 1) return;
  if (entry.type === shortType) exif.view.setUint16(entry.valueAt, value, exif.littleEndian);
  else if (entry.type === longType) exif.view.setUint32(entry.valueAt, value, exif.littleEndian);
  else if (entry.type === rationalType) {
    exif.view.setUint32(entry.valueAt, Math.round(value * 1000), exif.littleEndian);
    exif.view.setUint32(entry.valueAt + 4, 1000, exif.littleEndian);
  }
}

function subDirectory(exif: ExifBytes, parent: Directory, which: number): Directory | undefined {
  const pointer = parent.entries.find((entry) => entry.tag === which);
  if (pointer?.type !== longType || pointer.count !== 1) return undefined;
  return readDirectory(exif, exif.view.getUint32(pointer.valueAt, exif.littleEndian));
}

/** Blanks a directory's values and entries, and takes the entry that leads to it out of its parent. */
function removeSubDirectory(exif: ExifBytes, parent: Directory, which: number): void {
  const pointer = parent.entries.find((entry) => entry.tag === which);
  if (!pointer) return;
  const directory = subDirectory(exif, parent, which);
  if (directory) {
    for (const { type, count, valueAt } of directory.entries)
      exif.bytes.fill(0, valueAt, valueAt + (bytesOfType[type] ?? 1) * count);
    exif.bytes.fill(0, directory.at, directory.nextAt + 4);
  }
  exif.bytes.copyWithin(pointer.at, pointer.at + 12, parent.nextAt + 4);
  const entryCount = exif.view.getUint16(parent.at, exif.littleEndian);
  exif.view.setUint16(parent.at, entryCount - 1, exif.littleEndian);
}

/** The second directory describes a small picture of the unpainted photo, so it has no place in a painting. */
function removeThumbnail(exif: ExifBytes, first: Directory): void {
  const thumbnail = readDirectory(exif, exif.view.getUint32(first.nextAt, exif.littleEndian));
  exif.view.setUint32(first.nextAt, 0, exif.littleEndian);
  if (!thumbnail) return;
  const pick = (which: number) => thumbnail.entries.find((entry) => entry.tag === which);
  const start = pick(0x0201);
  const length = pick(0x0202);
  if (start?.type !== longType || length?.type !== longType) return;
  const from = exif.view.getUint32(start.valueAt, exif.littleEndian);
  const to = from + exif.view.getUint32(length.valueAt, exif.littleEndian);
  if (from > 8 && to <= exif.bytes.length) exif.bytes.fill(0, from, to);
}

/** What has to hold for the painted file. */
export interface ExifChanges {
  widthPx: number;
  heightPx: number;
  densityPpi?: number;
  /**
   * `essential`, unless given: all but where the photo was taken and what the camera's maker noted for itself. XMP and
   * IPTC blocks are not carried.
   */
  metadata?: 'all' | 'essential';
  /** What it is painted by, in words. */
  description?: string;
  software?: string;
}

const prefix = 'Exif\0\0';

/** The TIFF inside an EXIF block, without the "Exif" mark that JPEG puts before it. */
export function withoutExifMark(block: Uint8Array): Uint8Array {
  const marked = Buffer.from(block.subarray(0, prefix.length)).toString('latin1') === prefix;
  return marked ? block.subarray(prefix.length) : block;
}

/** EXIF of a photo that has none: an empty directory, little-endian. */
export const emptyExif = (): Uint8Array => Uint8Array.from([0x49, 0x49, 42, 0, 8, 0, 0, 0, 0, 0, 0, 0, 0, 0]);

/**
 * The block with creator and copyright where it names none; a new block where there is none.
 * @returns the block itself where nothing is missing or it cannot be understood
 */
export function withCredits(
  block: Uint8Array | undefined,
  { creator, copyright }: PhotoCredits,
): Uint8Array | undefined {
  const exif = parseBlock(block ?? emptyExif());
  const first = exif && firstDirectory(exif);
  if (!first) return block;
  const names = (which: number) =>
    first.entries.some((entry) => entry.tag === which && exif.bytes[entry.valueAt] !== 0);
  const texts: [number, string][] = [];
  if (creator && !names(tag.artist)) texts.push([tag.artist, creator]);
  if (copyright && !names(tag.copyright)) texts.push([tag.copyright, copyright]);
  return texts.length > 0 ? withTexts(exif, first, texts) : block;
}

/** A copy of a block to work on; undefined where it does not begin as one. */
function parseBlock(block: Uint8Array): ExifBytes | undefined {
  const bytes = new Uint8Array(withoutExifMark(block));
  const mark = Buffer.from(bytes.subarray(0, 4)).toString('latin1');
  if (bytes.length < 14 || (mark !== 'II*\0' && mark !== 'MM\0*')) return undefined;
  return { bytes, view: new DataView(bytes.buffer), littleEndian: mark.startsWith('II') };
}

function firstDirectory(exif: ExifBytes): Directory | undefined {
  return readDirectory(exif, exif.view.getUint32(4, exif.littleEndian));
}

/** Blanks one entry's value and takes the entry out of its directory. */
function removeEntry(exif: ExifBytes, directory: Directory, which: number): void {
  const entry = directory.entries.find((candidate) => candidate.tag === which);
  if (!entry) return;
  const size = (bytesOfType[entry.type] ?? 1) * entry.count;
  exif.bytes.fill(0, entry.valueAt, entry.valueAt + size);
  exif.bytes.copyWithin(entry.at, entry.at + 12, directory.nextAt + 4);
  const entryCount = exif.view.getUint16(directory.at, exif.littleEndian);
  exif.view.setUint16(directory.at, entryCount - 1, exif.littleEndian);
}

/**
 * The block with texts in its first directory. The directory is written anew at the end and nothing else is moved, so
 * that offsets inside the block stay true.
 * @param texts tag → text, stored as UTF-8 (which EXIF 3.0 permits and readers take for ASCII otherwise)
 */
function withTexts(
  exif: ExifBytes,
  first: Directory,
  texts: readonly (readonly [number, string])[],
): Uint8Array {
  const { bytes, littleEndian } = exif;
  const kept = first.entries.filter((entry) => !texts.some(([which]) => which === entry.tag));
  const values = texts.map(([which, text]) => ({ which, value: Buffer.from(`${text}\0`, 'utf8') }));
  const start = bytes.length + (bytes.length % 2);
  const count = kept.length + values.length;
  const behind = start + 2 + count * 12 + 4;
  const out = Buffer.alloc(
    behind + values.reduce((sum, { value }) => sum + value.length + (value.length % 2), 0),
  );
  out.set(bytes, 0);
  const put16 = (value: number, at: number) =>
    littleEndian ? out.writeUInt16LE(value, at) : out.writeUInt16BE(value, at);
  const put32 = (value: number, at: number) =>
    littleEndian ? out.writeUInt32LE(value, at) : out.writeUInt32BE(value, at);
  put32(start, 4);
  put16(count, start);
  const entries = [
    ...kept.map((entry) => ({ which: entry.tag, raw: bytes.subarray(entry.at, entry.at + 12), value: null })),
    ...values.map(({ which, value }) => ({ which, raw: null, value })),
  ].sort((a, b) => a.which - b.which);
  let at = start + 2;
  let valueAt = behind;
  for (const { which, raw, value } of entries) {
    if (raw) out.set(raw, at);
    else if (value) {
      put16(which, at);
      put16(asciiType, at + 2);
      put32(value.length, at + 4);
      if (value.length <= 4) out.set(value, at + 8);
      else {
        put32(valueAt, at + 8);
        out.set(value, valueAt);
        valueAt += value.length + (value.length % 2);
      }
    }
    at += 12;
  }
  return new Uint8Array(out);
}

/**
 * A copy of the photo's EXIF that is true of the painting: upright, its own size and density, no thumbnail of
 * the photo, no location unless all is asked for, and what it is painted by.
 * @returns the TIFF without the "Exif" mark, or undefined where the block cannot be understood
 */
export function exifForPainting(block: Uint8Array, changes: ExifChanges): Uint8Array | undefined {
  const exif = parseBlock(block);
  if (!exif) return undefined;
  let first = firstDirectory(exif);
  if (!first) return undefined;
  removeThumbnail(exif, first);
  if (changes.metadata !== 'all') {
    removeSubDirectory(exif, first, tag.gpsDirectory);
    const details = subDirectory(exif, first, tag.exifDirectory);
    if (details) removeEntry(exif, details, tag.makerNote);
  }
  first = firstDirectory(exif);
  if (!first) return undefined;
  const entry = (directory: Directory | undefined, which: number) =>
    directory?.entries.find((candidate) => candidate.tag === which);
  setNumber(exif, entry(first, tag.orientation), 1);
  if (changes.densityPpi) {
    setNumber(exif, entry(first, tag.xResolution), changes.densityPpi);
    setNumber(exif, entry(first, tag.yResolution), changes.densityPpi);
    setNumber(exif, entry(first, tag.resolutionUnit), 2);
  }
  const details = subDirectory(exif, first, tag.exifDirectory);
  setNumber(exif, entry(details, tag.pixelWidth), changes.widthPx);
  setNumber(exif, entry(details, tag.pixelHeight), changes.heightPx);
  const texts: [number, string][] = [];
  if (changes.description) texts.push([tag.imageDescription, changes.description]);
  if (changes.software) texts.push([tag.software, changes.software]);
  return texts.length > 0 ? withTexts(exif, first, texts) : exif.bytes;
}

/** Only true at their own place or size in the photo's file. */
const placeBound = new Set([
  0x0100,
  0x0101,
  0x0102,
  0x0103,
  0x0106,
  0x0111,
  0x0112,
  0x0115,
  0x0116,
  0x0117,
  0x011a,
  0x011b,
  0x011c,
  0x0128,
  0x0213,
  tag.exifDirectory,
  tag.gpsDirectory,
  0xa005,
  tag.makerNote,
  0x8773,
]);

/**
 * The entries of an EXIF block, for a TIFF, which has them in directories of its own.
 * @param block as `exifForPainting` gives it
 */
export function exifFields(block: Uint8Array): {
  main: TiffField[];
  capture: TiffField[];
  place: TiffField[];
} {
  const bytes = new Uint8Array(block);
  const view = new DataView(bytes.buffer);
  const exif: ExifBytes = { bytes, view, littleEndian: bytes[0] === 0x49 };
  const first = readDirectory(exif, view.getUint32(4, exif.littleEndian));
  const fieldsIn = (directory: Directory | undefined) =>
    (directory?.entries ?? [])
      .filter((entry) => !placeBound.has(entry.tag) && bytesOfType[entry.type] !== undefined)
      .map((entry) => fieldOf(exif, entry));
  return {
    main: fieldsIn(first),
    capture: fieldsIn(first && subDirectory(exif, first, tag.exifDirectory)),
    place: fieldsIn(first && subDirectory(exif, first, tag.gpsDirectory)),
  };
}

function fieldOf(
  { bytes, view, littleEndian }: ExifBytes,
  { tag: which, type, count, valueAt }: Entry,
): TiffField {
  const size = bytesOfType[type] ?? 1;
  if (size === 1) return { tag: which, type, values: bytes.slice(valueAt, valueAt + count) };
  const step = size === 2 ? 2 : 4;
  const numbers = Array.from({ length: (count * size) / step }, (_, i) =>
    step === 2
      ? view.getUint16(valueAt + 2 * i, littleEndian)
      : view.getUint32(valueAt + 4 * i, littleEndian),
  );
  return { tag: which, type, values: numbers };
}
