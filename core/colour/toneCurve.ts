/*
 * Tone curves of ICC profiles (ICC.1:2010, 10.5 and 10.15).
 */

function text(bytes: Uint8Array, at: number): string {
  return String.fromCharCode(...bytes.subarray(at, at + 4));
}

function viewOf(bytes: Uint8Array): DataView {
  return new DataView(bytes.buffer, bytes.byteOffset, bytes.byteLength);
}

/** Numbers of a parametric curve by its function (ICC.1, 10.16). */
const parametersOf = [1, 3, 4, 5, 7];

/** Whether a tag's bytes are a whole curve. */
export function isCurve(curve: Uint8Array | null): curve is Uint8Array {
  if (!curve || curve.length < 12) return false;
  const view = viewOf(curve);
  if (text(curve, 0) === 'curv') return curve.length >= 12 + 2 * view.getUint32(8);
  const count = parametersOf[view.getUint16(8)];
  return text(curve, 0) === 'para' && count !== undefined && curve.length >= 12 + 4 * count;
}

/**
 * The value of a curve.
 * @param curve bytes of its tag, for which `isCurve` holds; not modified
 * @param x 0…1
 */
export function curveAt(curve: Uint8Array, x: number): number {
  const view = viewOf(curve);
  if (text(curve, 0) === 'para') return parametricAt(view, x);
  const count = view.getUint32(8);
  if (count === 0) return x;
  if (count === 1) return x ** (view.getUint16(12) / 256);
  const place = x * (count - 1);
  const low = Math.min(count - 2, Math.floor(place));
  const [from, to] = [low, low + 1].map((k) => view.getUint16(12 + 2 * k) / 65535);
  return from + (to - from) * (place - low);
}

function parametricAt(view: DataView, x: number): number {
  const kind = view.getUint16(8);
  const numbers = Array.from({ length: parametersOf[kind] }, (_, i) => view.getInt32(12 + 4 * i) / 65536);
  const [gamma, a = 1, b = 0, c = 0, d = 0, e = 0, f = 0] = numbers;
  const power = Math.max(0, a * x + b) ** gamma;
  if (kind === 0) return x ** gamma;
  if (kind === 1) return x >= -b / a ? power : 0;
  if (kind === 2) return x >= -b / a ? power + c : c;
  return x >= d ? power + e : c * x + f;
}

/**
 * A curve by its values at even steps.
 * @param values 0…1, from 0 to 1
 * @returns bytes of a tag
 */
export function sampledCurve(values: readonly number[]): Uint8Array {
  const curve = new Uint8Array(12 + 2 * values.length);
  const view = viewOf(curve);
  for (const [i, letter] of [...'curv'].entries()) curve[i] = letter.charCodeAt(0);
  view.setUint32(8, values.length);
  values.forEach((value, i) => {
    view.setUint16(12 + 2 * i, Math.round(Math.min(1, Math.max(0, value)) * 65535));
  });
  return curve;
}
