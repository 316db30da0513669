import { join } from 'node:path';
import type { Page } from 'playwright-core';
import sharp from 'sharp';

/** Writes small pictures of a shore under a sky; each differs from the next in its light and its waves. */
export async function writeFrames(
  folder: string,
  count: number,
  { widthPx = 480, isMixed = false }: { widthPx?: number; isMixed?: boolean } = {},
): Promise<void> {
  for (let number = 1; number <= count; number++) {
    // Of a mixed series every third stands upright.
    const [width, height] =
      isMixed && number % 3 === 0
        ? [Math.round((widthPx * 2) / 3), widthPx]
        : [widthPx, Math.round((widthPx * 2) / 3)];
    const pixels = paintShore(number, width, height);
    await sharp(pixels, { raw: { width, height, channels: 3 } })
      .jpeg({ quality: 88 })
      .toFile(join(folder, `plate-${number}.jpg`));
  }
}

function paintShore(number: number, widthPx: number, heightPx: number): Uint8Array {
  const pixels = new Uint8Array(widthPx * heightPx * 3);
  const light = 0.85 + 0.03 * (number % 6);
  for (let y = 0; y < heightPx; y++)
    for (let x = 0; x < widthPx; x++) {
      const wave = 18 * Math.sin(x / (7 + (number % 5)) + (y * y) / 900);
      const isSky = y < heightPx * 0.4;
      const at = (y * widthPx + x) * 3;
      pixels[at] = light * (isSky ? 150 : 70 + wave);
      pixels[at + 1] = light * (isSky ? 170 : 96 + wave);
      pixels[at + 2] = light * (isSky ? 200 : 100 + wave);
    }
  return pixels;
}

export const frame = (page: Page, name: string) => page.locator(`[data-frame="${name}"]`);
export const hangs = (page: Page) => page.locator('.wall-print canvas.is-there').first().waitFor();
