import { parseColour } from '../../core/composition/compose.ts';
import type { Stratum } from '../../core/parameters/table.ts';
import type { Strata } from '../../core/pixels/photo.ts';

/** Paper that the ink is shown on in its band. */
const bandPaper: readonly [number, number, number] = [252, 250, 245];

/** Light of a flat surface. */
const flatRelief = 127;

/** Some rows and columns of a piece. */
export interface StripPlace {
  firstRow: number;
  rowCount: number;
  firstColumn: number;
  columnCount: number;
}

/**
 * Writes what one stratum holds along the cut, for its band.
 * @param out R, G, B, A of the strip, rows without padding
 */
export function writeStrip(
  strata: Strata,
  stratum: Stratum,
  place: StripPlace,
  inkColour: string,
  out: Uint8ClampedArray,
): void {
  for (let row = 0; row < place.rowCount; row++) {
    const from = (place.firstRow + row) * strata.widthPx + place.firstColumn;
    const to = row * place.columnCount;
    if (stratum === 'ground') copyGround(strata, from, out, to, place.columnCount);
    else if (stratum === 'body') copyBody(strata, from, out, to, place.columnCount);
    else if (stratum === 'line') copyLine(strata, from, out, to, place.columnCount, inkColour);
    else copyRelief(strata, from, out, to, place.columnCount);
  }
}

function copyGround(strata: Strata, from: number, out: Uint8ClampedArray, to: number, count: number): void {
  const { ground, groundChannels } = strata;
  const factor = ground instanceof Uint16Array ? 255 / 65535 : 1;
  for (let i = 0; i < count; i++) {
    const source = (from + i) * groundChannels;
    const target = (to + i) * 4;
    out[target] = ground[source] * factor;
    out[target + 1] = ground[source + 1] * factor;
    out[target + 2] = ground[source + 2] * factor;
    out[target + 3] = groundChannels === 4 ? ground[source + 3] * factor : 255;
  }
}

function copyBody(strata: Strata, from: number, out: Uint8ClampedArray, to: number, count: number): void {
  for (let i = 0; i < count; i++) {
    const source = (from + i) * 3;
    const target = (to + i) * 4;
    out[target] = strata.body[source] / 257;
    out[target + 1] = strata.body[source + 1] / 257;
    out[target + 2] = strata.body[source + 2] / 257;
    out[target + 3] = 255;
  }
}

function copyLine(
  strata: Strata,
  from: number,
  out: Uint8ClampedArray,
  to: number,
  count: number,
  inkColour: string,
): void {
  const ink = parseColour(inkColour);
  for (let i = 0; i < count; i++) {
    const coverage = strata.line[from + i] / 255;
    const target = (to + i) * 4;
    for (let c = 0; c < 3; c++) out[target + c] = bandPaper[c] + (ink[c] * 255 - bandPaper[c]) * coverage;
    out[target + 3] = 255;
  }
}

function copyRelief(strata: Strata, from: number, out: Uint8ClampedArray, to: number, count: number): void {
  for (let i = 0; i < count; i++) {
    const grey = strata.relief ? strata.relief[from + i] : flatRelief;
    out.fill(grey, (to + i) * 4, (to + i) * 4 + 3);
    out[(to + i) * 4 + 3] = 255;
  }
}
