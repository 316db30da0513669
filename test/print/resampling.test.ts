import { describe, expect, it } from 'vitest';
import type { PhotoFile } from '../../main/files/photoFile.ts';
import { SpilledPixels } from '../../main/files/spilledPixels.ts';
import { prepareForPrint } from '../../main/painting/prepareForPrint.ts';

const inch = { printLongEdgeMm: 25.4 };

function photoOf(
  widthPx: number,
  heightPx: number,
  depth: 8 | 16,
  colour: (x: number, y: number) => readonly number[],
): PhotoFile {
  const channels = colour(0, 0).length as 3 | 4;
  const top = depth === 8 ? 255 : 65535;
  const length = widthPx * heightPx * channels;
  const pixels = depth === 8 ? new Uint8Array(length) : new Uint16Array(length);
  for (let i = 0; i < widthPx * heightPx; i++)
    pixels.set(
      colour(i % widthPx, Math.floor(i / widthPx)).map((part) => Math.round(part * top)),
      i * channels,
    );
  return { path: 'a photo', format: 'png', depth, remarks: [], widthPx, heightPx, channels, pixels };
}

async function prepared(photo: PhotoFile, order: Parameters<typeof prepareForPrint>[1]) {
  const { pixels, ...facts } = await prepareForPrint(photo, order);
  if (!('BYTES_PER_ELEMENT' in pixels)) throw new Error('Expected pixels in memory');
  return { ...facts, pixels };
}

describe('a photo brought to the pixels of its print', () => {
  it.each([8, 16] as const)('has no fringe where it turns transparent, %i bits', async (depth) => {
    const red = [0.8, 0.1, 0.1];
    const hidden = [0, 1, 0];
    const photo = photoOf(60, 40, depth, (x) =>
      x < 40 ? [...red, Math.min(1, (40 - x) / 30)] : [...hidden, 0],
    );
    const top = depth === 8 ? 255 : 65535;
    for (const ppi of [23, 40, 97, 150]) {
      const { pixels, widthPx } = await prepared(photo, { ...inch, ppi });
      expect([widthPx, pixels.BYTES_PER_ELEMENT]).toEqual([ppi, depth / 8]);
      let furthest = 0;
      for (let i = 0; i < pixels.length; i += 4) {
        // Hidden colour is nobody's; what shows by less than a fiftieth shows less than one step of it.
        if (pixels[i + 3] < top / 50) continue;
        for (let c = 0; c < 3; c++) furthest = Math.max(furthest, Math.abs(pixels[i + c] / top - red[c]));
      }
      expect(furthest, `${ppi}`).toBeLessThan(1.5 / 255);
    }
  });

  it.each([8, 16] as const)('keeps a flat colour, and a ramp straight, %i bits', async (depth) => {
    const photo = photoOf(64, 32, depth, (x) => [0.3, x / 63, 0.9]);
    const top = depth === 8 ? 255 : 65535;
    const { pixels, widthPx } = await prepared(photo, { ...inch, ppi: 200 });
    for (let x = 20; x < widthPx - 20; x++) {
      const at = (40 * widthPx + x) * 3;
      // Pixel middles: (x + ½) · 64 / 200 − ½.
      const place = ((x + 0.5) * 64) / 200 - 0.5;
      expect(Math.abs(pixels[at] / top - 0.3)).toBeLessThan(1 / 255);
      expect(Math.abs(pixels[at + 1] / top - place / 63)).toBeLessThan(2 / 255);
    }
  });

  it('takes the pixels of the frame as they are where only an aspect is asked for', async () => {
    const photo = photoOf(40, 30, 16, (x, y) => [x / 40, y / 30, 0.5, 0.25]);
    const cut = await prepared(photo, { ...inch, crop: { aspect: 1, x01: 0.25, y01: 0.5 } });
    expect([cut.widthPx, cut.heightPx]).toEqual([30, 30]);
    for (let y = 0; y < 30; y++)
      for (let x = 0; x < 30; x++)
        for (let c = 0; c < 4; c++)
          expect(cut.pixels[(y * 30 + x) * 4 + c]).toBe(photo.pixels[(y * 40 + x) * 4 + c]);
  });

  it.each([
    [3, 8],
    [4, 8],
    [3, 16],
    [4, 16],
  ] as const)('has the same pixels by way of a file: %i channels, %i bits', async (channels, depth) => {
    const photo = photoOf(211, 157, depth, (x, y) =>
      [Math.sin(x / 9) ** 2, ((x * y) % 97) / 96, y / 156, 0.3 + 0.7 * (x / 210)].slice(0, channels),
    );
    const crop = { aspect: 0.9, x01: 0.4, y01: 0.5 };
    for (const order of [{ crop }, { ppi: 301 }, { ppi: 77, crop }]) {
      const held = await prepared(photo, { ...inch, ...order });
      const filed = await prepareForPrint(photo, { ...inch, ...order }, undefined, 0);
      if (!(filed.pixels instanceof SpilledPixels)) throw new Error('Expected pixels in a file');
      try {
        expect([filed.widthPx, filed.heightPx]).toEqual([held.widthPx, held.heightPx]);
        expect(await filed.pixels.samples(0, filed.heightPx)).toEqual(held.pixels);
      } finally {
        filed.pixels.discard();
      }
    }
  });

  it('is refused where it would have more pixels than can be painted', async () => {
    const photo = photoOf(40, 30, 8, () => [0, 0, 0]);
    await expect(prepareForPrint(photo, { printLongEdgeMm: 5000, ppi: 600 })).rejects.toMatchObject({
      remedy: 'Choose a smaller print or fewer pixels per inch.',
    });
  });
});
