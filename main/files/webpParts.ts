import type { CarriedParts } from './carriedParts.ts';

const flag = { profile: 0x20, alpha: 0x10, exif: 0x08 };

function chunk(type: string, body: Uint8Array): Uint8Array {
  const whole = Buffer.alloc(8 + body.length + (body.length % 2));
  whole.write(type, 0, 'latin1');
  whole.writeUInt32LE(body.length, 4);
  whole.set(body, 8);
  return whole;
}

function headerChunk(widthPx: number, heightPx: number, flags: number): Uint8Array {
  const body = Buffer.alloc(10);
  body.writeUInt8(flags, 0);
  body.writeUIntLE(widthPx - 1, 4, 3);
  body.writeUIntLE(heightPx - 1, 7, 3);
  return chunk('VP8X', body);
}

/**
 * A WebP from the encoder with profile and EXIF, in the extended form of RFC 9649, as pieces to be written one
 * after the other. WebP has no field for density but the EXIF's.
 */
export function webpWithParts(
  encoded: Uint8Array,
  parts: CarriedParts,
  picture: { widthPx: number; heightPx: number; channels: number },
): Uint8Array[] {
  const bytes = Buffer.from(encoded.buffer, encoded.byteOffset, encoded.byteLength);
  const pixelChunks: Uint8Array[] = [];
  for (let at = 12; at + 8 <= bytes.length; ) {
    const type = bytes.toString('latin1', at, at + 4);
    const size = bytes.readUInt32LE(at + 4);
    const end = at + 8 + size + (size % 2);
    if (type === 'ALPH' || type === 'VP8 ' || type === 'VP8L') pixelChunks.push(bytes.subarray(at, end));
    at = end;
  }
  let flags = picture.channels === 4 ? flag.alpha : 0;
  const before: Uint8Array[] = [];
  const after: Uint8Array[] = [];
  if (parts.iccProfile) {
    flags |= flag.profile;
    before.push(chunk('ICCP', parts.iccProfile));
  }
  if (parts.exif) {
    flags |= flag.exif;
    after.push(chunk('EXIF', parts.exif));
  }
  const body = [headerChunk(picture.widthPx, picture.heightPx, flags), ...before, ...pixelChunks, ...after];
  const riff = Buffer.from('RIFF\0\0\0\0WEBP', 'latin1');
  riff.writeUInt32LE(4 + body.reduce((sum, piece) => sum + piece.length, 0), 4);
  return [riff, ...body];
}
