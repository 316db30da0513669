/*
 * From 16 bits to 8 by rounding up or down at random, with the chance that makes the mean right: a ramp ends as a grain
 * of two neighbouring steps instead of bands. The randomness is a hash of the position, so the same picture gives the
 * same bytes everywhere. A number that 8 bits hold exactly stays what it is.
 */

/** A 32-bit hash of a sample's position → 0…256, exclusive (mixing as in C. Wellons' low-bias hash, 2018). */
function chance(x: number, y: number, channel: number): number {
  let bits = (Math.imul(x, 0x9e3779b1) ^ Math.imul(y, 0xc2b2ae3d) ^ Math.imul(channel, 0x27d4eb2f)) >>> 0;
  bits = Math.imul(bits ^ (bits >>> 16), 0x7feb352d);
  bits = Math.imul(bits ^ (bits >>> 15), 0x846ca68b);
  return ((bits ^ (bits >>> 16)) >>> 0) / 2 ** 32;
}

/**
 * @param pixels interleaved, 16 bits
 * @param alphaChannel its number, which is rounded instead; −1 for none
 * @param topRow row of the picture that `pixels` begins with
 */
export function ditherTo8(
  pixels: Uint16Array,
  widthPx: number,
  channels: number,
  alphaChannel = -1,
  topRow = 0,
): Uint8Array {
  const out = new Uint8Array(pixels.length);
  const rowSamples = widthPx * channels;
  for (let at = 0, y = topRow; at < pixels.length; at += rowSamples, y++)
    for (let x = 0, i = at; x < widthPx; x++)
      for (let c = 0; c < channels; c++, i++) {
        const value = pixels[i];
        const low = (value / 257) | 0;
        const rest = value - low * 257;
        if (c === alphaChannel) out[i] = rest > 128 ? low + 1 : low;
        else out[i] = rest > 0 && chance(x, y, c) * 257 < rest ? low + 1 : low;
      }
  return out;
}
