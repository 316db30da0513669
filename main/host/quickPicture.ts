import type { DecodedPhoto } from '../../core/pixels/photo.ts';
import { sharp } from '../files/imageLibrary.ts';
import { swapsEdges, turnUpright } from '../files/orientation.ts';
import { openPhoto, type PhotoHeader, readHeader } from '../files/photoHeader.ts';
import type { PhotoFacts } from './hostParts.ts';

/**
 * Size and kind of a photo from its header.
 * @throws FileError where the file is no photo
 */
export async function readFacts(path: string): Promise<PhotoFacts> {
  const { metadata, ...header } = await headerOf(path);
  const turned = swapsEdges(header.orientation);
  // A JPEG is decoded at a half, a quarter or an eighth by leaving out cosine terms. CMYK needs a conversion
  // of its own and takes the long way.
  const shrinksOnLoad = header.format === 'jpeg' && metadata.channels === 3;
  return {
    widthPx: turned ? header.storedHeightPx : header.storedWidthPx,
    heightPx: turned ? header.storedWidthPx : header.storedHeightPx,
    format: header.format,
    depth: header.depth,
    channels: metadata.hasAlpha ? 4 : 3,
    densityPpi: metadata.density && metadata.density !== 72 ? metadata.density : null,
    shrinksOnLoad,
  };
}

/**
 * A quick decode of a JPEG at 1/2^`level` of its size, upright, the numbers of the file.
 *
 * Its pixels differ a little from those of the pyramid, so it serves only for the first moments.
 */
export async function readQuick(
  path: string,
  _facts: PhotoFacts,
  level: number,
): Promise<DecodedPhoto | null> {
  const header = await headerOf(path);
  const { data, info } = await sharp(path, { failOn: 'truncated', limitInputPixels: false, ignoreIcc: true })
    .resize({
      width: Math.ceil(header.storedWidthPx / 2 ** level),
      height: Math.ceil(header.storedHeightPx / 2 ** level),
      fit: 'fill',
      kernel: 'linear',
    })
    .raw()
    .toBuffer({ resolveWithObject: true });
  if (info.channels !== 3) return null;
  const stored = {
    pixels: new Uint8Array(data.buffer, data.byteOffset, data.byteLength),
    widthPx: info.width,
    heightPx: info.height,
    channels: 3,
  };
  const { pixels, widthPx, heightPx } = await turnUpright(stored, header.orientation);
  return { pixels, widthPx, heightPx, channels: 3 };
}

async function headerOf(path: string): Promise<PhotoHeader> {
  const { format } = await openPhoto(path, { wholeFile: false });
  return readHeader(path, { format, source: path });
}
