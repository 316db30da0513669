/** Points along each side of a colour table. */
export const colourTableSide = 33;

/**
 * Colours of a table reach from this far below 0 to three times as far above: beyond what a screen can show they go on,
 * and are cut off only between the points. A table of colours already cut off would round the edge away.
 */
const reach = 256;
/** Steps of a table's numbers to one of the screen's. */
const fineness = 64;
const fineBits = 14;

/** How a table holds a number of the screen, 0…255 or beyond. */
export function tableNumber(value: number): number {
  return Math.max(0, Math.min(65535, Math.round((value + reach) * fineness)));
}

const side = colourTableSide;
const [stepR, stepG, stepB] = [3, 3 * side, 3 * side * side];

/**
 * Where each of the 256 numbers lies in the table: the point before it, and how far it is beyond, in 256ths. The last
 * point has no next one, so 255 lies a whole step beyond the last but one.
 */
const pointOf = new Uint8Array(256);
const beyondOf = new Uint16Array(256);
for (let value = 0; value < 256; value++) {
  const place = (value * (side - 1)) / 255;
  pointOf[value] = Math.min(side - 2, Math.floor(place));
  beyondOf[value] = Math.round((place - pointOf[value]) * 256);
}

const half = 1 << (fineBits - 1);

function cutOff(value: number): number {
  const number = value - reach;
  return number < 0 ? 0 : Math.min(number, 255);
}

/**
 * Brings colours through a table, by tetrahedral interpolation:
 * the four corners of a cell around the colour, so that greys stay on the line between two greys.
 * @param rgba R, G, B, A of 8 bits each; changed in place, A is left
 * @param table `colourTableSide`³ points, R fastest, then G, then B; 3 numbers a point, as `tableNumber` makes
 * them; not modified
 */
export function throughTable(rgba: Uint8Array | Uint8ClampedArray, table: Uint16Array): void {
  let last = -1;
  let outR = 0;
  let outG = 0;
  let outB = 0;
  for (let i = 0; i < rgba.length; i += 4) {
    const r = rgba[i];
    const g = rgba[i + 1];
    const b = rgba[i + 2];
    const colour = (r << 16) | (g << 8) | b;
    // Paint lies in flat patches: most pixels have their neighbour's colour.
    if (colour !== last) {
      last = colour;
      const fr = beyondOf[r];
      const fg = beyondOf[g];
      const fb = beyondOf[b];
      const near = pointOf[r] * stepR + pointOf[g] * stepG + pointOf[b] * stepB;
      const far = near + stepR + stepG + stepB;
      // From the near corner to the far one along the edges, the largest part first.
      let first: number;
      let second: number;
      let large: number;
      let middle: number;
      let small: number;
      if (fr >= fg) {
        if (fg >= fb) {
          large = fr;
          middle = fg;
          small = fb;
          first = stepR;
          second = stepR + stepG;
        } else if (fr >= fb) {
          large = fr;
          middle = fb;
          small = fg;
          first = stepR;
          second = stepR + stepB;
        } else {
          large = fb;
          middle = fr;
          small = fg;
          first = stepB;
          second = stepB + stepR;
        }
      } else if (fr >= fb) {
        large = fg;
        middle = fr;
        small = fb;
        first = stepG;
        second = stepG + stepR;
      } else if (fg >= fb) {
        large = fg;
        middle = fb;
        small = fr;
        first = stepG;
        second = stepG + stepB;
      } else {
        large = fb;
        middle = fg;
        small = fr;
        first = stepB;
        second = stepB + stepG;
      }
      const w0 = 256 - large;
      const w1 = large - middle;
      const w2 = middle - small;
      const one = near + first;
      const two = near + second;
      outR = cutOff(
        (table[near] * w0 + table[one] * w1 + table[two] * w2 + table[far] * small + half) >> fineBits,
      );
      outG = cutOff(
        (table[near + 1] * w0 + table[one + 1] * w1 + table[two + 1] * w2 + table[far + 1] * small + half) >>
          fineBits,
      );
      outB = cutOff(
        (table[near + 2] * w0 + table[one + 2] * w1 + table[two + 2] * w2 + table[far + 2] * small + half) >>
          fineBits,
      );
    }
    rgba[i] = outR;
    rgba[i + 1] = outG;
    rgba[i + 2] = outB;
  }
}
