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
  // Down to 8 bits without a profile: with one, the library goes through another space at 16.
  const fitted = whole
    .resize(longestEdgePx, longestEdgePx, { fit: 'inside', withoutEnlargement: true })
    .toColourspace('srgb');
  const small = await packed(fitted, signal);
  // Now that it is small it is told its profile, through which the library goes to sRGB.
  const described = Buffer.concat(pngWithParts(small, { iccProfile }));
  return packed(sharp(described).withIccProfile('srgb'), signal);
}

function packed(image: Sharp, signal?: AbortSignal): Promise<Buffer> {
  return unlessAborted(image.png({ compressionLevel: 6 }).toBuffer(), signal);
}
