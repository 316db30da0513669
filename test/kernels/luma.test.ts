import { describe, expect, it } from 'vitest';
import { imageOf, sampleAt } from '../../core/kernels/reference/referenceImage.ts';
import { seededRandom, testPicture } from './testPictures.ts';
import { largestDifference, sizeMatrix, WasmTiles } from './wasmTiles.ts';

const tiles = new WasmTiles();

// ITU-R BT.601.
const luma601 = (r: number, g: number, b: number) => 0.299 * r + 0.587 * g + 0.114 * b;

describe('luma of a body', () => {
  it('is the mean over squares of the picture, its edge repeated, at every size and scale', () => {
    for (const [widthPx, heightPx] of sizeMatrix)
      for (const shift of [0, 1, 2]) {
        tiles.reset();
        const random = seededRandom(widthPx * 50 + heightPx);
        const samples = Uint16Array.from({ length: widthPx * heightPx * 3 }, () =>
          Math.floor(random() * 65536),
        );
        const body = tiles.allocate(samples.byteLength);
        new Uint16Array(tiles.memory.buffer, body, samples.length).set(samples);
        const side = 2 ** shift;
        const [smallWidth, smallHeight] = [Math.ceil(widthPx / side), Math.ceil(heightPx / side)];
        const full = imageOf(widthPx, heightPx, 1, (x, y) => {
          const at = (y * widthPx + x) * 3;
          return luma601(samples[at], samples[at + 1], samples[at + 2]) / 65535;
        });
        const small = imageOf(smallWidth, smallHeight, 1, (x, y) => {
          let sum = 0;
          for (let j = 0; j < side; j++)
            for (let i = 0; i < side; i++) sum += sampleAt(full, x * side + i, y * side + j);
          return sum / (side * side);
        });
        const [x0, y0, width, height] = [-3, -2, smallWidth + 7, smallHeight + 4];
        const target = tiles.blankTile(width, height, 1, 1);
        tiles.kernels.lumaFromBody(
          body,
          0,
          0,
          widthPx,
          widthPx,
          heightPx,
          shift,
          x0,
          y0,
          width,
          height,
          target.pointer,
          target.strideElements,
        );
        expect(tiles.isHaloUntouched(target)).toBe(true);
        const expected = imageOf(width, height, 1, (x, y) => sampleAt(small, x0 + x, y0 + y));
        const name = `${widthPx} × ${heightPx}, shift ${shift}`;
        expect(largestDifference(tiles.interior(target), expected.values), name).toBeLessThan(5e-7);
      }
  });

  it('reads the same from a window of the picture', () => {
    tiles.reset();
    const [widthPx, heightPx] = [40, 30];
    const random = seededRandom(8);
    const samples = Uint16Array.from({ length: widthPx * heightPx * 3 }, () => Math.floor(random() * 65536));
    const lumaOf = (pointer: number, x: number, y: number, windowWidth: number) => {
      const target = tiles.blankTile(5, 4, 0, 1);
      const { pointer: to, strideElements } = target;
      tiles.kernels.lumaFromBody(
        pointer,
        x,
        y,
        windowWidth,
        widthPx,
        heightPx,
        1,
        8,
        6,
        5,
        4,
        to,
        strideElements,
      );
      return tiles.interior(target);
    };
    const store = (x0: number, y0: number, width: number, height: number) => {
      const pointer = tiles.allocate(width * height * 6);
      const to = new Uint16Array(tiles.memory.buffer, pointer, width * height * 3);
      for (let y = 0; y < height; y++)
        to.set(
          samples.subarray(((y0 + y) * widthPx + x0) * 3, ((y0 + y) * widthPx + x0 + width) * 3),
          y * width * 3,
        );
      return pointer;
    };
    const whole = lumaOf(store(0, 0, widthPx, heightPx), 0, 0, widthPx);
    expect(lumaOf(store(16, 12, 10, 8), 16, 12, 10)).toEqual(whole);
  });
});

describe('luma of quads', () => {
  it('is 0.299 R + 0.587 G + 0.114 B at every size', () => {
    for (const [widthPx, heightPx] of sizeMatrix) {
      tiles.reset();
      const image = testPicture(widthPx, heightPx);
      const from = tiles.tileOf(image, 1);
      const to = tiles.blankTile(widthPx, heightPx, 1, 1);
      tiles.kernels.lumaFromQuads(
        from.pointer,
        from.strideElements,
        widthPx,
        heightPx,
        to.pointer,
        to.strideElements,
      );
      expect(tiles.isHaloUntouched(to)).toBe(true);
      const expected = imageOf(widthPx, heightPx, 1, (x, y) =>
        luma601(sampleAt(image, x, y, 0), sampleAt(image, x, y, 1), sampleAt(image, x, y, 2)),
      );
      expect(largestDifference(tiles.interior(to), expected.values)).toBeLessThan(2e-7);
    }
  });
});
