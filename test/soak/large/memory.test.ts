import { mkdir, mkdtemp, readdir, rm } from 'node:fs/promises';
import { join } from 'node:path';
import sharp from 'sharp';
import { afterAll, beforeAll, expect, it } from 'vitest';
import { spillFolder } from '../../../main/files/spillFile.ts';
import { makeLargePhoto, type Painted, startPainting } from './largePhoto.ts';

let folder = '';
let spills = '';
beforeAll(async () => {
  folder = await mkdtemp(join(await spillFolder(), 'oxgall-large-'));
  spills = join(folder, 'spills');
  await mkdir(spills);
});
afterAll(() => rm(folder, { recursive: true, force: true }));

async function paint(megapixels: number): Promise<Painted> {
  const photo = join(folder, `${megapixels}.jpg`);
  const out = join(folder, `${megapixels}.png`);
  await makeLargePhoto(photo, megapixels);
  const painted = await startPainting(photo, out, spills).painted();
  expect(await sharp(out, { limitInputPixels: false }).metadata()).toMatchObject({
    format: 'png',
    width: painted.width,
    height: painted.height,
  });
  expect(Math.abs((painted.width * painted.height) / (megapixels * 1e6) - 1)).toBeLessThan(0.01);
  expect(await readdir(spills)).toEqual([]);
  await Promise.all([photo, out].map((path) => rm(path)));
  const { milliseconds, peakMemoryBytes } = painted;
  process.stdout.write(
    `${megapixels} megapixels: ${Math.round(milliseconds.total / 100) / 10} s, ${Math.round(peakMemoryBytes / 1e6)} MB\n`,
  );
  return painted;
}

it('100 megapixels take 2.5 GB at most, and 4.4 times the time of 25', async () => {
  const small = await paint(25);
  const large = await paint(100);
  expect(large.peakMemoryBytes).toBeLessThan(2.5e9);
  expect(large.milliseconds.total / small.milliseconds.total).toBeLessThan(4.4);
}, 1_800_000);

it('250 megapixels take 4 GB at most', async () => {
  expect((await paint(250)).peakMemoryBytes).toBeLessThan(4e9);
}, 1_800_000);
