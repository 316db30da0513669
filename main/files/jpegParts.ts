import type { CarriedParts } from './carriedParts.ts';

const mark = {
  startOfImage: 0xd8,
  app0: 0xe0,
  app1: 0xe1,
  app2: 0xe2,
  app14: 0xee,
  app15: 0xef,
  comment: 0xfe,
};
const longestPayload = 0xffff - 2;

function segment(marker: number, ...payload: Uint8Array[]): Uint8Array {
  const body = Buffer.concat(payload);
  const head = Buffer.from([0xff, marker, 0, 0]);
  head.writeUInt16BE(body.length + 2, 2);
  return Buffer.concat([head, body]);
}

function jfifSegment(densityPpi: number | undefined): Uint8Array {
  const body = Buffer.from('JFIF\0\x01\x02\0\0\x01\0\x01\0\0', 'latin1');
  if (densityPpi) {
    const perInch = 1;
    const density = Math.max(1, Math.min(0xffff, Math.round(densityPpi)));
    body.writeUInt8(perInch, 7);
    body.writeUInt16BE(density, 8);
    body.writeUInt16BE(density, 10);
  }
  return segment(mark.app0, body);
}

/** A profile longer than one segment is cut into numbered pieces (ICC.1, annex B). */
function profileSegments(profile: Uint8Array): Uint8Array[] {
  const name = Buffer.from('ICC_PROFILE\0', 'latin1');
  const pieceBytes = longestPayload - name.length - 2;
  const pieces = Math.ceil(profile.length / pieceBytes);
  return Array.from({ length: pieces }, (_, k) =>
    segment(
      mark.app2,
      name,
      Uint8Array.of(k + 1, pieces),
      profile.subarray(k * pieceBytes, (k + 1) * pieceBytes),
    ),
  );
}

/** The longest profile and EXIF block a JPEG can carry. */
export const jpegLimits = { profileBytes: 255 * (longestPayload - 14), exifBytes: longestPayload - 6 };

/**
 * A JPEG from the encoder with density, EXIF and profile put before its pixels, as pieces to be written one
 * after the other: the compressed pixels are not copied.
 */
export function jpegWithParts(encoded: Uint8Array, parts: CarriedParts): Uint8Array[] {
  const pieces = [encoded.subarray(0, 2), jfifSegment(parts.densityPpi)];
  let at = 2;
  while (encoded[at] === 0xff && encoded[at + 1] >= mark.app0 && encoded[at + 1] <= mark.app15) {
    const end = at + 2 + ((encoded[at + 2] << 8) | encoded[at + 3]);
    // Tells readers how colours were coded (ITU-T T.872); of four inks, that 0 is full ink, as is usual.
    if (encoded[at + 1] === mark.app14) pieces.push(encoded.subarray(at, end));
    at = end;
  }
  if (parts.exif) pieces.push(segment(mark.app1, Buffer.from('Exif\0\0', 'latin1'), parts.exif));
  if (parts.iccProfile) pieces.push(...profileSegments(parts.iccProfile));
  pieces.push(encoded.subarray(at));
  return pieces;
}
