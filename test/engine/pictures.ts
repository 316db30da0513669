import { readFile } from 'node:fs/promises';
import sharp from 'sharp';
import type { ReferenceImage } from '../../core/kernels/reference/referenceImage.ts';
import { defaultParameters, type Parameters } from '../../core/parameters/table.ts';
import type { DecodedPhoto, Rect, Strata } from '../../core/pixels/photo.ts';
import { testPicture } from '../kernels/testPictures.ts';

/** A picture as a photo holds it; alpha, where there is any, tells the place. */
export function photoOf(image: ReferenceImage, channels: 3 | 4 = 3, depth: 8 | 16 = 8): DecodedPhoto {
  const { widthPx, heightPx } = image;
  const top = depth === 8 ? 255 : 65535;
  const samples = widthPx * heightPx * channels;
  const pixels = depth === 8 ? new Uint8Array(samples) : new Uint16Array(samples);
  for (let i = 0; i < widthPx * heightPx; i++) {
    for (let c = 0; c < 3; c++)
      pixels[i * channels + c] = Math.round(Math.min(1, Math.max(0, image.values[i * 3 + c])) * top);
    if (channels === 4) pixels[i * 4 + 3] = (i * 7) % (top + 1);
  }
  return { widthPx, heightPx, channels, pixels };
}

/** Soft forms, hard edges and some noise, of any size. */
export function testPhoto(widthPx: number, heightPx: number, channels: 3 | 4 = 3, depth: 8 | 16 = 8) {
  return photoOf(testPicture(widthPx, heightPx), channels, depth);
}

/** A photograph from a file, reduced to a width. */
export async function photographAt(path: string, widthPx?: number): Promise<DecodedPhoto> {
  const { data, info } = await sharp(await readFile(path))
    .toColourspace('srgb')
    .removeAlpha()
    .resize(widthPx ? { width: widthPx } : undefined)
    .raw()
    .toBuffer({ resolveWithObject: true });
  return { widthPx: info.width, heightPx: info.height, channels: 3, pixels: new Uint8Array(data) };
}

/** The table's defaults with changes; the line at full strength, so that it is always made. */
export function parametersWith(changes: Partial<Parameters> = {}): Parameters {
  return { ...defaultParameters(), 'line.strength': 1, ...changes };
}

export function sameSamples(a: Uint8Array | Uint16Array, b: Uint8Array | Uint16Array): boolean {
  const bytes = (samples: Uint8Array | Uint16Array) =>
    Buffer.from(samples.buffer, samples.byteOffset, samples.byteLength);
  return a.BYTES_PER_ELEMENT === b.BYTES_PER_ELEMENT && bytes(a).equals(bytes(b));
}

/** Which strata differ, by name: nothing where two paintings are the same to the bit. */
export function differingStrata(a: Strata, b: Strata): string[] {
  return (['ground', 'body', 'line', 'relief'] as const).filter((name) => {
    const [one, other] = [a[name], b[name]];
    return one && other ? !sameSamples(one, other) : one !== other;
  });
}

/** The part of strata inside a rectangle. */
export function cropped(strata: Strata, rect: Rect): Strata {
  const cut = <T extends Uint8Array | Uint16Array>(from: T, channels: number): T => {
    const to = from.slice(0, rect.widthPx * rect.heightPx * channels) as T;
    for (let y = 0; y < rect.heightPx; y++) {
      const start = ((rect.yPx + y) * strata.widthPx + rect.xPx) * channels;
      to.set(from.subarray(start, start + rect.widthPx * channels), y * rect.widthPx * channels);
    }
    return to;
  };
  return {
    widthPx: rect.widthPx,
    heightPx: rect.heightPx,
    ground: cut(strata.ground, strata.groundChannels),
    groundChannels: strata.groundChannels,
    body: cut(strata.body, 3),
    line: cut(strata.line, 1),
    relief: strata.relief && cut(strata.relief, 1),
  };
}
