import { execFileSync } from 'node:child_process';
import { existsSync } from 'node:fs';
import { readFile } from 'node:fs/promises';
import sharp from 'sharp';
import { describe, expect, it } from 'vitest';
import { writePicture } from '../../main/files/writePicture.ts';
import { temporaryFolder } from '../files/temporaryFolder.ts';

/*
 * What `jpgicc` and `tificc`, of the system's own LittleCMS tools on top of libjpeg and libtiff, make of a file of four
 * inks: whether full ink is full ink, and the profile the right one.
 */
const folder = temporaryFolder();
const cmykPath = '/usr/share/color/icc/ghostscript/default_cmyk.icc';
const hasTools = ['/usr/bin/jpgicc', '/usr/bin/tificc', '/usr/bin/transicc', cmykPath].every((path) =>
  existsSync(path),
);

/** Inside of sRGB, so that nothing is cut off on the way. */
const inks = [
  [0, 0, 0, 0],
  [90, 60, 20, 30],
  [20, 180, 150, 10],
  [30, 20, 20, 230],
  [50, 20, 120, 0],
];

/** Each ink colour as a block that JPEG's own blocks do not cut. */
const blockPx = 16;
const widthPx = inks.length * blockPx;

function chart(): Uint8Array {
  const pixels = new Uint8Array(widthPx * blockPx * 4);
  for (let i = 0; i < widthPx * blockPx; i++) pixels.set(inks[Math.floor((i % widthPx) / blockPx)], i * 4);
  return pixels;
}

function expectedRgb(): number[][] {
  const out = execFileSync('transicc', [`-i${cmykPath}`, '-o*sRGB', '-t0', '-n'], {
    input: inks.map((ink) => ink.map((part) => (part * 100) / 255).join(' ')).join('\n'),
    encoding: 'utf8',
    stdio: ['pipe', 'pipe', 'ignore'],
  });
  const rows = out.trim().split('\n').slice(-inks.length);
  return rows.map((row) => row.trim().split(/\s+/).map(Number));
}

describe.skipIf(!hasTools)('a file of four inks (skipped without the LittleCMS tools)', () => {
  it.each([
    ['jpeg', 'jpgicc', 4],
    ['tiff', 'tificc', 1],
  ] as const)('%s is read as those inks by %s', async (format, tool, tolerance) => {
    const path = folder.path(`inks.${format}`);
    await writePicture(path, {
      widthPx,
      heightPx: blockPx,
      channels: 4,
      space: 'CMYK',
      pixels: chart(),
      iccProfile: new Uint8Array(await readFile(cmykPath)),
      format,
      quality: 100,
    });
    const seen = folder.path(`seen.${format}`);
    execFileSync(tool, ['-t0', path, seen], { stdio: 'ignore' });
    const { data, info } = await sharp(seen, { ignoreIcc: true })
      .removeAlpha()
      .raw()
      .toBuffer({ resolveWithObject: true });
    for (const [k, expected] of expectedRgb().entries()) {
      const at = ((blockPx / 2) * info.width + (k + 0.5) * blockPx) * info.channels;
      for (let c = 0; c < 3; c++)
        expect(Math.abs(data[at + c] - expected[c]), `ink ${k}, channel ${c}`).toBeLessThanOrEqual(tolerance);
    }
  });
});
