import { endianness } from 'node:os';

/** One entry of a directory (TIFF 6.0, section 2). */
export interface TiffField {
  tag: number;
  type: number;
  /** Bytes as they are, or numbers; fractions are two each. */
  values: number[] | Uint8Array;
}

export const fieldType = { ascii: 2, short: 3, long: 4, rational: 5, undefined: 7 } as const;

/** Bytes of one value, by type; other types are unknown. */
export const bytesOfType: Record<number, number> = {
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

/** Where the pixels of an uncompressed TIFF begin. */
export const tiffPixelsAt = 8;

/** Files are written in the machine's own byte order, so that samples are written as they lie. */
const littleEndian = endianness() === 'LE';

/** The first eight bytes of a TIFF. */
export function tiffHeader(directoryAt: number): Uint8Array {
  const header = Buffer.alloc(tiffPixelsAt);
  header.write(littleEndian ? 'II' : 'MM', 'latin1');
  writeUint16(header, 42, 2);
  writeUint32(header, directoryAt, 4);
  return header;
}

/**
 * A directory with the values that do not fit in their entries behind it.
 * @param fields in the order of their tags, of known types
 * @param at where the directory will lie; even
 */
export function directoryBytes(fields: readonly TiffField[], at: number): Uint8Array {
  const entries = Buffer.alloc(2 + fields.length * 12 + 4);
  writeUint16(entries, fields.length, 0);
  const behind: Uint8Array[] = [];
  let behindAt = at + entries.length;
  fields.forEach((field, k) => {
    const entryAt = 2 + k * 12;
    const value = valueBytes(field);
    writeUint16(entries, field.tag, entryAt);
    writeUint16(entries, field.type, entryAt + 2);
    writeUint32(entries, value.length / bytesOfType[field.type], entryAt + 4);
    if (value.length <= 4) {
      entries.set(value, entryAt + 8);
      return;
    }
    writeUint32(entries, behindAt, entryAt + 8);
    const padded = value.length % 2 === 0 ? value : Buffer.concat([value, Uint8Array.of(0)]);
    behind.push(padded);
    behindAt += padded.length;
  });
  return Buffer.concat([entries, ...behind]);
}

function valueBytes({ type, values }: TiffField): Uint8Array {
  if (values instanceof Uint8Array) return values;
  const isShort = bytesOfType[type] === 2;
  const bytes = Buffer.alloc(values.length * (isShort ? 2 : 4));
  values.forEach((value, k) => {
    if (isShort) writeUint16(bytes, value, k * 2);
    else writeUint32(bytes, value, k * 4);
  });
  return bytes;
}

function writeUint16(bytes: Buffer, value: number, at: number): void {
  if (littleEndian) bytes.writeUInt16LE(value, at);
  else bytes.writeUInt16BE(value, at);
}

function writeUint32(bytes: Buffer, value: number, at: number): void {
  if (littleEndian) bytes.writeUInt32LE(value, at);
  else bytes.writeUInt32BE(value, at);
}
