import { crc32, deflateSync } from 'node:zlib';
import type { CarriedParts } from './carriedParts.ts';

function chunk(type: string, ...payload: Uint8Array[]): Uint8Array {
  const typed = Buffer.concat([Buffer.from(type, 'latin1'), ...payload]);
  const whole = Buffer.alloc(typed.length + 8);
  whole.writeUInt32BE(typed.length - 4, 0);
  whole.set(typed, 4);
  whole.writeUInt32BE(crc32(typed), typed.length + 4);
  return whole;
}

function densityChunk(densityPpi: number): Uint8Array {
  const body = Buffer.alloc(9);
  const perMetre = Math.round(densityPpi / 0.0254);
  body.writeUInt32BE(perMetre, 0);
  body.writeUInt32BE(perMetre, 4);
  body.writeUInt8(1, 8);
  return chunk('pHYs', body);
}

function profileChunk(profile: Uint8Array): Uint8Array {
  // Keyword, its end, compression method 0 (PNG, third edition, 11.3.2.3).
  return chunk('iCCP', Buffer.from('profile\0\0', 'latin1'), deflateSync(profile, { level: 9 }));
}

/**
 * A PNG from the encoder with profile, density and EXIF put before its pixels, as pieces to be written one after
 * the other. What the encoder put there of its own is left out, but for the header and a palette.
 */
export function pngWithParts(encoded: Uint8Array, parts: CarriedParts): Uint8Array[] {
  const bytes = Buffer.from(encoded.buffer, encoded.byteOffset, encoded.byteLength);
  const kept: Uint8Array[] = [];
  let at = 8;
  let header: Uint8Array = bytes.subarray(0, 8);
  for (;;) {
    const type = bytes.toString('latin1', at + 4, at + 8);
    if (type === 'IDAT') break;
    const end = at + 12 + bytes.readUInt32BE(at);
    if (type === 'IHDR') header = bytes.subarray(0, end);
    else if (type === 'PLTE' || type === 'tRNS') kept.push(bytes.subarray(at, end));
    at = end;
  }
  const pieces = [header];
  if (parts.iccProfile) pieces.push(profileChunk(parts.iccProfile));
  if (parts.densityPpi) pieces.push(densityChunk(parts.densityPpi));
  if (parts.exif) pieces.push(chunk('eXIf', parts.exif));
  return [...pieces, ...kept, bytes.subarray(at)];
}
