import { readFile } from 'node:fs/promises';
import sharp from 'sharp';
import { linearOfSrgb, srgbOfLinear } from '../../core/colour/lab.ts';
import type { DecodedPhoto } from '../../core/pixels/photo.ts';
import { seededNormal } from '../kernels/testPictures.ts';

/** How a frame differs from the photograph that the whole series is made from. */
export interface Variation {
  longEdgePx: number;
  /** Exposure in steps of two, in linear light; what goes beyond white is clipped. */
  exposureEv: number;
  /** Colour temperature of the cast: about that many kelvin from daylight, warm above 0. */
  castK: number;
  /** Deviation of the noise, of 255, added to the encoded values. */
  noise255: number;
}

/** Factors on linear red and blue, relative to green, of daylight that is some kelvin warmer or cooler: near 5500 K
 * the ratio of red to blue changes by about a quarter for 1000 K (from the chromaticities of CIE daylight). */
function castFactors(castK: number): [number, number, number] {
  const share = castK / 1000;
  return [2 ** (0.14 * share), 1, 2 ** (-0.19 * share)];
}

/** A frame of 8 bits; the same every time. */
export async function variedFrame(path: string, variation: Variation, seed: number): Promise<DecodedPhoto> {
  const { longEdgePx, exposureEv, castK, noise255 } = variation;
  const { data, info } = await sharp(await readFile(path))
    .toColourspace('srgb')
    .removeAlpha()
    .resize({ width: longEdgePx, height: longEdgePx, fit: 'inside' })
    .raw()
    .toBuffer({ resolveWithObject: true });
  const factors = castFactors(castK);
  const tables = factors.map((factor) =>
    Float64Array.from({ length: 256 }, (_, value) => {
      const linear = linearOfSrgb(value / 255) * factor * 2 ** exposureEv;
      return srgbOfLinear(Math.min(1, linear)) * 255;
    }),
  );
  const normal = seededNormal(seed);
  const pixels = new Uint8Array(data.length);
  for (let i = 0; i < data.length; i++) {
    const value = tables[i % 3][data[i]] + (noise255 > 0 ? noise255 * normal() : 0);
    pixels[i] = Math.min(255, Math.max(0, Math.round(value)));
  }
  return { widthPx: info.width, heightPx: info.height, channels: 3, pixels };
}
