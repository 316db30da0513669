import { execFileSync } from 'node:child_process';
import { fileURLToPath } from 'node:url';
import sharp from 'sharp';
import { beforeAll, describe, expect, it } from 'vitest';
import { writePicture } from '../../main/files/writePicture.ts';
import { temporaryFolder } from '../files/temporaryFolder.ts';

const program = fileURLToPath(new URL('../../dist/main/commandLine.js', import.meta.url));
const folder = temporaryFolder();

const widthPx = 6000;
const heightPx = 96;
const top = 65535;

/** From black to white along the long edge, the same in every row. */
async function writeRamp(path: string): Promise<void> {
  const pixels = new Uint16Array(widthPx * heightPx * 3);
  for (let y = 0, i = 0; y < heightPx; y++)
    for (let x = 0; x < widthPx; x++)
      for (let c = 0; c < 3; c++) pixels[i++] = Math.round((x * top) / (widthPx - 1));
  await writePicture(path, { widthPx, heightPx, channels: 3, pixels, format: 'tiff' });
}

/** Green of the rows well inside, in 8-bit steps. */
async function greenRows(path: string, depth: 8 | 16): Promise<Float64Array[]> {
  const image = sharp(path, { ignoreIcc: true });
  const raw =
    depth === 16 ? image.toColourspace('rgb16').raw({ depth: 'ushort' }) : image.raw({ depth: 'uchar' });
  const { data, info } = await raw.toBuffer({ resolveWithObject: true });
  const samples = depth === 16 ? new Uint16Array(new Uint8Array(data).buffer) : data;
  const step = depth === 16 ? 257 : 1;
  return Array.from({ length: 32 }, (_, row) =>
    Float64Array.from(
      { length: info.width },
      (_, x) => samples[((row + 32) * info.width + x) * info.channels + 1] / step,
    ),
  );
}

function paint(photo: string, out: string, ...words: string[]): void {
  execFileSync(process.execPath, [program, 'paint', photo, '--out', out, ...words], {
    env: { ...process.env, OXGALL_DATA: folder.path('data') },
    stdio: ['ignore', 'ignore', 'pipe'],
  });
}

describe('a ramp of 16 bits, painted with the default preset', () => {
  let fine: Float64Array[];
  let coarse: Float64Array[];

  beforeAll(async () => {
    const photo = folder.path('ramp.tif');
    await writeRamp(photo);
    paint(photo, folder.path('fine.tif'));
    paint(photo, folder.path('coarse.png'), '--depth', '8');
    [fine, coarse] = [
      await greenRows(folder.path('fine.tif'), 16),
      await greenRows(folder.path('coarse.png'), 8),
    ];
  });

  it('keeps at least 4,000 levels', () => {
    const levels = new Set<number>();
    for (const row of fine) for (const value of row) levels.add(Math.round(value * 257));
    expect(levels.size).toBeGreaterThanOrEqual(4000);
  });

  it('goes to 8 bits without leaving the two steps nearest to it', () => {
    let furthest = 0;
    for (const [y, row] of coarse.entries())
      for (const [x, value] of row.entries()) furthest = Math.max(furthest, Math.abs(value - fine[y][x]));
    expect(furthest).toBeLessThan(1);
  });

  it('goes to 8 bits without bands: the mean over a small patch is that of 16 bits', () => {
    // A step of 8 bits is 23 pixels wide here. Without dithering the mean over 12 columns is up to half a step off;
    // the mean of 12 × 32 draws with a deviation of at most 1/2 strays by 5 × 0.5 / √384 at the very most.
    const columns = 12;
    let furthest = 0;
    for (let left = 0; left + columns <= widthPx; left += columns) {
      let sum = 0;
      for (const [y, row] of coarse.entries())
        for (let x = left; x < left + columns; x++) sum += row[x] - fine[y][x];
      furthest = Math.max(furthest, Math.abs(sum) / (columns * coarse.length));
    }
    expect(furthest).toBeLessThan((5 * 0.5) / Math.sqrt(columns * coarse.length));
  });

  it('gives the same bytes again', async () => {
    paint(folder.path('ramp.tif'), folder.path('again.png'), '--depth', '8', '--workers', '1');
    expect(await greenRows(folder.path('again.png'), 8)).toEqual(coarse);
  });
});
