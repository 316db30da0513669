import { labOfXyz, linearOfSrgb, type Triple, xyzOfLinearSrgb } from '../colour/lab.ts';
import { linearSrgbOfOklab, oklabOfLinearSrgb } from '../colour/oklab.ts';
import type { ColourMoments } from './mongeKantorovich.ts';
import { applyToneMap, type Matrix3, type ToneMap } from './toneMap.ts';

/**
 * The colours of a picture as a few hundred to a few thousand weighted ones: what a tone map does to the picture
 * can be tried on them at once.
 */
export interface Palette {
  /** Oklab L, a, b of each colour, one after the other. */
  readonly colours: readonly number[];
  /** Share of the picture that each stands for; they add up to 1. */
  readonly shares: readonly number[];
}

/** Cells a side of encoded R, G, B: colours that fall into one are averaged. */
const cells = 24;
const encodedSteps = 4096;
let decoded: Float64Array | null = null;

/** Linear value of 16-bit encoded ones, to a step of 4096: finer than any photo of 8 bits. */
function decodeTable(): Float64Array {
  decoded ??= Float64Array.from({ length: encodedSteps }, (_, i) => linearOfSrgb(i / (encodedSteps - 1)));
  return decoded;
}

/**
 * Gathers the colours of a picture.
 * @param rgb16 interleaved encoded R, G, B in 0…65535; not modified
 */
export function paletteOf(rgb16: Uint16Array): Palette {
  const table = decodeTable();
  const sums = new Float64Array(cells ** 3 * 4);
  const [r, g, b] = [0, 0, 0].map(() => new Uint16Array(65536 >> 4));
  for (let i = 0; i < r.length; i++) {
    r[i] = Math.floor((i * cells) / r.length) * cells * cells;
    g[i] = Math.floor((i * cells) / g.length) * cells;
    b[i] = Math.floor((i * cells) / b.length);
  }
  for (let i = 0; i < rgb16.length; i += 3) {
    const [red, green, blue] = [rgb16[i] >> 4, rgb16[i + 1] >> 4, rgb16[i + 2] >> 4];
    const cell = (r[red] + g[green] + b[blue]) * 4;
    sums[cell] += table[red];
    sums[cell + 1] += table[green];
    sums[cell + 2] += table[blue];
    sums[cell + 3]++;
  }
  const count = rgb16.length / 3;
  const colours: number[] = [];
  const shares: number[] = [];
  for (let cell = 0; cell < sums.length; cell += 4) {
    const n = sums[cell + 3];
    if (n === 0) continue;
    colours.push(...oklabOfLinearSrgb([sums[cell] / n, sums[cell + 1] / n, sums[cell + 2] / n]));
    shares.push(n / count);
  }
  return { colours, shares };
}

/** Mean and covariance of a palette's colours in Oklab. */
export function momentsOf({ colours, shares }: Palette): ColourMoments {
  const mean = [0, 0, 0];
  shares.forEach((share, i) => {
    for (let c = 0; c < 3; c++) mean[c] += share * colours[3 * i + c];
  });
  const rows = [0, 0, 0].map(() => [0, 0, 0]);
  shares.forEach((share, i) => {
    for (let p = 0; p < 3; p++)
      for (let q = 0; q < 3; q++)
        rows[p][q] += share * (colours[3 * i + p] - mean[p]) * (colours[3 * i + q] - mean[q]);
  });
  return { mean: mean as unknown as Triple, covariance: rows as unknown as Matrix3 };
}

/** What the eye goes by: means of L*, a*, b*, and the standard deviation of L*. */
export interface ToneFigures {
  readonly mean: Triple;
  readonly deviationL: number;
  readonly meanChroma: number;
}

/**
 * Tone figures (CIE 1976 L*a*b*, D65) of a palette as a tone map would leave it, clipped to what the encoding holds.
 * @param map none unless given
 */
export function toneFiguresOf({ colours, shares }: Palette, map?: ToneMap | null): ToneFigures {
  let [l, a, b, squares, chroma] = [0, 0, 0, 0, 0];
  shares.forEach((share, i) => {
    const colour: Triple = [colours[3 * i], colours[3 * i + 1], colours[3 * i + 2]];
    const [red, green, blue] = linearSrgbOfOklab(map ? applyToneMap(map, colour) : colour);
    const lab = labOfXyz(xyzOfLinearSrgb([inside(red), inside(green), inside(blue)]));
    l += share * lab[0];
    a += share * lab[1];
    b += share * lab[2];
    squares += share * lab[0] * lab[0];
    chroma += share * Math.hypot(lab[1], lab[2]);
  });
  return { mean: [l, a, b], deviationL: Math.sqrt(Math.max(0, squares - l * l)), meanChroma: chroma };
}

function inside(linear: number): number {
  return Math.max(0, Math.min(1, linear));
}

/** Encoded value from which a channel counts as clipped: noise and averaging pull clipped pixels a little below 1. */
const clippedFrom = linearOfSrgb(0.97);

/**
 * The colours that have not been clipped in two channels or three, with the share of the picture that they are. One
 * alone does not count: a strong colour touches the gamut's edge at any exposure.
 */
export function unclippedPart(palette: Palette): { part: Palette; share01: number } {
  return partOf(palette, (i) => {
    const { colours } = palette;
    const channels = linearSrgbOfOklab([colours[3 * i], colours[3 * i + 1], colours[3 * i + 2]]);
    return channels.filter((linear) => linear >= clippedFrom).length < 2;
  });
}

/** The darkest colours that together are about `share01` of the picture. */
export function darkestPart(palette: Palette, share01: number): Palette {
  const order = palette.shares
    .map((_, i) => i)
    .sort((p, q) => palette.colours[3 * p] - palette.colours[3 * q]);
  const chosen = new Set<number>();
  let sum = 0;
  for (const i of order) {
    if (sum >= share01) break;
    chosen.add(i);
    sum += palette.shares[i];
  }
  return partOf(palette, (i) => chosen.has(i)).part;
}

/** Shares of the part add up to 1 again. */
function partOf(palette: Palette, isIn: (index: number) => boolean): { part: Palette; share01: number } {
  const indices = palette.shares.map((_, i) => i).filter(isIn);
  const share01 = indices.reduce((sum, i) => sum + palette.shares[i], 0);
  const colours = indices.flatMap((i) => palette.colours.slice(3 * i, 3 * i + 3));
  const shares = indices.map((i) => palette.shares[i] / share01);
  return { part: { colours, shares }, share01 };
}
