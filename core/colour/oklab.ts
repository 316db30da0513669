import { linearOfSrgb, srgbOfLinear, type Triple } from './lab.ts';

/** Rows of three numbers. */
type Rows = readonly [Triple, Triple, Triple];

/** Linear sRGB → cone responses of Oklab (B. Ottosson, 2020). */
export const conesOfLinearSrgb: Rows = [
  [0.4122214708, 0.5363325363, 0.0514459929],
  [0.2119034982, 0.6806995451, 0.1073969566],
  [0.0883024619, 0.2817188376, 0.6299787005],
];

/** Cube roots of the cone responses → L, a, b of Oklab (B. Ottosson, 2020). */
export const oklabOfRoots: Rows = [
  [0.2104542553, 0.793617785, -0.0040720468],
  [1.9779984951, -2.428592205, 0.4505937099],
  [0.0259040371, 0.7827717662, -0.808675766],
];

/** The opposite way of each, so exact that a round trip stays within a last bit or two of double precision. */
export const linearSrgbOfCones = invertedRows(conesOfLinearSrgb);
export const rootsOfOklab = invertedRows(oklabOfRoots);

/** Linear sRGB, of any size or sign → Oklab. */
export function oklabOfLinearSrgb(linear: Triple): Triple {
  const [l, m, s] = timesRows(conesOfLinearSrgb, linear);
  return timesRows(oklabOfRoots, [Math.cbrt(l), Math.cbrt(m), Math.cbrt(s)]);
}

/** Oklab → linear sRGB; outside 0..1 where the colour lies outside the gamut. */
export function linearSrgbOfOklab(lab: Triple): Triple {
  const [l, m, s] = timesRows(rootsOfOklab, lab);
  return timesRows(linearSrgbOfCones, [l * l * l, m * m * m, s * s * s]);
}

/** Encoded sRGB 0..1 → Oklab. */
export function oklabOfSrgb([r, g, b]: Triple): Triple {
  return oklabOfLinearSrgb([linearOfSrgb(r), linearOfSrgb(g), linearOfSrgb(b)]);
}

/** Oklab → encoded sRGB, each channel clipped to 0..1. */
export function srgbOfOklab(lab: Triple): Triple {
  const encoded = (linear: number) => srgbOfLinear(Math.max(0, Math.min(1, linear)));
  const [r, g, b] = linearSrgbOfOklab(lab);
  return [encoded(r), encoded(g), encoded(b)];
}

function timesRows([p, q, r]: Rows, [x, y, z]: Triple): Triple {
  return [p[0] * x + p[1] * y + p[2] * z, q[0] * x + q[1] * y + q[2] * z, r[0] * x + r[1] * y + r[2] * z];
}

/** By cofactors: additions, multiplications and divisions only, so every machine gets the same numbers. */
function invertedRows([[a, b, c], [d, e, f], [g, h, i]]: Rows): Rows {
  const [A, B, C] = [e * i - f * h, f * g - d * i, d * h - e * g];
  const determinant = a * A + b * B + c * C;
  const over = (x: number, y: number, z: number): Triple => [
    x / determinant,
    y / determinant,
    z / determinant,
  ];
  return [
    over(A, c * h - b * i, b * f - c * e),
    over(B, a * i - c * g, c * d - a * f),
    over(C, b * g - a * h, a * e - b * d),
  ];
}
