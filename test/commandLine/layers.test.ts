import { spawn } from 'node:child_process';
import { copyFile, mkdir, readdir, writeFile } from 'node:fs/promises';
import { join } from 'node:path';
import { fileURLToPath } from 'node:url';
import sharp from 'sharp';
import { beforeAll, describe, expect, it } from 'vitest';
import { largestDifference, readOpenRaster, readStrataFolder } from '../files/layeredFiles.ts';
import { temporaryFolder } from '../files/temporaryFolder.ts';
import { photographs } from '../fixtures/photographs.ts';

const program = fileURLToPath(new URL('../../dist/main/commandLine.js', import.meta.url));
const folder = temporaryFolder();

function start(...words: string[]) {
  const child = spawn(process.execPath, [program, 'paint', ...words], {
    cwd: folder.path('.'),
    // Recipes of photos that were moved come from there: nobody else's may.
    env: { ...process.env, OXGALL_DATA: folder.path('data') },
  });
  let [out, err] = ['', ''];
  child.stdout.on('data', (text) => {
    out += text;
  });
  child.stderr.on('data', (text) => {
    err += text;
  });
  const ended = new Promise<{ code: number | null; out: string; err: string }>((resolve) =>
    child.on('close', (code) => resolve({ code, out, err })),
  );
  return { child, ended };
}

let large: string;
beforeAll(async () => {
  large = folder.path('large.png');
  // Noise, so that packing the layers takes long enough to be interrupted.
  const noise = { type: 'gaussian', mean: 128, sigma: 40 } as const;
  await sharp({ create: { width: 2400, height: 1600, channels: 3, noise, background: 'black' } })
    .png({ compressionLevel: 1 })
    .toFile(large);
});

const plain = ['--set', 'body.method=quadrant', '--set', 'body.brush=4px'];

describe('oxgall paint --layers', () => {
  it('writes an OpenRaster file or a folder of strata beside the painting, and says where', async () => {
    for (const kind of ['ora', 'tiff']) {
      const { ended } = start(photographs.nagasakiBoats, '--out', `${kind}.jpg`, '--layers', kind, '--json');
      const { code, out } = await ended;
      expect(code).toBe(0);
      expect(JSON.parse(out)).toMatchObject({
        output: `${kind}.jpg`,
        layers: kind === 'ora' ? 'ora.ora' : 'tiff.strata',
      });
    }
    const { layers, merged } = await readOpenRaster(folder.path('ora.ora'));
    expect(largestDifference(layers, merged)).toBeLessThanOrEqual(1.0001 / 255);
    const strata = await readStrataFolder(folder.path('tiff.strata'));
    expect(largestDifference(strata.layers, strata.composed)).toBeLessThanOrEqual(1.0001 / 255);
  });

  it('are kept in the recipe, and written again by it until somebody says none', async () => {
    const photo = folder.path('kept.jpg');
    await copyFile(photographs.nagasakiBoats, photo);
    const layersOf = async (...words: string[]) => {
      const { out } = await start(photo, '--out', 'kept.png', '--json', ...plain, ...words).ended;
      return JSON.parse(out).layers;
    };
    expect(await layersOf()).toBeNull();
    expect(await layersOf('--layers', 'ora', '--keep')).toBe('kept.ora');
    expect(await layersOf()).toBe('kept.ora');
    expect(await layersOf('--layers', 'none')).toBeNull();
  });

  it('refuses another kind, and a folder of somebody else’s', async () => {
    const { code, err } = await start(photographs.nagasakiBoats, '--layers', 'gif').ended;
    expect([code, err]).toEqual([2, 'oxgall: Expected ora, tiff or none for --layers, received gif\n']);
    await mkdir(folder.path('mine.strata'));
    await writeFile(folder.path('mine.strata/letter.txt'), 'kept');
    const ended = await start(photographs.nagasakiBoats, '--out', 'mine.png', '--layers', 'tiff').ended;
    expect(ended.code).toBe(1);
    expect(ended.err).toMatch(/mine\.strata: is there already and holds something else/);
    expect(await readdir(folder.path('mine.strata'))).toEqual(['letter.txt']);
    // Found out before the painting.
    expect(await readdir(folder.path('.'))).not.toContain('mine.png');
  });

  for (const kind of ['ora', 'tiff'] as const)
    it(`killed while the ${kind} is written leaves nothing half-done, nor rubbish after the next run`, async () => {
      const out = folder.path(`killed-${kind}`);
      await mkdir(out);
      const words = [large, '--out', join(out, 'a.png'), '--layers', kind, ...plain];
      const { child, ended } = start(...words);
      let isOver = false;
      void ended.then(() => {
        isOver = true;
      });
      // The picture is there, something unfinished is beside it: the layers are being written.
      for (;;) {
        const names = await readdir(out);
        const isWriting = names.includes('a.png') && names.some((name) => name.endsWith('.part'));
        if (isWriting || isOver) break;
        await new Promise((resolve) => setTimeout(resolve, 3));
      }
      expect(isOver).toBe(false);
      child.kill('SIGKILL');
      await ended;
      const left = await readdir(out);
      expect(left).toHaveLength(2);
      expect(left.filter((name) => /\.(ora|strata)$/.test(name))).toEqual([]);
      expect((await start(...words).ended).code).toBe(0);
      expect((await readdir(out)).sort()).toEqual([kind === 'ora' ? 'a.ora' : 'a.strata', 'a.png'].sort());
    });
});
