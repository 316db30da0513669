import { writeFile } from 'node:fs/promises';
import { join } from 'node:path';
import sharp from 'sharp';
import { afterEach, beforeEach, describe, expect, it } from 'vitest';
import { colourTableSide, tableNumber, throughTable } from '../../core/colour/colourTable.ts';
import { p3Profile, srgbProfile, wideProfile } from '../../core/colour/matrixProfile.ts';
import { writePicture } from '../../main/files/writePicture.ts';
import { makeTestHost, type TestHost } from './testHost.ts';

let t: TestHost;
beforeEach(async () => {
  t = await makeTestHost();
});
afterEach(() => t.close());

async function open(name: string, colour: readonly number[], iccProfile: Uint8Array | undefined) {
  const path = join(t.photos, name);
  const pixels = Uint8Array.from({ length: 64 * 48 * 3 }, (_, i) => colour[i % 3]);
  await writePicture(path, { widthPx: 64, heightPx: 48, channels: 3, pixels, iccProfile, format: 'png' });
  await t.host.offerPath(path);
  return (await t.caller.call('openPhoto', { path })).photoId;
}

const small = { parameters: {}, longEdgePx: 64 };

/*
 * Found with transicc of LittleCMS 2.14: Display P3 numbers, and the sRGB numbers of the same colours.
 */
const shownColours: [string, number[], number[]][] = [
  ['grey', [120, 120, 120], [120, 120, 120]],
  ['the red that P3 needs less of', [234, 51, 35], [255, 0, 0]],
  ['a green of the meadow', [106, 168, 79], [84, 170, 65]],
  ['a skin tone', [197, 155, 127], [205, 153, 123]],
];

describe('colours on the screen', () => {
  it.each(shownColours)('of a Display P3 photo are those of sRGB: %s', async (_, p3, srgb) => {
    const photoId = await open('p3.png', p3, p3Profile());
    const { planes } = await t.caller.callForFrame('paintSmallPicture', { photoId, ...small });
    const rgba = planes.rgba!;
    for (let c = 0; c < 3; c++)
      expect(Math.abs(rgba[c] - srgb[c]), `${[...rgba.subarray(0, 3)]}`).toBeLessThanOrEqual(2);
    // The canvas is told what the numbers are: browsers know this space.
    const { header, planes: way } = await t.caller.callForFrame('readScreenTable', { photoId });
    expect([header.space, way.table]).toEqual(['p3', undefined]);
  });

  it('of a photo in another space come through a table to the canvas that there is', async () => {
    const photoId = await open('wide.png', [120, 180, 60], wideProfile());
    for (const screen of ['srgb', 'p3'] as const) {
      const { header, planes } = await t.caller.callForFrame('readScreenTable', { photoId, screen });
      expect([header.space, planes.table?.length]).toEqual([screen, 3 * colourTableSide ** 3]);
    }
  });

  it.each([
    ['sRGB, as we write it', srgbProfile()],
    ['no profile', undefined],
  ])('are the photo’s own numbers: %s', async (_, profile) => {
    const photoId = await open('plain.png', [234, 51, 35], profile);
    expect((await t.caller.callForFrame('readScreenTable', { photoId })).planes.table).toBeUndefined();
    const { planes } = await t.caller.callForFrame('paintSmallPicture', { photoId, ...small });
    expect([...planes.rgba!.subarray(0, 3)]).toEqual([234, 51, 35]);
  });

  it('are found anew for a photo that has become another', async () => {
    const first = await open('same.png', [234, 51, 35], p3Profile());
    const before = await t.caller.callForFrame('readScreenTable', { photoId: first });
    expect(before.header.space).toBe('p3');
    await t.caller.call('closePhoto', { photoId: first });
    const plain = await sharp({ create: { width: 64, height: 48, channels: 3, background: 'red' } })
      .png()
      .toBuffer();
    await writeFile(join(t.photos, 'same.png'), plain);
    const { photoId } = await t.caller.call('openPhoto', { path: join(t.photos, 'same.png') });
    expect((await t.caller.callForFrame('readScreenTable', { photoId })).header.space).toBe('srgb');
  });
});

describe('a colour table', () => {
  const table = (way: (r: number, g: number, b: number) => number[]) => {
    const step = 255 / (colourTableSide - 1);
    const points: number[] = [];
    for (let b = 0; b < colourTableSide; b++)
      for (let g = 0; g < colourTableSide; g++)
        for (let r = 0; r < colourTableSide; r++) points.push(...way(r * step, g * step, b * step));
    return Uint16Array.from(points, tableNumber);
  };

  it('that changes nothing changes nothing by more than its own rounding', () => {
    const rgba = Uint8Array.from({ length: 256 * 64 * 4 }, (_, i) => (i * 7919) & 255);
    const before = rgba.slice();
    throughTable(
      rgba,
      table((r, g, b) => [r, g, b]),
    );
    for (let i = 0; i < rgba.length; i++)
      expect(Math.abs(rgba[i] - before[i])).toBeLessThanOrEqual(i % 4 === 3 ? 0 : 1);
  });

  it('follows a linear mixture between its points, whichever channel is largest', () => {
    const mix = (r: number, g: number, b: number) => [
      0.5 * r + 0.3 * g + 0.2 * b,
      0.1 * r + 0.8 * g + 0.1 * b,
      0.6 * b + 0.4 * r,
    ];
    const mixed = table(mix);
    const colours = [10, 77, 130, 201, 254];
    for (const r of colours)
      for (const g of colours)
        for (const b of colours) {
          const rgba = Uint8Array.from([r, g, b, 9]);
          throughTable(rgba, mixed);
          for (const [c, value] of mix(r, g, b).entries())
            expect(Math.abs(rgba[c] - value)).toBeLessThanOrEqual(1.01);
        }
  });
});
