import type { ColourEngine } from './colourEngine.ts';

/** A colour that printing moves by more than this (CIE 1976 colour difference) lies outside of what it can show. */
const visibleDifference = 4;

/**
 * Marks the pixels whose colours a printing condition cannot show: those that go to its profile and back as another
 * colour.
 * @param rgb interleaved R, G, B of 16 bits, in the space of `from`
 * @returns one byte a pixel: 1 outside, 0 inside
 */
export function gamutMask(
  engine: ColourEngine,
  rgb: Uint16Array,
  from: Uint8Array,
  print: Uint8Array,
): Uint8Array {
  const count = rgb.length / 3;
  const asked = new Uint16Array(rgb.length);
  const shown = new Uint16Array(rgb.length);
  // With black-point compensation, as pictures are delivered: the black of paper and ink counts as black.
  const toLab = engine.transform(from, 'Lab', 'relative', true);
  const toPrint = engine.transform(from, print, 'relative', true);
  const fromPrint = engine.transform(print, 'Lab', 'relative', true);
  try {
    toLab.run(rgb, asked);
    const channels = toPrint.to === 'CMYK' ? 4 : toPrint.to === 'GRAY' ? 1 : 3;
    const printed = new Uint16Array(count * channels);
    toPrint.run(rgb, printed);
    fromPrint.run(printed, shown);
  } finally {
    for (const transform of [toLab, toPrint, fromPrint]) transform.close();
  }
  const mask = new Uint8Array(count);
  // 16-bit L* is 65535 for 100, a* and b* 257 a unit.
  const scale = [100 / 65535, 1 / 257, 1 / 257];
  for (let i = 0; i < count; i++) {
    let sum = 0;
    for (let c = 0; c < 3; c++) sum += ((asked[i * 3 + c] - shown[i * 3 + c]) * scale[c]) ** 2;
    mask[i] = sum > visibleDifference ** 2 ? 1 : 0;
  }
  return mask;
}
