import { colourTableSide, tableNumber } from '../../core/colour/colourTable.ts';
import { srgbOfLinear } from '../../core/colour/lab.ts';
import { linearFromConnection, p3Primaries, srgbPrimaries } from '../../core/colour/matrixProfile.ts';
import type { ColourEngine } from './colourEngine.ts';

/** Spaces that a canvas can have; both have the tone curve of sRGB. */
export type ScreenSpace = 'srgb' | 'p3';

/**
 * Profiles of one space round their numbers differently, which shows most where a channel is nearly dark beside a strong
 * one: there, up to one step and a half of 8 bits.
 */
const sameWithin = 1.5;

/**
 * The way from a photo's RGB to the screen's as a table for `throughTable`, for previews: R fastest, then G, then B.
 * Colours that the screen cannot show are kept as numbers below 0 or above 255, to be cut off after interpolation.
 * @returns null where the profile is that of the screen's space as far as 8 bits can tell
 */
export function screenTable(
  engine: ColourEngine,
  profile: Uint8Array,
  screen: ScreenSpace,
): Uint16Array | null {
  const asked = gridColours();
  const measured = engine.measureRgb(profile, asked);
  const rows = linearFromConnection(screen === 'p3' ? p3Primaries : srgbPrimaries);
  const table = new Uint16Array(asked.length);
  let isSame = true;
  for (let i = 0; i < asked.length; i += 3)
    for (let c = 0; c < 3; c++) {
      const [x, y, z] = rows[c];
      const linear = x * measured[i] + y * measured[i + 1] + z * measured[i + 2];
      const shown = 255 * Math.sign(linear) * srgbOfLinear(Math.abs(linear));
      table[i + c] = tableNumber(shown);
      if (Math.abs(Math.max(0, shown) - 255 * asked[i + c]) > sameWithin) isSame = false;
    }
  return isSame ? null : table;
}

/** The points of a colour table, R fastest, as RGB 0…1. */
export function gridColours(): Float32Array {
  const side = colourTableSide;
  return Float32Array.from({ length: side ** 3 * 3 }, (_, i) => {
    const point = Math.floor(i / 3);
    const place = [point % side, Math.floor(point / side) % side, Math.floor(point / side ** 2)];
    return place[i % 3] / (side - 1);
  });
}
