import { readFile } from 'node:fs/promises';
import { fileURLToPath } from 'node:url';
import { describe, expect, it } from 'vitest';
import { readPhoto } from '../../main/files/readPhoto.ts';
import { spillPhoto } from '../../main/files/spillPhoto.ts';

/*
 * Small pictures that libjpeg-turbo, libtiff and ImageMagick wrote and read (test/fixtures/SOURCES.md), not the image
 * library that reads them here. Expected is what those tools decode.
 */
const folder = new URL('../fixtures/pictures/', import.meta.url);
const pathOf = (name: string) => fileURLToPath(new URL(name, folder));

/** A PPM of 8 bits (Netpbm, `P6`). */
async function readPpm(name: string): Promise<{ widthPx: number; heightPx: number; pixels: Uint8Array }> {
  const bytes = await readFile(pathOf(name));
  const head = /^P6\s(\d+)\s(\d+)\s255\s/.exec(bytes.toString('latin1', 0, 40))!;
  const pixels = new Uint8Array(bytes.subarray(head[0].length));
  return { widthPx: Number(head[1]), heightPx: Number(head[2]), pixels };
}

describe('a picture that another library wrote', () => {
  it.each([
    ['arithmetic.jpg', 'steps-jpeg.ppm'],
    ['progressive.jpg', 'steps-jpeg.ppm'],
    ['tiled-lzw.tif', 'steps.ppm'],
    ['planar-deflate.tif', 'steps.ppm'],
    ['big-packbits.tif', 'steps.ppm'],
    ['interlaced.png', 'steps.ppm'],
    ['palette4.png', 'palette4.ppm'],
    ['grey4.png', 'grey4.ppm'],
    ['bilevel-g4.tif', 'bilevel-g4.ppm'],
  ])('has the pixels that it decodes to there: %s', async (name, decoded) => {
    const expected = await readPpm(decoded);
    const photo = await readPhoto(pathOf(name));
    expect([photo.widthPx, photo.heightPx, photo.channels, photo.depth]).toEqual([
      expected.widthPx,
      expected.heightPx,
      3,
      8,
    ]);
    // Decoders of JPEG may round their cosines differently by one.
    const tolerance = name.endsWith('.jpg') ? 1 : 0;
    let furthest = 0;
    for (const [i, value] of expected.pixels.entries())
      furthest = Math.max(furthest, Math.abs(value - photo.pixels[i]));
    expect(furthest).toBeLessThanOrEqual(tolerance);
    const spilled = await spillPhoto(pathOf(name));
    try {
      expect(await spilled.pixels.samples(0, photo.heightPx)).toEqual(photo.pixels);
    } finally {
      spilled.pixels.discard();
    }
  });

  it('is refused in plain words where it cannot be read: planes in tiles', async () => {
    const failure = await readPhoto(pathOf('tiled-planar-big-endian.tif')).catch((error) => error);
    expect(failure).toMatchObject({
      name: 'FileError',
      problem: 'is stored in a way that is not read here (tiled separate planes not supported)',
      remedy: 'Export it as JPEG, PNG or TIFF and open that.',
    });
  });
});
