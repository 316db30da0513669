import type { Triple } from '../../colour/lab.ts';
import { oklabOfSrgb, srgbOfOklab } from '../../colour/oklab.ts';
import { applyToneMap, type ToneMap } from '../../series/toneMap.ts';

/**
 * Maps a photo colour by colour in double precision.
 * @param samples interleaved, 0..1, 3 or 4 channels; alpha is carried over; not modified
 * @returns as many samples, 0..1, unrounded
 */
export function toneMapReference(samples: ArrayLike<number>, channels: 3 | 4, map: ToneMap): Float64Array {
  const out = Float64Array.from(samples);
  for (let at = 0; at < out.length; at += channels) {
    const colour: Triple = [samples[at], samples[at + 1], samples[at + 2]];
    out.set(srgbOfOklab(applyToneMap(map, oklabOfSrgb(colour))), at);
  }
  return out;
}
