import { conesOfLinearSrgb, linearSrgbOfCones, oklabOfRoots, rootsOfOklab } from '../colour/oklab.ts';
import type { ToneMap } from '../series/toneMap.ts';

/** Floats that the tone kernel reads. */
export const toneSettingsCount = 30;

/**
 * Writes what the tone kernel needs: a map of Oklab colours becomes one of the cone responses' cube roots,
 * R⁻¹·matrix·R and R⁻¹·offset. Additions and multiplications only: the same numbers on every machine.
 * @param settings `toneSettingsCount` float32 in the kernels' memory
 */
export function writeToneSettings(settings: Float32Array, map: ToneMap): void {
  const ofRoots = product(rootsOfOklab, product(map.matrix, oklabOfRoots));
  const offset = rootsOfOklab.map(
    (row) => row[0] * map.offset[0] + row[1] * map.offset[1] + row[2] * map.offset[2],
  );
  settings.set([...conesOfLinearSrgb.flat(), ...ofRoots.flat(), ...offset, ...linearSrgbOfCones.flat()]);
}

type Rows = readonly (readonly number[])[];

function product(left: Rows, right: Rows): number[][] {
  return left.map((row) =>
    [0, 1, 2].map(
      (column) => row[0] * right[0][column] + row[1] * right[1][column] + row[2] * right[2][column],
    ),
  );
}
