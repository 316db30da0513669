import { connectsByLab, tagOf } from './matrixProfile.ts';
import { curveAt, isCurve } from './toneCurve.ts';

/*
 * What can be told of an ICC profile without a colour engine (ICC.1:2010): whether the parts are there that its colour
 * space needs, and how it encodes lightness.
 */

const spaceAt = 16;

/**
 * Whether a profile has what converting from it needs: a matrix with curves, a curve, or a table, none of them cut off.
 * @param profile the bytes of a profile for RGB, grey or CMYK; not modified
 */
export function isUsableProfile(profile: Uint8Array): boolean {
  const space = text(profile, spaceAt);
  if (space === 'RGB ') return hasMatrix(profile) || hasTable(profile);
  if (space === 'GRAY') return isCurve(tagOf(profile, 'kTRC')) || hasTable(profile);
  return hasTable(profile);
}

/**
 * The lightness (CIE L*, 0…100) that a profile gives to half of the full number.
 * @param profile of a matrix or of grey
 * @returns null where it works by tables alone
 */
export function lightnessOfHalf(profile: Uint8Array): number | null {
  const curve = tagOf(profile, text(profile, spaceAt) === 'GRAY' ? 'kTRC' : 'gTRC');
  if (!isCurve(curve)) return null;
  const luminance = curveAt(curve, 0.5);
  if (connectsByLab(profile)) return luminance * 100;
  return luminance > 216 / 24389 ? 116 * Math.cbrt(luminance) - 16 : (luminance * 24389) / 27;
}

function text(bytes: Uint8Array, at: number): string {
  return String.fromCharCode(...bytes.subarray(at, at + 4));
}

function viewOf(bytes: Uint8Array): DataView {
  return new DataView(bytes.buffer, bytes.byteOffset, bytes.byteLength);
}

function hasMatrix(profile: Uint8Array): boolean {
  const columns = ['rXYZ', 'gXYZ', 'bXYZ'].map((signature) => tagOf(profile, signature));
  const areSound = columns.every((column) => column && column.length >= 20 && text(column, 0) === 'XYZ ');
  return areSound && ['rTRC', 'gTRC', 'bTRC'].every((signature) => isCurve(tagOf(profile, signature)));
}

const tableTags = ['A2B0', 'A2B1', 'A2B2', 'D2B0', 'D2B1', 'D2B2'];

function hasTable(profile: Uint8Array): boolean {
  return tableTags.some((signature) => {
    const table = tagOf(profile, signature);
    return table !== null && isTable(table);
  });
}

function isTable(table: Uint8Array): boolean {
  const kind = text(table, 0);
  if (table.length < 32) return false;
  if (kind === 'mAB ' || kind === 'mpet') return true;
  if ((kind !== 'mft1' && kind !== 'mft2') || table.length < 52) return false;
  const [inputs, outputs, points] = table.subarray(8, 11);
  const nodes = points ** inputs * outputs;
  if (kind === 'mft1') return table.length >= 48 + 256 * (inputs + outputs) + nodes;
  const view = viewOf(table);
  const [before, after] = [view.getUint16(48), view.getUint16(50)];
  return table.length >= 52 + 2 * (before * inputs + nodes + after * outputs);
}
