/** A picture for the plain versions of the kernels: float64 samples, interleaved, rows without padding. */
export interface ReferenceImage {
  widthPx: number;
  heightPx: number;
  /** Samples a pixel: 3 for R, G, B; 1 for a plane. */
  channels: number;
  values: Float64Array;
}

/**
 * A picture of one value everywhere.
 * @param channels samples a pixel
 */
export function blankImage(widthPx: number, heightPx: number, channels: number, value = 0): ReferenceImage {
  return { widthPx, heightPx, channels, values: new Float64Array(widthPx * heightPx * channels).fill(value) };
}

/**
 * A picture from a formula.
 * @param valueAt value of one sample of the pixel (x, y)
 */
export function imageOf(
  widthPx: number,
  heightPx: number,
  channels: number,
  valueAt: (x: number, y: number, channel: number) => number,
): ReferenceImage {
  const image = blankImage(widthPx, heightPx, channels);
  for (let y = 0; y < heightPx; y++)
    for (let x = 0; x < widthPx; x++)
      for (let c = 0; c < channels; c++) image.values[(y * widthPx + x) * channels + c] = valueAt(x, y, c);
  return image;
}

/**
 * One sample. Border: replicate.
 * @param image not modified
 * @param x may lie outside the picture, as may `y`
 */
export function sampleAt(image: ReferenceImage, x: number, y: number, channel = 0): number {
  const column = Math.min(Math.max(x, 0), image.widthPx - 1);
  const row = Math.min(Math.max(y, 0), image.heightPx - 1);
  return image.values[(row * image.widthPx + column) * image.channels + channel];
}

/**
 * One sample between pixels, bilinear; whole numbers are pixel centres. Border: replicate.
 * @param image not modified
 */
export function sampleBetween(image: ReferenceImage, x: number, y: number, channel = 0): number {
  const left = Math.floor(x);
  const top = Math.floor(y);
  const u = x - left;
  const v = y - top;
  return (
    (1 - v) * ((1 - u) * sampleAt(image, left, top, channel) + u * sampleAt(image, left + 1, top, channel)) +
    v * ((1 - u) * sampleAt(image, left, top + 1, channel) + u * sampleAt(image, left + 1, top + 1, channel))
  );
}
