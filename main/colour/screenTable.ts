import { colourTableSide } from '../../core/colour/colourTable.ts';
import { srgbProfile } from '../../core/colour/matrixProfile.ts';
import type { ColourEngine } from './colourEngine.ts';

/**
 * The way from a photo's RGB to the screen's sRGB as a table, for previews: R fastest, then G, then B; 3 bytes a point.
 * @returns null where the profile is that of sRGB as far as 8 bits can tell
 */
export function screenTable(engine: ColourEngine, profile: Uint8Array): Uint8Array | null {
  const points = colourTableSide ** 3;
  const asked = new Uint16Array(points * 3);
  for (let i = 0; i < points; i++) {
    const place = [
      i % colourTableSide,
      Math.floor(i / colourTableSide) % colourTableSide,
      Math.floor(i / colourTableSide ** 2),
    ];
    for (let c = 0; c < 3; c++) asked[i * 3 + c] = Math.round((place[c] * 65535) / (colourTableSide - 1));
  }
  const shown = new Uint16Array(points * 3);
  const transform = engine.transform(profile, srgbProfile(), 'relative', true);
  try {
    transform.run(asked, shown);
  } finally {
    transform.close();
  }
  const table = Uint8Array.from(shown, (value) => Math.round(value / 257));
  const isSrgb = table.every((value, i) => Math.abs(value - asked[i] / 257) <= 1);
  return isSrgb ? null : table;
}
