/** Where trim marks go, in pixels. Lengths are common practice of the printing trade. */
export interface TrimMarks {
  /** White margin around everything, bleed included. */
  slugPx: number;
  /** From the outer edge inwards, short of the bleed. */
  lengthPx: number;
  linePx: number;
  /** Bleed on every side: the marks stand where the paper is to be cut. */
  bleedPx: number;
}

/**
 * A picture on a white margin with a pair of lines at each corner, where it is to be trimmed.
 * @param paper one pixel of blank paper
 * @param ink one pixel of the marks
 */
export function withTrimMarks<Samples extends Uint8Array | Uint16Array>(
  pixels: Samples,
  widthPx: number,
  heightPx: number,
  { slugPx, lengthPx, linePx, bleedPx }: TrimMarks,
  paper: readonly number[],
  ink: readonly number[],
): Samples {
  const channels = paper.length;
  const outWidth = widthPx + 2 * slugPx;
  const outHeight = heightPx + 2 * slugPx;
  const out = new (pixels.constructor as new (length: number) => Samples)(outWidth * outHeight * channels);
  const fill = (x0: number, y0: number, width: number, height: number, pixel: readonly number[]) => {
    for (let y = y0; y < y0 + height; y++)
      for (let x = x0; x < x0 + width; x++)
        for (let c = 0; c < channels; c++) out[(y * outWidth + x) * channels + c] = pixel[c];
  };
  fill(0, 0, outWidth, outHeight, paper);
  const rowSamples = widthPx * channels;
  for (let y = 0; y < heightPx; y++)
    out.set(
      pixels.subarray(y * rowSamples, (y + 1) * rowSamples),
      ((y + slugPx) * outWidth + slugPx) * channels,
    );
  const inset = slugPx + bleedPx;
  // A line's middle stands on the cut.
  const half = Math.floor(linePx / 2);
  for (const x of [inset, outWidth - inset])
    for (const y of [0, outHeight - lengthPx]) fill(x - half, y, linePx, lengthPx, ink);
  for (const y of [inset, outHeight - inset])
    for (const x of [0, outWidth - lengthPx]) fill(x, y - half, lengthPx, linePx, ink);
  return out;
}
