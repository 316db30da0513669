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
};
const bytesPerValue: Record<number, number> = {
  1: 1,
  2: 1,
  3: 2,
  4: 4,
  5: 8,
  6: 1,
  7: 1,
  8: 2,
  9: 4,
  10: 8,
  11: 4,
  12: 8,
};
const shortType = 3;
const longType = 4;
const rationalType = 5;

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
    const size = (bytesPerValue[type] ?? 1) * valueCount;
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
      exif.bytes.fill(0, valueAt, valueAt + (bytesPerValue[type] ?? 1) * count);
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
  /** Where the photo was taken stays out unless asked for. */
  keepLocation?: boolean;
}

const prefix = 'Exif\0\0';

/** The TIFF inside an EXIF block, without the "Exif" mark that JPEG puts before it. */
export function withoutExifMark(block: Uint8Array): Uint8Array {
  const marked = Buffer.from(block.subarray(0, prefix.length)).toString('latin1') === prefix;
  return marked ? block.subarray(prefix.length) : block;
}

/**
 * A copy of the photo's EXIF that is true of the painting: upright, its own size and density, no thumbnail of
 * the photo, no location.
 * @returns the TIFF without the "Exif" mark, or undefined where the block cannot be understood
 */
export function exifForPainting(block: Uint8Array, changes: ExifChanges): Uint8Array | undefined {
  const bytes = new Uint8Array(withoutExifMark(block));
  const mark = Buffer.from(bytes.subarray(0, 4)).toString('latin1');
  if (bytes.length < 14 || (mark !== 'II*\0' && mark !== 'MM\0*')) return undefined;
  const view = new DataView(bytes.buffer);
  const exif: ExifBytes = { bytes, view, littleEndian: mark.startsWith('II') };
  const read = () => readDirectory(exif, view.getUint32(4, exif.littleEndian));
  let first = read();
  if (!first) return undefined;
  removeThumbnail(exif, first);
  if (!changes.keepLocation) removeSubDirectory(exif, first, tag.gpsDirectory);
  first = read();
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
  return bytes;
}
