import { open } from 'node:fs/promises';
import { bytesOfType, directoryBytes, fieldType, type TiffField, tiffHeader } from './tiffDirectory.ts';

// The image library hands out the EXIF block of every format but TIFF, where it lies spread over the file's own
// directories.

/** A file as whole or by pieces. */
type Source = Uint8Array | string;
type ReadPiece = (at: number, bytes: number) => Promise<Uint8Array>;

const directoryTag = { exif: 34665, gps: 34853 } as const;
const makerNoteTag = 0x927c;
const interoperabilityTag = 0xa005;
/** Description, maker, model, software, date, artist, copyright (TIFF 6.0, section 8). */
const described = new Set([270, 271, 272, 305, 306, 315, 33432]);
/** Nobody's name is longer; a damaged file may claim any length. */
const longestValueBytes = 64 * 1024;
const mostEntries = 4096;

/**
 * What a TIFF says of its picture, as an EXIF block: authors, camera and date, capture data, place. Maker's notes are
 * left, for their offsets mean places in the file.
 * @returns undefined where it says nothing, or cannot be understood
 */
export async function readTiffExif(source: Source): Promise<Uint8Array | undefined> {
  if (typeof source !== 'string') return exifOf(async (at, bytes) => source.subarray(at, at + bytes));
  const file = await open(source, 'r');
  try {
    return await exifOf(async (at, bytes) => {
      const piece = new Uint8Array(bytes);
      const { bytesRead } = await file.read(piece, 0, bytes, at);
      return piece.subarray(0, bytesRead);
    });
  } finally {
    await file.close();
  }
}

async function exifOf(read: ReadPiece): Promise<Uint8Array | undefined> {
  try {
    const directories = await TiffDirectories.begin(read);
    const first = await directories.fields(directories.firstAt);
    const main = first.filter(({ tag }) => described.has(tag));
    const behind = async (tag: number) => {
      const pointer = first.find((field) => field.tag === tag)?.values[0];
      return pointer ? directories.fields(pointer) : [];
    };
    const capture = (await behind(directoryTag.exif)).filter(
      ({ tag }) => tag !== makerNoteTag && tag !== interoperabilityTag,
    );
    const place = await behind(directoryTag.gps);
    return main.length + capture.length + place.length > 0 ? blockOf(main, capture, place) : undefined;
  } catch (failure) {
    if (failure instanceof RangeError) return undefined;
    throw failure;
  }
}

/** Walks the directories of a TIFF or BigTIFF. @throws RangeError where one lies outside of the file */
class TiffDirectories {
  private constructor(
    private readonly read: ReadPiece,
    private readonly isLittle: boolean,
    private readonly isBig: boolean,
    readonly firstAt: number,
  ) {}

  static async begin(read: ReadPiece): Promise<TiffDirectories> {
    const head = viewOf(await read(0, 16));
    const isLittle = head.getUint8(0) === 0x49;
    const isBig = head.getUint16(2, isLittle) === 43;
    const firstAt = isBig ? Number(head.getBigUint64(8, isLittle)) : head.getUint32(4, isLittle);
    return new TiffDirectories(read, isLittle, isBig, firstAt);
  }

  async fields(at: number): Promise<TiffField[]> {
    const { isLittle, isBig, read } = this;
    const countBytes = isBig ? 8 : 2;
    const entryBytes = isBig ? 20 : 12;
    const head = viewOf(await read(at, countBytes));
    const count = isBig ? Number(head.getBigUint64(0, isLittle)) : head.getUint16(0, isLittle);
    if (count > mostEntries) throw new RangeError(`Expected some entries, received ${count}`);
    const entries = viewOf(await read(at + countBytes, count * entryBytes));
    const fields: TiffField[] = [];
    for (let entryAt = 0; entryAt < count * entryBytes; entryAt += entryBytes) {
      const field = await this.#field(entries, entryAt);
      if (field) fields.push(field);
    }
    return fields;
  }

  async #field(entries: DataView, at: number): Promise<TiffField | null> {
    const { isLittle, isBig, read } = this;
    const tag = entries.getUint16(at, isLittle);
    const type = entries.getUint16(at + 2, isLittle);
    const count = isBig
      ? Number(entries.getBigUint64(at + 4, isLittle))
      : entries.getUint32(at + 4, isLittle);
    const isPointer = tag === directoryTag.exif || tag === directoryTag.gps;
    // Pointers come as whole numbers of 32 or 64 bits, or as types of their own (13, 18).
    const valueAt = at + (isBig ? 12 : 8);
    if (isPointer) return { tag, type: fieldType.long, values: [this.#offset(entries, valueAt)] };
    const bytes = (bytesOfType[type] ?? 0) * count;
    if (bytes === 0 || bytes > longestValueBytes) return null;
    if (bytes <= (isBig ? 8 : 4)) return { tag, type, values: this.#values(entries, valueAt, type, bytes) };
    const value = viewOf(await read(this.#offset(entries, valueAt), bytes));
    return value.byteLength === bytes ? { tag, type, values: this.#values(value, 0, type, bytes) } : null;
  }

  #offset(view: DataView, at: number): number {
    return this.isBig ? Number(view.getBigUint64(at, this.isLittle)) : view.getUint32(at, this.isLittle);
  }

  #values(view: DataView, at: number, type: number, bytes: number): TiffField['values'] {
    const size = bytesOfType[type];
    if (size === 1) return new Uint8Array(view.buffer, view.byteOffset + at, bytes).slice();
    const step = size === 2 ? 2 : 4;
    // A number of eight bytes is stored as two of four, in the order of the file's bytes.
    const isSwapped = type === 12 && this.isLittle !== machineIsLittle;
    const numbers = Array.from({ length: bytes / step }, (_, i) => {
      const from = at + step * (isSwapped ? i ^ 1 : i);
      return step === 2 ? view.getUint16(from, this.isLittle) : view.getUint32(from, this.isLittle);
    });
    return numbers;
  }
}

const machineIsLittle = new Uint8Array(Uint16Array.of(1).buffer)[0] === 1;

function viewOf(bytes: Uint8Array): DataView {
  return new DataView(bytes.buffer, bytes.byteOffset, bytes.byteLength);
}

function blockOf(
  main: readonly TiffField[],
  capture: readonly TiffField[],
  place: readonly TiffField[],
): Uint8Array {
  const pieces: Uint8Array[] = [];
  let at = tiffHeader(0).length;
  const pointers: TiffField[] = [];
  for (const [tag, fields] of [
    [directoryTag.exif, capture],
    [directoryTag.gps, place],
  ] as const) {
    if (fields.length === 0) continue;
    pointers.push({ tag, type: fieldType.long, values: [at] });
    const bytes = directoryBytes(inOrder(fields), at);
    pieces.push(bytes);
    at += bytes.length;
  }
  pieces.push(directoryBytes(inOrder([...main, ...pointers]), at));
  return new Uint8Array(Buffer.concat([tiffHeader(at), ...pieces]));
}

function inOrder(fields: readonly TiffField[]): TiffField[] {
  return [...fields].sort((a, b) => a.tag - b.tag);
}
