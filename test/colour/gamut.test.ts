import { execFileSync } from 'node:child_process';
import { existsSync, readFileSync } from 'node:fs';
import { join } from 'node:path';
import { afterAll, beforeAll, describe, expect, it } from 'vitest';
import { p3Profile, srgbProfile } from '../../core/colour/matrixProfile.ts';
import { maskOutOfGamut } from '../../main/colour/colourThread.ts';
import { writePicture } from '../../main/files/writePicture.ts';
import { makeTestHost, type TestHost } from '../host/testHost.ts';

const cmykPath = '/usr/share/color/icc/ghostscript/default_cmyk.icc';
const hasPrint = existsSync(cmykPath) && existsSync('/usr/bin/transicc');

function transicc(input: string, output: string, rows: readonly (readonly number[])[]): number[][] {
  const out = execFileSync('transicc', [`-i${input}`, `-o${output}`, '-t1', '-b', '-n'], {
    input: rows.map((row) => row.join(' ')).join('\n'),
    encoding: 'utf8',
    stdio: ['pipe', 'pipe', 'ignore'],
  });
  const lines = out.trim().split('\n').slice(-rows.length);
  return lines.map((line) => line.trim().split(/\s+/).map(Number));
}

const cube = [0, 51, 102, 153, 204, 255];
const colours = cube.flatMap((r) => cube.flatMap((g) => cube.map((b) => [r, g, b])));
const rgb16 = Uint16Array.from(colours.flat(), (value) => value * 257);

describe('colours outside of what a file can show', () => {
  it('are none where the file’s space holds the photo’s', async () => {
    const outside = await maskOutOfGamut(rgb16, srgbProfile(), p3Profile());
    expect(outside.every((mark) => mark === 0)).toBe(true);
  });

  it('are the strongest of P3 where the file is sRGB, never greys', async () => {
    const outside = await maskOutOfGamut(rgb16, p3Profile(), srgbProfile());
    const isOutside = (...colour: number[]) =>
      outside[colours.findIndex((other) => other.every((part, c) => part === colour[c]))] === 1;
    expect([isOutside(255, 0, 0), isOutside(0, 255, 0), isOutside(255, 51, 0)]).toEqual([true, true, true]);
    for (const grey of cube) expect(isOutside(grey, grey, grey)).toBe(false);
    expect(isOutside(153, 102, 102)).toBe(false);
  });

  it.skipIf(!hasPrint)(
    'in print are those that transicc moves there and back (skipped without it)',
    async () => {
      const outside = await maskOutOfGamut(rgb16, srgbProfile(), new Uint8Array(readFileSync(cmykPath)));
      const asked = transicc('*sRGB', '*Lab', colours);
      const inks = transicc('*sRGB', cmykPath, colours);
      const shown = transicc(cmykPath, '*Lab', inks);
      let [marked, apart] = [0, 0];
      for (const [i, lab] of asked.entries()) {
        const difference = Math.hypot(...lab.map((part, c) => part - shown[i][c]));
        marked += outside[i];
        // Tables are read in 16 bits here and in floating point there: close to the border they may differ.
        if (Math.abs(difference - 4) < 0.7) continue;
        if ((difference > 4 ? 1 : 0) !== outside[i]) apart++;
      }
      expect(apart).toBe(0);
      expect(marked).toBeGreaterThan(20);
      expect(marked).toBeLessThan(190);
    },
  );
});

describe('the host’s overlay', () => {
  let t: TestHost;
  beforeAll(async () => {
    t = await makeTestHost();
  });
  afterAll(() => t.close());

  it('marks the half of a photo that sRGB cannot show', async () => {
    const path = join(t.photos, 'half.png');
    const pixels = new Uint8Array(64 * 48 * 3);
    for (let i = 0; i < 64 * 48; i++) pixels.set(i % 64 < 32 ? [255, 0, 0] : [120, 120, 120], i * 3);
    const iccProfile = p3Profile();
    await writePicture(path, { widthPx: 64, heightPx: 48, channels: 3, pixels, iccProfile, format: 'png' });
    await t.host.offerPath(path);
    const { photoId } = await t.caller.call('openPhoto', { path });
    const asked = { photoId, parameters: {}, longEdgePx: 64 };
    const { header, planes } = await t.caller.callForFrame('markOutOfGamut', { ...asked, profile: 'srgb' });
    const outside = planes.outside!;
    expect(outside).toHaveLength(header.widthPx * header.heightPx);
    const row = [...outside.subarray(24 * 64, 25 * 64)];
    expect(row.slice(0, 20)).toEqual(Array(20).fill(1));
    expect(row.slice(-20)).toEqual(Array(20).fill(0));
    const kept = await t.caller.callForFrame('markOutOfGamut', { ...asked, profile: 'keep' });
    expect(kept.planes.outside!.every((mark) => mark === 0)).toBe(true);
  });

  it('reads no file that nobody chose', async () => {
    const path = join(t.photos, 'half.png');
    const { photoId } = await t.caller.call('openPhoto', { path });
    const profile = { file: '/etc/hostname' };
    await expect(
      t.caller.callForFrame('markOutOfGamut', { photoId, parameters: {}, longEdgePx: 64, profile }),
    ).rejects.toMatchObject({ kind: 'NotAllowed' });
  });
});
