// A plate as a camera would have written it: the orientation tag, the pixels turned to suit it, a caption.

import { open, rename, rm } from 'node:fs/promises';
import { dirname, join } from 'node:path';
import sharp from 'sharp';

/**
 * Turns upright pixels the way a camera held askew would have stored them (CIPA DC-008, tags 1, 3, 6, 8).
 * @param {{ pixels: Uint8Array, widthPx: number, heightPx: number }} picture upright
 * @param {number} orientation
 */
export function storedAs({ pixels, widthPx, heightPx }, orientation) {
  if (orientation === 1) return { pixels, widthPx, heightPx };
  const turned = orientation !== 3;
  const [w, h] = turned ? [heightPx, widthPx] : [widthPx, heightPx];
  const out = new Uint8Array(pixels.length);
  for (let y = 0; y < h; y++)
    for (let x = 0; x < w; x++) {
      // where the upright picture has what is stored at (x, y)
      let ux = widthPx - 1 - x;
      let uy = heightPx - 1 - y;
      if (orientation === 6) {
        ux = widthPx - 1 - y;
        uy = x;
      } else if (orientation === 8) {
        ux = y;
        uy = heightPx - 1 - x;
      }
      const from = (uy * widthPx + ux) * 3;
      const to = (y * w + x) * 3;
      out[to] = pixels[from];
      out[to + 1] = pixels[from + 1];
      out[to + 2] = pixels[from + 2];
    }
  return { pixels: out, widthPx: w, heightPx: h };
}

/**
 * Encodes a plate as a JPEG.
 * @param {{ pixels: Uint8Array, widthPx: number, heightPx: number }} picture upright
 * @param {import('./frames.mjs').Frame} frame
 * @returns {Promise<Buffer>}
 */
export function encodePlate(picture, frame) {
  const stored = storedAs(picture, frame.orientation);
  return sharp(stored.pixels, { raw: { width: stored.widthPx, height: stored.heightPx, channels: 3 } })
    .withExif({
      IFD0: {
        ImageDescription: `The Ferry at Low Water: ${frame.caption}`,
        Artist: 'Oxgall demo series',
        Copyright: 'Rendered scene, free of any one’s rights',
      },
    })
    .withMetadata({ orientation: frame.orientation })
    .jpeg({ quality: 92, chromaSubsampling: '4:4:4' })
    .toBuffer();
}

/** Writes beside, flushes, renames: a plate is whole or not there. */
export async function writeWhole(path, bytes) {
  const beside = join(dirname(path), `.${process.pid}-${Math.random().toString(36).slice(2)}.part`);
  const file = await open(beside, 'wx');
  try {
    await file.writeFile(bytes);
    await file.sync();
    await file.close();
    await rename(beside, path);
    const folder = await open(dirname(path), 'r').catch(() => null);
    await folder?.sync().catch(() => {});
    await folder?.close();
  } catch (error) {
    await file.close().catch(() => {});
    await rm(beside, { force: true });
    throw new Error(
      `${path} could not be written (${error.message}); free some space or choose another folder`,
    );
  }
}
