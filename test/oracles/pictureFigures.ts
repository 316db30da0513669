// Figures of a finished picture of 8 bits, in plain code that shares nothing with the project's own measuring.
import sharp from 'sharp';
import type { DecodedPhoto } from '../../core/pixels/photo.ts';
import { paintFigures } from './paintFigures.ts';

export interface PictureFigures {
  meanL: number;
  meanA: number;
  meanB: number;
  deviationL: number;
  /** Share of flat pixels of the file's own pixels. */
  flatShare: number;
  /** The same once reduced to a common long edge. */
  flatShareReduced: number;
}

/** L*, a*, b* under D65 of an 8-bit sRGB colour (IEC 61966-2-1, CIE 15), with a table for the transfer. */
const decoded = Float64Array.from({ length: 256 }, (_, code) => {
  const value = code / 255;
  return value > 0.04045 ? Math.pow((value + 0.055) / 1.055, 2.4) : value / 12.92;
});
const root = (t: number) => (t > 216 / 24389 ? Math.cbrt(t) : ((24389 / 27) * t + 16) / 116);

export async function pictureFigures(picture: DecodedPhoto, commonEdgePx: number): Promise<PictureFigures> {
  const { pixels, channels } = picture;
  const count = picture.widthPx * picture.heightPx;
  let [sumL, sumA, sumB, squares] = [0, 0, 0, 0];
  for (let i = 0; i < count; i++) {
    const [r, g, b] = [0, 1, 2].map((c) => decoded[pixels[i * channels + c]]);
    const x = root((0.4124 * r + 0.3576 * g + 0.1805 * b) / 0.9505);
    const y = root(0.2126 * r + 0.7152 * g + 0.0722 * b);
    const z = root((0.0193 * r + 0.1192 * g + 0.9505 * b) / 1.089);
    const l = 116 * y - 16;
    sumL += l;
    squares += l * l;
    sumA += 500 * (x - y);
    sumB += 200 * (y - z);
  }
  const meanL = sumL / count;
  return {
    meanL,
    meanA: sumA / count,
    meanB: sumB / count,
    deviationL: Math.sqrt(Math.max(0, squares / count - meanL * meanL)),
    flatShare: paintFigures(picture).flatShare,
    flatShareReduced: paintFigures(await reducedPicture(picture, commonEdgePx)).flatShare,
  };
}

async function reducedPicture(picture: DecodedPhoto, longEdgePx: number): Promise<DecodedPhoto> {
  const { widthPx: width, heightPx: height, channels, pixels } = picture;
  const { data, info } = await sharp(pixels as Uint8Array, { raw: { width, height, channels } })
    .resize({ width: longEdgePx, height: longEdgePx, fit: 'inside' })
    .raw()
    .toBuffer({ resolveWithObject: true });
  return { widthPx: info.width, heightPx: info.height, channels, pixels: new Uint8Array(data) };
}

/** Standard deviation over frames. */
export function spreadOf(values: readonly number[]): number {
  const mean = values.reduce((sum, value) => sum + value, 0) / values.length;
  return Math.sqrt(values.reduce((sum, value) => sum + (value - mean) ** 2, 0) / values.length);
}
