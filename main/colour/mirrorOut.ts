/**
 * A picture with a margin on every side that mirrors it at its edge; the edge itself is repeated once. A margin wider
 * than the picture goes on mirroring.
 * @param pixels interleaved; not modified
 */
export function mirrorOut<Samples extends Uint8Array | Uint16Array>(
  pixels: Samples,
  widthPx: number,
  heightPx: number,
  channels: number,
  marginPx: number,
): Samples {
  const outWidth = widthPx + 2 * marginPx;
  const outHeight = heightPx + 2 * marginPx;
  const out = new (pixels.constructor as new (length: number) => Samples)(outWidth * outHeight * channels);
  const rowSamples = widthPx * channels;
  for (let y = 0; y < outHeight; y++) {
    const from = mirrored(y - marginPx, heightPx) * rowSamples;
    const to = y * outWidth * channels;
    out.set(pixels.subarray(from, from + rowSamples), to + marginPx * channels);
    for (let x = 0; x < marginPx; x++) {
      copyPixel(pixels, from + mirrored(x - marginPx, widthPx) * channels, out, to + x * channels, channels);
      const right = marginPx + widthPx + x;
      copyPixel(
        pixels,
        from + mirrored(widthPx + x, widthPx) * channels,
        out,
        to + right * channels,
        channels,
      );
    }
  }
  return out;
}

function copyPixel(
  from: Uint8Array | Uint16Array,
  at: number,
  to: Uint8Array | Uint16Array,
  out: number,
  channels: number,
): void {
  for (let c = 0; c < channels; c++) to[out + c] = from[at + c];
}

/** Where a place outside of 0…size − 1 lies when the picture is folded at its edges. */
function mirrored(place: number, size: number): number {
  const period = 2 * size;
  const folded = ((place % period) + period) % period;
  return folded < size ? folded : period - 1 - folded;
}
