import { execFileSync } from 'node:child_process';
import { existsSync, readFileSync } from 'node:fs';
import { join } from 'node:path';
import { afterAll, beforeAll, describe, expect, it } from 'vitest';
import { markOutside } from '../../core/colour/gamutMarks.ts';
import { p3Profile, srgbProfile } from '../../core/colour/matrixProfile.ts';
import { ColourEngine } from '../../main/colour/colourEngine.ts';
import { gamutTable } from '../../main/colour/gamutTable.ts';
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
const rgba = Uint8Array.from(colours.flatMap((colour) => [...colour, 255]));

async function marksOf(from: Uint8Array, print: Uint8Array): Promise<Uint8Array> {
  const marks = new Uint8Array(colours.length);
  const count = markOutside(rgba.slice(), gamutTable(await ColourEngine.load(), from, print), marks);
  expect(count).toBe(marks.reduce((sum, mark) => sum + mark, 0));
  return marks;
}

describe('colours outside of what a file can show', () => {
  it('are none where the file’s space holds the photo’s', async () => {
    const outside = await marksOf(srgbProfile(), p3Profile());
    expect(outside.every((mark) => mark === 0)).toBe(true);
  });

  it('are the strongest of P3 where the file is sRGB, never greys', async () => {
    const outside = await marksOf(p3Profile(), srgbProfile());
    const isOutside = (...colour: number[]) =>
      outside[colours.findIndex((other) => other.every((part, c) => part === colour[c]))] === 1;
    expect([isOutside(255, 0, 0), isOutside(0, 255, 0), isOutside(255, 51, 0)]).toEqual([true, true, true]);
    for (const grey of cube) expect(isOutside(grey, grey, grey)).toBe(false);
    expect(isOutside(153, 102, 102)).toBe(false);
  });

  it.skipIf(!hasPrint)(
    'in print are those that transicc moves there and back (skipped without it)',
    async () => {
      const outside = await marksOf(srgbProfile(), new Uint8Array(readFileSync(cmykPath)));
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

  const open = async (iccProfile: Uint8Array) => {
    const path = join(t.photos, 'red.png');
    const pixels = Uint8Array.from({ length: 64 * 48 * 3 }, (_, i) => (i % 3 === 0 ? 255 : 0));
    await writePicture(path, { widthPx: 64, heightPx: 48, channels: 3, pixels, iccProfile, format: 'png' });
    await t.host.offerPath(path);
    return (await t.caller.call('openPhoto', { path })).photoId;
  };

  it('is told what sRGB makes of a photo in Display P3', async () => {
    const photoId = await open(p3Profile());
    const { planes } = await t.caller.callForFrame('readGamutTable', { photoId, profile: 'srgb' });
    const marks = new Uint8Array(2);
    markOutside(Uint8Array.from([255, 0, 0, 255, 120, 120, 120, 255]), planes.table as Uint16Array, marks);
    expect([...marks]).toEqual([1, 0]);
  });

  it('is told nothing where the file keeps the photo’s colours', async () => {
    const photoId = await open(srgbProfile());
    for (const profile of ['keep', 'srgb'] as const) {
      const { planes } = await t.caller.callForFrame('readGamutTable', { photoId, profile });
      expect(planes.table).toBeUndefined();
    }
  });

  it('reads no file that nobody chose', async () => {
    const photoId = await open(srgbProfile());
    const profile = { file: '/etc/hostname' };
    await expect(t.caller.callForFrame('readGamutTable', { photoId, profile })).rejects.toMatchObject({
      kind: 'NotAllowed',
    });
  });
});
