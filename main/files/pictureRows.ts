import { SpilledPixels } from './spilledPixels.ts';

/** A picture, its pixels in memory or in a temporary file. */
export interface PixelHolder {
  widthPx: number;
  heightPx: number;
  channels: 3 | 4;
  pixels: Uint8Array | Uint16Array | SpilledPixels;
}

/** Rows `top` to `bottom` − 1: a view where the pixels are in memory, else read. */
export async function samplesOf(
  { widthPx, channels, pixels }: PixelHolder,
  top: number,
  bottom: number,
  signal?: AbortSignal,
): Promise<Uint8Array | Uint16Array> {
  if (pixels instanceof SpilledPixels) return pixels.samples(top, bottom - top, signal);
  return pixels.subarray(top * widthPx * channels, bottom * widthPx * channels);
}

/** Bits a sample. */
export function depthOf({ pixels }: Pick<PixelHolder, 'pixels'>): 8 | 16 {
  const bytes = pixels instanceof SpilledPixels ? pixels.bytesPerSample : pixels.BYTES_PER_ELEMENT;
  return bytes === 2 ? 16 : 8;
}
