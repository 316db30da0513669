/** sRGB decoding, IEC 61966-2-1: encoded 0..1 → linear 0..1. */
export function linearOfSrgb(encoded: number): number {
  return encoded <= 0.04045 ? encoded / 12.92 : ((encoded + 0.055) / 1.055) ** 2.4;
}

/** sRGB encoding, IEC 61966-2-1: linear 0..1 → encoded 0..1. */
export function srgbOfLinear(linear: number): number {
  return linear <= 0.0031308 ? 12.92 * linear : 1.055 * linear ** (1 / 2.4) - 0.055;
}

export type Triple = readonly [number, number, number];

/** White of daylight D65 from its chromaticity (.3127, .3290), Y = 1. */
export const whiteD65: Triple = [0.3127 / 0.329, 1, (1 - 0.3127 - 0.329) / 0.329];

/** Linear sRGB → CIE XYZ under D65, from the primaries and white of IEC 61966-2-1. */
export function xyzOfLinearSrgb([r, g, b]: Triple): Triple {
  return [
    0.4123907993 * r + 0.3575843394 * g + 0.1804807884 * b,
    0.2126390059 * r + 0.7151686788 * g + 0.0721923154 * b,
    0.0193308187 * r + 0.1191947798 * g + 0.9505321522 * b,
  ];
}

const epsilon = 216 / 24389;
const kappa = 24389 / 27;

/**
 * CIE 1976 L*a*b* (CIE 15, with the exact constants ε = 216/24389, κ = 24389/27).
 * @param xyz relative to Y = 1
 * @param white of the same scale
 */
export function labOfXyz(xyz: Triple, white: Triple = whiteD65): Triple {
  const [x, y, z] = xyz.map((value, i) => {
    const ratio = value / white[i];
    return ratio > epsilon ? Math.cbrt(ratio) : (kappa * ratio + 16) / 116;
  });
  return [116 * y - 16, 500 * (x - y), 200 * (y - z)];
}

/** Encoded sRGB 0..1 → L*a*b* under D65. */
export function labOfSrgb([r, g, b]: Triple): Triple {
  return labOfXyz(xyzOfLinearSrgb([linearOfSrgb(r), linearOfSrgb(g), linearOfSrgb(b)]));
}
