import { describe, expect, it } from 'vitest';
import { exifForPainting } from '../../main/files/exifBlock.ts';
import { copyrightText, exifOfCamera, latitude, thumbnailBytes } from '../fixtures/exifOfCamera.ts';

/** Reads one number of the first directory, or of the directory that `via` leads to. */
function numberIn(block: Uint8Array, tag: number, via?: number): number | undefined {
  const view = new DataView(block.buffer, block.byteOffset, block.byteLength);
  const little = block[0] === 0x49;
  const find = (at: number, wanted: number) => {
    for (let k = 0; k < view.getUint16(at, little); k++) {
      const entry = at + 2 + k * 12;
      if (view.getUint16(entry, little) !== wanted) continue;
      const type = view.getUint16(entry + 2, little);
      if (type === 3) return view.getUint16(entry + 8, little);
      const value = view.getUint32(entry + 8, little);
      return type === 5 ? view.getUint32(value, little) / view.getUint32(value + 4, little) : value;
    }
    return undefined;
  };
  const first = view.getUint32(4, little);
  if (via === undefined) return find(first, tag);
  const directory = find(first, via);
  return directory === undefined ? undefined : find(directory, tag);
}

function latitudeBytes(bigEndian: boolean): Buffer {
  const bytes = Buffer.alloc(latitude.length * 4);
  latitude.forEach((n, k) => {
    if (bigEndian) bytes.writeUInt32BE(n, k * 4);
    else bytes.writeUInt32LE(n, k * 4);
  });
  return bytes;
}

describe.each([false, true])('EXIF of a painting (big-endian: %s)', (bigEndian) => {
  const original = exifOfCamera({ orientation: 6, widthPx: 60, heightPx: 40, bigEndian });
  const changes = { widthPx: 40, heightPx: 60, densityPpi: 300 };
  const painted = exifForPainting(original, changes)!;

  it('is upright, with its own size and density', () => {
    expect(numberIn(original, 0x0112)).toBe(6);
    expect(numberIn(painted, 0x0112)).toBe(1);
    expect(numberIn(painted, 0xa002, 0x8769)).toBe(40);
    expect(numberIn(painted, 0xa003, 0x8769)).toBe(60);
    expect(numberIn(painted, 0x011a)).toBe(300);
  });

  it('keeps copyright and capture time', () => {
    const text = Buffer.from(painted).toString('latin1');
    expect(text).toContain(copyrightText);
    expect(text).toContain('2024:05:17 06:41:00');
  });

  it('tells the place only when asked', () => {
    const place = latitudeBytes(bigEndian);
    expect(original.includes(place)).toBe(true);
    expect(Buffer.from(painted).includes(place)).toBe(false);
    expect(numberIn(painted, 0x8825)).toBeUndefined();
    const withPlace = exifForPainting(original, { ...changes, metadata: 'all' })!;
    expect(Buffer.from(withPlace).includes(place)).toBe(true);
    expect(numberIn(withPlace, 0x8825)).toBeGreaterThan(0);
  });

  it('shows no thumbnail of the photo', () => {
    expect(original.includes(thumbnailBytes)).toBe(true);
    expect(Buffer.from(painted).includes(thumbnailBytes)).toBe(false);
  });

  it('leaves the block it was given alone, and takes it with the JPEG mark', () => {
    const before = Buffer.from(original);
    const marked = Buffer.concat([Buffer.from('Exif\0\0', 'latin1'), original]);
    expect(Buffer.compare(exifForPainting(marked, changes)!, painted)).toBe(0);
    expect(Buffer.compare(original, before)).toBe(0);
  });

  it('survives truncation at every byte and damage in every byte', () => {
    for (let length = 0; length < original.length; length++)
      exifForPainting(original.subarray(0, length), changes);
    for (let at = 0; at < original.length; at++)
      for (const value of [0, 0x7f, 0xff]) {
        const damaged = Buffer.from(original);
        damaged[at] = value;
        const result = exifForPainting(damaged, changes);
        expect(result === undefined || result.length === original.length).toBe(true);
      }
    expect(exifForPainting(Buffer.from('not EXIF at all'), changes)).toBeUndefined();
  });
});
