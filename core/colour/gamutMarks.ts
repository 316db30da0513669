import { throughTable } from './colourTable.ts';

/** A colour that printing moves by more than this (CIE 1976 colour difference) lies outside of what it can show. */
export const visibleDifference = 4;

/** How finely a table of a printing condition tells differences: so many of its numbers to a difference of one. */
export const numbersPerDifference = 16;

const leastOutside = visibleDifference * numbersPerDifference;

/**
 * Marks the pixels whose colours a printing condition cannot show.
 * @param rgba R, G, B, A of 8 bits in the photo's own colours; made into differences, so that it holds no colours after
 * @param table `colourTableSide`³ points, each number a difference times `numbersPerDifference`; not modified
 * @param marks one number a pixel: 1 outside, 0 inside or where nothing covers the ground
 * @returns how many are marked
 */
export function markOutside(
  rgba: Uint8Array | Uint8ClampedArray,
  table: Uint16Array,
  marks: Uint8Array,
): number {
  throughTable(rgba, table);
  let count = 0;
  for (let i = 0; i < marks.length; i++) {
    const isOutside = rgba[i * 4] > leastOutside && rgba[i * 4 + 3] > 0;
    marks[i] = isOutside ? 1 : 0;
    if (isOutside) count += 1;
  }
  return count;
}
