import { describe, expect, it } from 'vitest';
import {
  blankImage,
  imageOf,
  type ReferenceImage,
  sampleAt,
} from '../../core/kernels/reference/referenceImage.ts';
import type { Rect } from '../../core/pixels/photo.ts';
import { seededRandom, testPicture } from './testPictures.ts';
import { sizeMatrix, type Tile, WasmTiles } from './wasmTiles.ts';

const tiles = new WasmTiles();
const f32 = Math.fround;

/** Rectangles that lie inside, across each edge, around and wholly beside a picture. */
function rectsAround(widthPx: number, heightPx: number): Rect[] {
  return [
    { xPx: 0, yPx: 0, widthPx, heightPx },
    { xPx: -3, yPx: -2, widthPx: widthPx + 7, heightPx: heightPx + 5 },
    { xPx: widthPx - 1, yPx: heightPx - 1, widthPx: 5, heightPx: 3 },
    { xPx: -6, yPx: 0, widthPx: 4, heightPx: 2 },
    { xPx: widthPx + 2, yPx: heightPx + 9, widthPx: 3, heightPx: 4 },
    { xPx: 0, yPx: -8, widthPx: 1, heightPx: 5 },
  ];
}

/** What a quad tile of a rectangle must hold, all four lanes, by replication beyond the picture. */
function expectedQuads(image: ReferenceImage, rect: Rect): Float32Array {
  const quads = new Float32Array(rect.widthPx * rect.heightPx * 4);
  for (let y = 0; y < rect.heightPx; y++)
    for (let x = 0; x < rect.widthPx; x++) {
      const rgb = [0, 1, 2].map((c) => f32(sampleAt(image, rect.xPx + x, rect.yPx + y, c)));
      const square = f32(f32(f32(rgb[0] * rgb[0]) + f32(rgb[1] * rgb[1])) + f32(rgb[2] * rgb[2]));
      quads.set([...rgb, square], (y * rect.widthPx + x) * 4);
    }
  return quads;
}

/** Stores a picture as quads without halo, as levels of the pyramid are. */
function storeQuads(image: ReferenceImage): number {
  const whole = { xPx: 0, yPx: 0, widthPx: image.widthPx, heightPx: image.heightPx };
  const quads = expectedQuads(image, whole);
  const pointer = tiles.allocate(quads.byteLength);
  tiles.floats(pointer, quads.length).set(quads);
  return pointer;
}

function expectTile(tile: Tile, expected: Float32Array, name: string): void {
  expect(tiles.isHaloUntouched(tile), name).toBe(true);
  expect(tiles.interior(tile), name).toEqual(expected);
}

describe('photo to quads', () => {
  it('reads 8 and 16 bits, with and without alpha, and repeats the edge, at every size', () => {
    for (const [widthPx, heightPx] of sizeMatrix)
      for (const channels of [3, 4] as const)
        for (const bytes of [1, 2] as const) {
          const steps = bytes === 1 ? 255 : 65535;
          const image = testPicture(widthPx, heightPx);
          const samples = new (bytes === 1 ? Uint8Array : Uint16Array)(widthPx * heightPx * channels);
          const random = seededRandom(widthPx + heightPx);
          for (let i = 0; i < samples.length; i++) samples[i] = Math.floor(random() * (steps + 1));
          for (let i = 0; i < widthPx * heightPx; i++)
            for (let c = 0; c < 3; c++) image.values[i * 3 + c] = samples[i * channels + c] / steps;
          for (const rect of rectsAround(widthPx, heightPx)) {
            tiles.reset();
            const photo = tiles.allocate(samples.byteLength);
            tiles.bytes(photo, samples.byteLength).set(new Uint8Array(samples.buffer));
            const tile = tiles.blankTile(rect.widthPx, rect.heightPx, 1);
            tiles.kernels.photoToQuads(
              photo,
              widthPx,
              heightPx,
              channels,
              bytes,
              rect.xPx,
              rect.yPx,
              rect.widthPx,
              rect.heightPx,
              tile.pointer,
              tile.strideElements,
            );
            expectTile(tile, expectedQuads(image, rect), `${widthPx} × ${heightPx}, ${channels} × ${bytes}`);
          }
        }
  });
});

describe('stored quads to tiles and back', () => {
  it('repeats the edge, at every size', () => {
    for (const [widthPx, heightPx] of sizeMatrix)
      for (const rect of rectsAround(widthPx, heightPx)) {
        tiles.reset();
        const image = testPicture(widthPx, heightPx);
        const picture = storeQuads(image);
        const tile = tiles.blankTile(rect.widthPx, rect.heightPx, 1);
        tiles.kernels.quadsToTile(
          picture,
          widthPx,
          heightPx,
          rect.xPx,
          rect.yPx,
          rect.widthPx,
          rect.heightPx,
          tile.pointer,
          tile.strideElements,
        );
        expectTile(tile, expectedQuads(image, rect), `${widthPx} × ${heightPx}`);
      }
  });

  it('stores what it is given, and planes as well', () => {
    for (const [widthPx, heightPx] of sizeMatrix) {
      tiles.reset();
      const image = testPicture(widthPx, heightPx);
      const from = tiles.tileOf(image, 2);
      const to = tiles.blankTile(widthPx, heightPx, 1);
      tiles.kernels.tileToQuads(
        from.pointer,
        from.strideElements,
        widthPx,
        heightPx,
        to.pointer,
        to.strideElements,
      );
      expectTile(to, tiles.interior(from), `${widthPx} × ${heightPx}`);
      const plane = tiles.tileOf(testPicture(widthPx, heightPx, 1), 2, undefined, 1);
      const copy = tiles.blankTile(widthPx, heightPx, 1, 1);
      tiles.kernels.copyPlane(
        plane.pointer,
        plane.strideElements,
        widthPx,
        heightPx,
        copy.pointer,
        copy.strideElements,
      );
      expectTile(copy, tiles.interior(plane), `${widthPx} × ${heightPx}`);
    }
  });
});

describe('repeating edges inside a tile', () => {
  it('fills everything outside the picture from its nearest pixel, at every size', () => {
    for (const [widthPx, heightPx] of sizeMatrix)
      for (const rect of rectsAround(widthPx, heightPx).slice(0, 3)) {
        tiles.reset();
        const image = testPicture(widthPx, heightPx);
        const tile = tiles.blankTile(rect.widthPx, rect.heightPx, 1);
        const expected = expectedQuads(image, rect);
        for (let y = 0; y < rect.heightPx; y++)
          for (let x = 0; x < rect.widthPx; x++) {
            const [X, Y] = [rect.xPx + x, rect.yPx + y];
            if (X < 0 || Y < 0 || X >= widthPx || Y >= heightPx) continue;
            const at = (y * rect.widthPx + x) * 4;
            tiles
              .floats(tile.pointer + (y * tile.strideElements + x) * 16, 4)
              .set(expected.subarray(at, at + 4));
          }
        tiles.kernels.repeatEdges(
          tile.pointer,
          tile.strideElements,
          rect.xPx,
          rect.yPx,
          rect.widthPx,
          rect.heightPx,
          widthPx,
          heightPx,
        );
        expectTile(tile, expected, `${widthPx} × ${heightPx}`);
      }
  });
});

describe('quads to the body stratum', () => {
  it('rounds to the nearest of 65536 steps and clips, at every size', () => {
    for (const [widthPx, heightPx] of sizeMatrix) {
      tiles.reset();
      const random = seededRandom(widthPx * 31 + heightPx);
      const image = imageOf(widthPx, heightPx, 3, () => f32(1.2 * random() - 0.1));
      const from = tiles.tileOf(image, 1);
      const stride = widthPx + 2;
      const body = tiles.allocate(stride * heightPx * 6);
      tiles.kernels.tileToBody(from.pointer, from.strideElements, widthPx, heightPx, body, stride);
      const samples = new Uint16Array(tiles.memory.buffer, body, stride * heightPx * 3);
      for (let y = 0; y < heightPx; y++)
        for (let i = 0; i < stride * 3; i++) {
          const value = samples[y * stride * 3 + i];
          if (i >= widthPx * 3) expect(value).toBe(0xffff);
          else {
            const exact = Math.min(1, Math.max(0, image.values[y * widthPx * 3 + i])) * 65535;
            // Half a step, and what a float32 product may be off by.
            expect(Math.abs(value - exact)).toBeLessThanOrEqual(0.5 + 0.004);
          }
        }
    }
  });

  it('brings 8-bit samples through unchanged: v ↦ 257 v', () => {
    tiles.reset();
    const image = imageOf(256, 1, 3, (x) => f32(x / 255));
    const from = tiles.tileOf(image, 0);
    const body = tiles.allocate(256 * 6);
    tiles.kernels.tileToBody(from.pointer, from.strideElements, 256, 1, body, 256);
    const samples = new Uint16Array(tiles.memory.buffer, body, 256 * 3);
    for (let x = 0; x < 256; x++) expect(samples[x * 3 + 1]).toBe(257 * x);
  });
});

describe('halving', () => {
  it('takes means of 2 × 2 pixels, at every size', () => {
    for (const [widthPx, heightPx] of sizeMatrix) {
      tiles.reset();
      const image = testPicture(2 * widthPx, 2 * heightPx);
      const from = tiles.tileOf(image, 1);
      const to = tiles.blankTile(widthPx, heightPx, 1);
      tiles.kernels.halveQuads(
        from.pointer,
        from.strideElements,
        widthPx,
        heightPx,
        to.pointer,
        to.strideElements,
      );
      expect(tiles.isHaloUntouched(to)).toBe(true);
      const quads = tiles.interior(to);
      for (let y = 0; y < heightPx; y++)
        for (let x = 0; x < widthPx; x++) {
          let square = 0;
          for (let c = 0; c < 3; c++) {
            const at = (dx: number, dy: number) => sampleAt(image, 2 * x + dx, 2 * y + dy, c);
            const mean = (at(0, 0) + at(1, 0) + at(0, 1) + at(1, 1)) / 4;
            square += mean * mean;
            expect(Math.abs(quads[(y * widthPx + x) * 4 + c] - mean)).toBeLessThan(1e-7);
          }
          expect(Math.abs(quads[(y * widthPx + x) * 4 + 3] - square)).toBeLessThan(4e-7);
        }
    }
  });
});

describe('quads to the ground stratum', () => {
  /** A photo whose alpha tells the place: 8 bits, or the same times 257. */
  const alphaAt = (x: number, y: number) => (x * 7 + y * 13) % 256;

  it('rounds colours to 8 bits and takes alpha from the middle of what a pixel stands for', () => {
    for (const [photoWidth, photoHeight] of [
      [1, 1],
      [5, 3],
      [17, 9],
      [40, 33],
    ])
      for (const level of [0, 1, 2, 3])
        for (const bytes of [1, 2] as const) {
          tiles.reset();
          const side = 2 ** level;
          const [widthPx, heightPx] = [Math.ceil(photoWidth / side), Math.ceil(photoHeight / side)];
          const image = testPicture(widthPx, heightPx);
          const picture = storeQuads(image);
          const photo = new (bytes === 1 ? Uint8Array : Uint16Array)(photoWidth * photoHeight * 4).fill(77);
          for (let y = 0; y < photoHeight; y++)
            for (let x = 0; x < photoWidth; x++)
              photo[(y * photoWidth + x) * 4 + 3] = alphaAt(x, y) * (bytes === 1 ? 1 : 257);
          const photoPointer = tiles.allocate(photo.byteLength);
          tiles.bytes(photoPointer, photo.byteLength).set(new Uint8Array(photo.buffer));
          const [x0, y0] = [Math.min(1, widthPx - 1), Math.min(2, heightPx - 1)];
          const [width, height, stride] = [widthPx - x0, heightPx - y0, widthPx + 1];
          const out = tiles.allocate(stride * height * 4);
          tiles.kernels.quadsToGround(
            picture,
            widthPx,
            x0,
            y0,
            width,
            height,
            out,
            stride,
            photoPointer,
            photoWidth,
            photoHeight,
            4,
            bytes,
            level,
          );
          const ground = tiles.bytes(out, stride * height * 4);
          for (let y = 0; y < height; y++)
            for (let x = 0; x < stride; x++) {
              const at = (y * stride + x) * 4;
              if (x >= width) {
                expect([...ground.subarray(at, at + 4)]).toEqual([255, 255, 255, 255]);
                continue;
              }
              for (let c = 0; c < 3; c++)
                expect(ground[at + c]).toBe(Math.round(sampleAt(image, x0 + x, y0 + y, c) * 255));
              // The pixel's own square of the photo, cut off at the photo's edge, must hold that alpha.
              const [X, Y] = [(x0 + x) * side, (y0 + y) * side];
              const middle = [X, Y].map((start, axis) =>
                Math.min(start + Math.floor(side / 2), (axis === 0 ? photoWidth : photoHeight) - 1),
              );
              expect(ground[at + 3]).toBe(alphaAt(middle[0], middle[1]));
            }
        }
  });

  it('writes three channels where the photo has three', () => {
    tiles.reset();
    const image = blankImage(3, 2, 3, 0.5);
    const out = tiles.allocate(3 * 2 * 3 + 4);
    tiles.kernels.quadsToGround(storeQuads(image), 3, 0, 0, 3, 2, out, 3, tiles.allocate(18), 3, 2, 3, 1, 0);
    expect([...tiles.bytes(out, 18)]).toEqual(new Array(18).fill(128));
    expect([...tiles.bytes(out + 18, 4)]).toEqual([255, 255, 255, 255]);
  });
});
