import type { Sharp } from 'sharp';
import { sharp } from '../imageLibrary.ts';
import { unlessAborted } from '../interruption.ts';
import { pngWithParts } from '../pngParts.ts';
import { SpilledPixels } from '../spilledPixels.ts';
import type { LayeredPicture } from './layeredPicture.ts';

const longestEdgePx = 256;

/** The composite as an sRGB PNG of 8 bits, at most 256 pixels an edge, never enlarged. */
export async function thumbnailPng(
  { widthPx, heightPx, composed, iccProfile }: LayeredPicture,
  signal?: AbortSignal,
): Promise<Uint8Array> {
  const { pixels, channels } = composed;
  const whole =
    pixels instanceof SpilledPixels
      ? sharp(pixels.file.path, { limitInputPixels: false, sequentialRead: true, ignoreIcc: true })
      : sharp(pixels, { raw: { width: widthPx, height: heightPx, channels }, limitInputPixels: false });
  const is16Bit =
    pixels instanceof SpilledPixels ? pixels.bytesPerSample === 2 : pixels.BYTES_PER_ELEMENT === 2;
  const fitted = whole.resize(longestEdgePx, longestEdgePx, { fit: 'inside', withoutEnlargement: true });
  const small = await packed(is16Bit ? fitted.toColourspace('rgb16') : fitted, signal);
  // Now that it is small it is told its profile, through which the library goes to sRGB.
  const described = Buffer.concat(pngWithParts(small, { iccProfile }));
  return packed(sharp(described).toColourspace('srgb'), signal);
}

function packed(image: Sharp, signal?: AbortSignal): Promise<Buffer> {
  return unlessAborted(image.png({ compressionLevel: 6 }).toBuffer(), signal);
}
