import { execFileSync } from 'node:child_process';
import { existsSync } from 'node:fs';
import { writeFile } from 'node:fs/promises';
import { join } from 'node:path';
import { describe, expect, it } from 'vitest';
import { ciede2000 } from '../../core/colour/ciede2000.ts';
import type { Triple } from '../../core/colour/lab.ts';
import { p3Profile, srgbProfile, wideProfile } from '../../core/colour/matrixProfile.ts';
import { writePicture } from '../../main/files/writePicture.ts';
import { chromiumFound } from './chromium.ts';
import { settled } from './openWindow.ts';
import { usePhotoWindows } from './photoWindow.ts';
import { pixelAt, readCanvas } from './readWindow.ts';

/* Which colours should be on the canvas is asked of `transicc`, from the system's own LittleCMS tools. */
const canAsk = existsSync('/usr/bin/transicc');

function transicc(input: string, output: string, rows: readonly (readonly number[])[]): number[][] {
  const out = execFileSync('transicc', [`-i${input}`, `-o${output}`, '-t1', '-b', '-n'], {
    input: rows.map((row) => row.join(' ')).join('\n'),
    encoding: 'utf8',
    stdio: ['pipe', 'pipe', 'ignore'],
  });
  const lines = out.trim().split('\n').slice(-rows.length);
  return lines.map((line) => line.trim().split(/\s+/).map(Number));
}

/** Flat fields, six by four, over the whole cube. */
const columns = 6;
const fieldPx = 80;
const fields = Array.from({ length: 24 }, (_, i) => [
  [0, 90, 170, 255][i % 4],
  [0, 130, 255][Math.floor(i / 4) % 3],
  [40, 255][Math.floor(i / 12)],
]);

describe.skipIf(!chromiumFound.path || !canAsk)('colours in a real window (skipped without transicc)', () => {
  const room = usePhotoWindows('colours');
  const photos = { p3: p3Profile(), wide: wideProfile(), srgb: srgbProfile() };

  it.each([
    ['p3', 'srgb'],
    ['wide', 'srgb'],
    ['p3', 'p3'],
    ['wide', 'p3'],
    ['srgb', 'p3'],
  ] as const)('of a photo in %s are those of LittleCMS on a screen of %s', async (photo, screen) => {
    const widthPx = columns * fieldPx;
    const heightPx = (fields.length / columns) * fieldPx;
    const pixels = new Uint8Array(widthPx * heightPx * 3);
    const fieldAt = (x: number, y: number) => Math.floor(y / fieldPx) * columns + Math.floor(x / fieldPx);
    for (let y = 0; y < heightPx; y++)
      for (let x = 0; x < widthPx; x++) pixels.set(fields[fieldAt(x, y)], (y * widthPx + x) * 3);
    const path = join(room.folder, `${photo}-${screen}.png`);
    const picture = { widthPx, heightPx, channels: 3, pixels, iccProfile: photos[photo] } as const;
    await writePicture(path, { ...picture, format: 'png' });
    const window = await room.open({ path, screen: screen === 'p3' ? 'display-p3-d65' : 'srgb' });
    const { page } = window;
    const isWide = await page.evaluate(() => matchMedia('(color-gamut: p3)').matches);
    expect(isWide).toBe(screen === 'p3');
    await page.keyboard.press('1');
    await settled(page);
    // The photograph alone: what ink does to colours is none of this test's business.
    await page.keyboard.down('l');
    const view = await page.locator('.stage-hold').getAttribute('data-view');
    const [scale, originX, originY] = view!.split(' ').map(Number);
    const from = join(room.folder, 'from.icc');
    const to = join(room.folder, 'to.icc');
    await writeFile(from, photos[photo]);
    await writeFile(to, photos[screen]);
    const asked = transicc(from, to, fields).map((colour) =>
      colour.map((part) => Math.min(255, Math.max(0, part))),
    );
    const labAsked = transicc(to, '*Lab', asked);
    const look = async () => {
      const shown = await readCanvas(page, 'stage', screen === 'p3' ? 'display-p3' : 'srgb');
      const ours = fields.map((_, i) => {
        const x = ((i % columns) + 0.5) * fieldPx;
        const y = (Math.floor(i / columns) + 0.5) * fieldPx;
        return pixelAt(shown, Math.round(originX + x * scale), Math.round(originY + y * scale)).slice(0, 3);
      });
      const labOurs = transicc(to, '*Lab', ours);
      const apart = labOurs.map((lab, i) =>
        ciede2000(lab as unknown as Triple, labAsked[i] as unknown as Triple),
      );
      return { ours, apart, worst: apart.indexOf(Math.max(...apart)) };
    };
    let { ours, apart, worst } = await look();
    // A busy machine takes its time to lift the paint off.
    for (let again = 0; again < 20 && apart[worst] > 1; again++) {
      await page.waitForTimeout(200);
      ({ ours, apart, worst } = await look());
    }
    expect(apart[worst], `${fields[worst]}: ${ours[worst]} for ${asked[worst]}`).toBeLessThanOrEqual(1);
    expect(apart.reduce((sum, one) => sum + one) / apart.length).toBeLessThanOrEqual(0.3);
    await room.close(window);
  });
});
