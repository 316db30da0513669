import { crc32, inflateRawSync } from 'node:zlib';

export interface ZipEntry {
  name: string;
  method: 'stored' | 'deflated';
  bytes: Buffer;
  /** Of the local header. */
  extraBytes: number;
  /** Where the entry begins in the file. */
  at: number;
}

const endSignature = 0x06054b50;
const directorySignature = 0x02014b50;

/** The entries of a zip file in the order of its directory, read by APPNOTE.TXT 6.3; sums and sizes are checked. */
export function readZip(zip: Buffer): ZipEntry[] {
  const endAt = zip.lastIndexOf(Buffer.from('PK\x05\x06', 'latin1'));
  if (endAt < 0 || zip.readUInt32LE(endAt) !== endSignature) throw new Error('no end of the directory');
  const entries: ZipEntry[] = [];
  let at = zip.readUInt32LE(endAt + 16);
  for (let left = zip.readUInt16LE(endAt + 10); left > 0; left--) {
    if (zip.readUInt32LE(at) !== directorySignature) throw new Error(`no entry at ${at}`);
    const method = zip.readUInt16LE(at + 10);
    const [sum, packedBytes, plainBytes] = [16, 20, 24].map((offset) => zip.readUInt32LE(at + offset));
    const [nameBytes, extraBytes, commentBytes] = [28, 30, 32].map((offset) => zip.readUInt16LE(at + offset));
    const localAt = zip.readUInt32LE(at + 42);
    const name = zip.toString('utf8', at + 46, at + 46 + nameBytes);
    const localExtraBytes = zip.readUInt16LE(localAt + 28);
    const dataAt = localAt + 30 + zip.readUInt16LE(localAt + 26) + localExtraBytes;
    const packed = zip.subarray(dataAt, dataAt + packedBytes);
    const bytes = method === 0 ? packed : inflateRawSync(packed);
    if (bytes.length !== plainBytes || crc32(bytes) !== sum) throw new Error(`${name} is damaged`);
    entries.push({
      name,
      method: method === 0 ? 'stored' : 'deflated',
      bytes,
      extraBytes: localExtraBytes,
      at: localAt,
    });
    at += 46 + nameBytes + extraBytes + commentBytes;
  }
  return entries;
}
