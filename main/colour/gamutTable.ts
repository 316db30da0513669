import { colourTableSide, tableNumber } from '../../core/colour/colourTable.ts';
import { numbersPerDifference } from '../../core/colour/gamutMarks.ts';
import { type ColourEngine, channelsOf } from './colourEngine.ts';
import { gridColours } from './screenTable.ts';

/**
 * How far a printing condition moves the colours of a photo, as a table for `markOutside`: the colour difference
 * (CIE 1976) between a colour and what comes back from the print.
 */
export function gamutTable(engine: ColourEngine, from: Uint8Array, print: Uint8Array): Uint16Array {
  const rgb = Uint16Array.from(gridColours(), (value) => Math.round(value * 65535));
  const asked = new Uint16Array(rgb.length);
  const shown = new Uint16Array(rgb.length);
  // With black-point compensation, as pictures are delivered: the black of paper and ink counts as black.
  const toLab = engine.transform(from, 'Lab', 'relative', true);
  const toPrint = engine.transform(from, print, 'relative', true);
  const fromPrint = engine.transform(print, 'Lab', 'relative', true);
  try {
    toLab.run(rgb, asked);
    const printed = new Uint16Array(colourTableSide ** 3 * channelsOf[fromPrint.from]);
    toPrint.run(rgb, printed);
    fromPrint.run(printed, shown);
  } finally {
    for (const transform of [toLab, toPrint, fromPrint]) transform.close();
  }
  const table = new Uint16Array(rgb.length);
  // 16-bit L* is 65535 for 100, a* and b* 257 a unit.
  const scale = [100 / 65535, 1 / 257, 1 / 257];
  for (let i = 0; i < table.length; i += 3) {
    const moved = scale.map((unit, c) => (asked[i + c] - shown[i + c]) * unit);
    table.fill(tableNumber(Math.hypot(...moved) * numbersPerDifference), i, i + 3);
  }
  return table;
}
