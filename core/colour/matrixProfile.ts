import { curveAt, isCurve, sampledCurve } from './toneCurve.ts';

/**
 * Builds ICC profiles of RGB spaces that are a matrix and one curve (ICC.1:2010, profile version 4.2), byte for byte
 * the same everywhere.
 */

/** Chromaticities x, y. */
type Chromaticity = readonly [x: number, y: number];

/** An RGB space, by its primaries; its white is D65. */
export interface RgbPrimaries {
  red: Chromaticity;
  green: Chromaticity;
  blue: Chromaticity;
}

/** Primaries of IEC 61966-2-1 (those of ITU-R BT.709). */
export const srgbPrimaries: RgbPrimaries = { red: [0.64, 0.33], green: [0.3, 0.6], blue: [0.15, 0.06] };
/** Primaries of SMPTE EG 432-1, as Display P3 has them. */
export const p3Primaries: RgbPrimaries = { red: [0.68, 0.32], green: [0.265, 0.69], blue: [0.15, 0.06] };
/** Primaries of ITU-R BT.2020: nearly every colour that ink and paint can have lies inside them. */
export const widePrimaries: RgbPrimaries = {
  red: [0.708, 0.292],
  green: [0.17, 0.797],
  blue: [0.131, 0.046],
};

const whiteD65: Chromaticity = [0.3127, 0.329];
/** The connection space's illuminant, as the header of every profile states it (ICC.1, 7.2.16). */
const whiteD50: Vector = [0.9642, 1, 0.8249];

type Vector = [number, number, number];
type Matrix = [Vector, Vector, Vector];

/** Cone responses of the linear Bradford adaptation (ICC.1, annex E). */
const bradford: Matrix = [
  [0.8951, 0.2664, -0.1614],
  [-0.7502, 1.7135, 0.0367],
  [0.0389, -0.0685, 1.0296],
];

/** Parametric curve 3: the transfer function of IEC 61966-2-1. */
const srgbCurve = [2.4, 1 / 1.055, 0.055 / 1.055, 1 / 12.92, 0.04045];

/**
 * A profile.
 * @param name as programs show it; plain ASCII
 * @param curve the tag's bytes of the red, green and blue curve; the sRGB curve unless given
 */
export function matrixProfile(
  name: string,
  primaries: RgbPrimaries,
  curve: Uint8Array = parametricCurve(srgbCurve),
): Uint8Array {
  const { colorants, adaptation } = adaptedColorants(primaries);
  const tags: [signature: string, data: Uint8Array][] = [
    ['desc', multiLocalized(name)],
    ['cprt', multiLocalized('No rights reserved.')],
    ['wtpt', xyzTag(whiteD50)],
    ['chad', fixedTag('sf32', adaptation.flat())],
    ['rXYZ', xyzTag(colorants[0])],
    ['gXYZ', xyzTag(colorants[1])],
    ['bXYZ', xyzTag(colorants[2])],
    ['rTRC', curve],
    ['gTRC', curve],
    ['bTRC', curve],
  ];
  return assemble(tags);
}

/**
 * The way from the connection space (XYZ under D50, Y = 1 for white) to a space's linear RGB, which for colours
 * outside of it is less than 0 or more than 1.
 * @returns three rows
 */
export function linearFromConnection(primaries: RgbPrimaries): readonly (readonly number[])[] {
  return inverted(transposed(adaptedColorants(primaries).colorants));
}

/** Columns of linear RGB → XYZ, adapted from D65 to the connection space by Bradford. */
function adaptedColorants(primaries: RgbPrimaries): { colorants: Matrix; adaptation: Matrix } {
  const toXyz = ([x, y]: Chromaticity): Vector => [x / y, 1, (1 - x - y) / y];
  const columns = [primaries.red, primaries.green, primaries.blue].map(toXyz);
  const rows = transposed(columns as Matrix);
  const white = toXyz(whiteD65);
  const weights = times(inverted(rows), white);
  const from = times(bradford, white);
  const to = times(bradford, whiteD50);
  const gains: Matrix = [
    [to[0] / from[0], 0, 0],
    [0, to[1] / from[1], 0],
    [0, 0, to[2] / from[2]],
  ];
  const adaptation = product(inverted(bradford), product(gains, bradford));
  const colorants = columns.map((column, i) =>
    times(adaptation, column.map((part) => part * weights[i]) as Vector),
  );
  return { colorants: colorants as Matrix, adaptation };
}

function times(m: Matrix, v: Vector): Vector {
  return m.map((row) => row[0] * v[0] + row[1] * v[1] + row[2] * v[2]) as Vector;
}

function product(a: Matrix, b: Matrix): Matrix {
  const columns = transposed(b).map((column) => times(a, column));
  return transposed(columns as Matrix);
}

function transposed(m: Matrix): Matrix {
  return [0, 1, 2].map((i) => m.map((row) => row[i])) as Matrix;
}

/** By cofactors. */
function inverted([[a, b, c], [d, e, f], [g, h, i]]: Matrix): Matrix {
  const [A, B, C] = [e * i - f * h, f * g - d * i, d * h - e * g];
  const determinant = a * A + b * B + c * C;
  const rows: Matrix = [
    [A, c * h - b * i, b * f - c * e],
    [B, a * i - c * g, c * d - a * f],
    [C, b * g - a * h, a * e - b * d],
  ];
  return rows.map((row) => row.map((part) => part / determinant)) as Matrix;
}

const headerBytes = 128;

function assemble(tags: readonly (readonly [string, Uint8Array])[]): Uint8Array {
  // Curves that are the same bytes are stored once, as the format allows.
  const stored = [...new Set(tags.map(([, data]) => data))];
  const offsets = new Map<Uint8Array, number>();
  let end = headerBytes + 4 + tags.length * 12;
  for (const data of stored) {
    offsets.set(data, end);
    end += Math.ceil(data.length / 4) * 4;
  }
  const profile = new Uint8Array(end);
  const view = new DataView(profile.buffer);
  writeHeader(profile, view);
  view.setUint32(headerBytes, tags.length);
  tags.forEach(([signature, data], index) => {
    const at = headerBytes + 4 + index * 12;
    writeText(profile, signature, at);
    view.setUint32(at + 4, offsets.get(data)!);
    view.setUint32(at + 8, data.length);
  });
  for (const [data, offset] of offsets) profile.set(data, offset);
  return profile;
}

function writeHeader(profile: Uint8Array, view: DataView): void {
  view.setUint32(0, profile.length);
  view.setUint32(8, 0x04200000);
  writeText(profile, 'mntrRGB XYZ ', 12);
  // The date is part of the bytes, so it is one and the same for ever.
  for (const [i, part] of [2026, 1, 1, 0, 0, 0].entries()) view.setUint16(24 + 2 * i, part);
  writeText(profile, 'acsp', 36);
  whiteD50.forEach((part, i) => {
    view.setInt32(68 + 4 * i, fixed(part));
  });
}

function multiLocalized(text: string): Uint8Array {
  const data = new Uint8Array(28 + 2 * text.length);
  const view = new DataView(data.buffer);
  writeText(data, 'mluc', 0);
  view.setUint32(8, 1);
  view.setUint32(12, 12);
  writeText(data, 'enUS', 16);
  view.setUint32(20, 2 * text.length);
  view.setUint32(24, 28);
  for (let i = 0; i < text.length; i++) view.setUint16(28 + 2 * i, text.charCodeAt(i));
  return data;
}

function xyzTag(xyz: Vector): Uint8Array {
  return fixedTag('XYZ ', xyz);
}

function fixedTag(signature: string, values: readonly number[]): Uint8Array {
  const data = new Uint8Array(8 + 4 * values.length);
  const view = new DataView(data.buffer);
  writeText(data, signature, 0);
  values.forEach((value, i) => {
    view.setInt32(8 + 4 * i, fixed(value));
  });
  return data;
}

function parametricCurve(values: readonly number[]): Uint8Array {
  const data = new Uint8Array(12 + 4 * values.length);
  const view = new DataView(data.buffer);
  writeText(data, 'para', 0);
  view.setUint16(8, 3);
  values.forEach((value, i) => {
    view.setInt32(12 + 4 * i, fixed(value));
  });
  return data;
}

/** s15Fixed16Number. */
function fixed(value: number): number {
  return Math.round(value * 65536);
}

function writeText(to: Uint8Array, text: string, at: number): void {
  for (let i = 0; i < text.length; i++) to[at + i] = text.charCodeAt(i);
}

/**
 * The bytes of one tag of a profile.
 * @returns null where the profile has no such tag, or its place lies outside of it
 */
export function tagOf(profile: Uint8Array, signature: string): Uint8Array | null {
  if (profile.length < headerBytes + 4) return null;
  const view = new DataView(profile.buffer, profile.byteOffset, profile.byteLength);
  const count = view.getUint32(headerBytes);
  for (let index = 0; index < count; index++) {
    const at = headerBytes + 4 + index * 12;
    if (at + 12 > profile.length) return null;
    const name = String.fromCharCode(...profile.subarray(at, at + 4));
    if (name !== signature) continue;
    const [offset, length] = [view.getUint32(at + 4), view.getUint32(at + 8)];
    return offset + length <= profile.length ? profile.slice(offset, offset + length) : null;
  }
  return null;
}

/**
 * An RGB profile whose neutrals are those of a grey profile: equal red, green and blue are the same grey as the number
 * alone was.
 * @returns null where the grey profile has no curve
 */
export function rgbProfileOfGrey(grey: Uint8Array): Uint8Array | null {
  const curve = tagOf(grey, 'kTRC');
  if (!isCurve(curve)) return null;
  const luminance = connectsByLab(grey) ? luminanceOfLightness(curve) : curve;
  return matrixProfile('Grey as RGB', srgbPrimaries, luminance);
}

/** Whether a profile meets others by L*a*b* (ICC.1, 7.2.7): a grey curve then gives lightness instead of luminance. */
export function connectsByLab(profile: Uint8Array): boolean {
  return String.fromCharCode(...profile.subarray(20, 24)) === 'Lab ';
}

const curvePoints = 4096;

function luminanceOfLightness(curve: Uint8Array): Uint8Array {
  const values = Array.from({ length: curvePoints }, (_, i) => {
    const lightness = 100 * curveAt(curve, i / (curvePoints - 1));
    return lightness > 8 ? ((lightness + 16) / 116) ** 3 : (lightness * 27) / 24389;
  });
  return sampledCurve(values);
}

/** The profile of sRGB. */
export const srgbProfile = (): Uint8Array => matrixProfile('sRGB IEC 61966-2-1', srgbPrimaries);
/** The profile of Display P3. */
export const p3Profile = (): Uint8Array => matrixProfile('Display P3', p3Primaries);
/** The profile that photos of more than RGB can hold are worked in. */
export const wideProfile = (): Uint8Array => matrixProfile('Wide RGB, BT.2020 primaries', widePrimaries);
