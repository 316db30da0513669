import sharp from 'sharp';
import { describe, expect, it } from 'vitest';
import { turnUpright } from '../../main/files/orientation.ts';
import { readPhotoSize } from '../../main/files/photoHeader.ts';
import { readPhoto } from '../../main/files/readPhoto.ts';
import { plainTiff } from '../fixtures/plainTiff.ts';
import { temporaryFolder } from './temporaryFolder.ts';

const folder = temporaryFolder();
const orientations = [1, 2, 3, 4, 5, 6, 7, 8];
const uprightWidth = 7;
const uprightHeight = 5;

// CIPA DC-008, orientation: which side of the scene the stored row 0 and the stored column 0 show.
const sides: Record<number, [row0: string, column0: string]> = {
  1: ['top', 'left'],
  2: ['top', 'right'],
  3: ['bottom', 'right'],
  4: ['bottom', 'left'],
  5: ['left', 'top'],
  6: ['right', 'top'],
  7: ['right', 'bottom'],
  8: ['left', 'bottom'],
};

/** Stores an upright scene the way a camera held at that orientation does. */
function store(upright: Uint16Array, channels: number, orientation: number) {
  const [row0, column0] = sides[orientation];
  const rowsAreColumns = row0 === 'left' || row0 === 'right';
  const width = rowsAreColumns ? uprightHeight : uprightWidth;
  const height = rowsAreColumns ? uprightWidth : uprightHeight;
  const stored = new Uint16Array(upright.length);
  const along = (side: string, k: number) =>
    side === 'bottom' ? uprightHeight - 1 - k : side === 'right' ? uprightWidth - 1 - k : k;
  for (let row = 0; row < height; row++)
    for (let column = 0; column < width; column++) {
      const a = along(row0, row);
      const b = along(column0, column);
      const [x, y] = rowsAreColumns ? [a, b] : [b, a];
      for (let c = 0; c < channels; c++)
        stored[(row * width + column) * channels + c] = upright[(y * uprightWidth + x) * channels + c];
    }
  return { stored, width, height };
}

function scene(channels: number): Uint16Array {
  return Uint16Array.from(
    { length: uprightWidth * uprightHeight * channels },
    (_, i) => (i * 4099 + 17) % 65536,
  );
}

describe('orientation', () => {
  for (const orientation of orientations) {
    it(`${orientation}: a 16-bit TIFF is read upright, every number as stored`, async () => {
      const upright = scene(3);
      const { stored, width, height } = store(upright, 3, orientation);
      const bytes = new Uint8Array(stored.buffer);
      const path = await folder.file(
        `o${orientation}.tif`,
        plainTiff({
          widthPx: width,
          heightPx: height,
          bits: 16,
          channels: 3,
          photometric: 2,
          planes: [bytes],
          orientation,
        }),
      );
      const photo = await readPhoto(path);
      expect([photo.widthPx, photo.heightPx, photo.depth]).toEqual([uprightWidth, uprightHeight, 16]);
      expect([...photo.pixels]).toEqual([...upright]);
      expect(await readPhotoSize(path)).toMatchObject({
        widthPx: uprightWidth,
        heightPx: uprightHeight,
        format: 'tiff',
        depth: 16,
      });
    });

    for (const format of ['png', 'webp', 'jpeg'] as const) {
      it(`${orientation}: ${format} is turned once, as the image library turns it`, async () => {
        const stored = Uint8Array.from({ length: 9 * 6 * 3 }, (_, i) => (i * 37) % 256);
        const packed = sharp(stored, { raw: { width: 9, height: 6, channels: 3 } }).withMetadata({
          orientation,
        });
        const file = await (format === 'png'
          ? packed.png()
          : format === 'webp'
            ? packed.webp({ lossless: true })
            : packed.jpeg({ quality: 100, chromaSubsampling: '4:4:4' })
        ).toBuffer();
        expect((await sharp(file).metadata()).orientation).toBe(orientation);
        const photo = await readPhoto(await folder.file(`o${orientation}.${format}`, file));
        const turned = await sharp(file, { ignoreIcc: true })
          .autoOrient()
          .raw()
          .toBuffer({ resolveWithObject: true });
        expect([photo.widthPx, photo.heightPx]).toEqual([turned.info.width, turned.info.height]);
        expect(Buffer.compare(Buffer.from(photo.pixels), turned.data)).toBe(0);
      });
    }

    it(`${orientation}: four channels and edges beyond one tile`, async () => {
      const stored = Uint8Array.from({ length: 150 * 70 * 4 }, (_, i) => (i * 61 + (i >> 8)) % 256);
      const turned = await turnUpright(
        { pixels: stored, widthPx: 150, heightPx: 70, channels: 4 },
        orientation,
      );
      const tagged = await sharp(stored, { raw: { width: 150, height: 70, channels: 4 } })
        .withMetadata({ orientation })
        .png()
        .toBuffer();
      const expected = await sharp(tagged, { ignoreIcc: true }).autoOrient().raw().toBuffer();
      expect(Buffer.compare(Buffer.from(turned.pixels), expected)).toBe(0);
    });
  }
});
