import { execFileSync } from 'node:child_process';
import { existsSync } from 'node:fs';
import { copyFile, mkdtemp, rm } from 'node:fs/promises';
import { join } from 'node:path';
import type { Page } from 'playwright-core';
import sharp from 'sharp';
import { describe, expect, it } from 'vitest';
import { seriousFindings } from './axe.ts';
import { chromiumFound } from './chromium.ts';
import { keepScreen, settled } from './openWindow.ts';
import { untilSaved, usePhotoWindows } from './photoWindow.ts';
import { countDifferent, drawn, pixelAt, readCanvas, type WindowPixels } from './readWindow.ts';

/* What print can hold is asked of `transicc`, from the system's own LittleCMS tools, through a profile with tables. */
const cmykPath = '/usr/share/color/icc/ghostscript/default_cmyk.icc';
const canAsk = existsSync(cmykPath) && existsSync('/usr/bin/transicc');

/** CIE 1976 differences between colours of sRGB and what comes back from print. */
function movedInPrint(colours: readonly (readonly number[])[]): number[] {
  const through = (input: string, output: string, rows: readonly (readonly number[])[]) => {
    const out = execFileSync('transicc', [`-i${input}`, `-o${output}`, '-t1', '-b', '-n'], {
      input: rows.map((row) => row.join(' ')).join('\n'),
      encoding: 'utf8',
      stdio: ['pipe', 'pipe', 'ignore'],
    });
    const lines = out.trim().split('\n').slice(-rows.length);
    return lines.map((line) => line.trim().split(/\s+/).map(Number));
  };
  const asked = through('*sRGB', '*Lab', colours);
  const shown = through(cmykPath, '*Lab', through('*sRGB', cmykPath, colours));
  return asked.map((lab, i) => Math.hypot(...lab.map((part, c) => part - shown[i][c])));
}

/** Flat fields, six by four: greys, colours of a landscape, and stronger and stronger ones. */
const fields = [
  [20, 20, 20],
  [90, 90, 90],
  [160, 160, 160],
  [235, 235, 235],
  [120, 96, 70],
  [96, 110, 84],
  [140, 150, 160],
  [190, 160, 130],
  [200, 90, 60],
  [200, 40, 30],
  [255, 0, 0],
  [255, 90, 0],
  [240, 200, 40],
  [255, 255, 0],
  [150, 200, 60],
  [60, 220, 40],
  [0, 255, 0],
  [0, 255, 160],
  [0, 200, 220],
  [0, 255, 255],
  [40, 90, 200],
  [0, 0, 255],
  [140, 60, 190],
  [255, 0, 255],
];
const columns = 6;
const fieldPx = 120;

async function writeFields(path: string): Promise<void> {
  const widthPx = columns * fieldPx;
  const heightPx = (fields.length / columns) * fieldPx;
  const pixels = Buffer.alloc(widthPx * heightPx * 3);
  for (let y = 0; y < heightPx; y++)
    for (let x = 0; x < widthPx; x++)
      pixels.set(fields[Math.floor(y / fieldPx) * columns + Math.floor(x / fieldPx)], (y * widthPx + x) * 3);
  await sharp(pixels, { raw: { width: widthPx, height: heightPx, channels: 3 } })
    .png()
    .toFile(path);
}

const sign = (page: Page) => page.locator('.gamut-sign');

/** Chooses an ICC file in our own list of folders, as somebody would. */
async function choosePaper(page: Page, fileName: string): Promise<void> {
  await page.keyboard.press('f');
  await page.getByRole('combobox', { name: 'Colours', exact: true }).selectOption('choose');
  await page
    .getByRole('dialog')
    .getByRole('button', { name: new RegExp(`^${fileName}`) })
    .click();
  await page.getByRole('dialog').waitFor({ state: 'detached' });
}

const chooseColours = (page: Page, name: string) =>
  page.getByRole('combobox', { name: 'Colours', exact: true }).selectOption({ label: name });

/** Where the picture's pixel lies on the canvas. */
async function placeOf(page: Page): Promise<(x: number, y: number) => [number, number]> {
  const view = await page.locator('.stage-hold').getAttribute('data-view');
  const [scale, originX, originY] = view!.split(' ').map(Number);
  return (x, y) => [Math.round(originX + x * scale), Math.round(originY + y * scale)];
}

/** The share of pixels that differ between two pictures in the middle of a field. */
function hatchedShare(
  a: WindowPixels,
  b: WindowPixels,
  field: number,
  place: (x: number, y: number) => [number, number],
): number {
  const [column, row] = [field % columns, Math.floor(field / columns)];
  const [left, top] = place((column + 0.3) * fieldPx, (row + 0.3) * fieldPx);
  const [right, bottom] = place((column + 0.7) * fieldPx, (row + 0.7) * fieldPx);
  let [different, count] = [0, 0];
  for (let y = top; y < bottom; y++)
    for (let x = left; x < right; x++) {
      const [one, other] = [pixelAt(a, x, y), pixelAt(b, x, y)];
      if (one.some((part, c) => part !== other[c])) different += 1;
      count += 1;
    }
  return different / count;
}

describe.skipIf(!chromiumFound.path || !canAsk)(
  'what the paper cannot hold, in a real window (skipped without transicc)',
  () => {
    const room = usePhotoWindows('gamut');

    it('is marked where LittleCMS says so, at any zoom, and no longer when the photo’s colours are kept', async () => {
      const path = join(room.folder, 'fields.png');
      await writeFields(path);
      await copyFile(cmykPath, join(room.folder, 'paper.icc'));
      const window = await room.open({ path });
      const { page } = window;
      const plain = await readCanvas(page, 'stage');
      await choosePaper(page, 'paper.icc');
      await sign(page)
        .getByText(/% of the picture is more saturated than this paper/)
        .waitFor();
      expect(await seriousFindings(page)).toEqual([]);
      await keepScreen(page, 'gamut-fields');
      const moved = movedInPrint(fields);
      const check = async (marked: WindowPixels, unmarked: WindowPixels, which: string) => {
        const place = await placeOf(page);
        for (const [i, colour] of fields.entries()) {
          const share = hatchedShare(marked, unmarked, i, place);
          if (moved[i] > 5) expect(share, `${which}: ${colour}, moved by ${moved[i]}`).toBeGreaterThan(0.25);
          if (moved[i] < 3) expect(share, `${which}: ${colour}, moved by ${moved[i]}`).toBe(0);
        }
      };
      expect(moved.filter((by) => by > 5).length).toBeGreaterThan(4);
      expect(moved.filter((by) => by < 3).length).toBeGreaterThan(6);
      await check(await readCanvas(page, 'stage'), plain, 'fit');
      await page.keyboard.press('m');
      expect(countDifferent(await readCanvas(page, 'stage'), plain)).toBe(0);
      await page.keyboard.press('1');
      await settled(page);
      const plainFull = await readCanvas(page, 'stage');
      await page.keyboard.press('m');
      await drawn(page);
      await expect
        .poll(async () => countDifferent(await readCanvas(page, 'stage'), plainFull))
        .toBeGreaterThan(5000);
      await check(await readCanvas(page, 'stage'), plainFull, '100 %');
      await chooseColours(page, 'The photograph’s own');
      await sign(page).waitFor({ state: 'detached' });
      expect(countDifferent(await readCanvas(page, 'stage'), plainFull)).toBe(0);
      await room.close(window);
    });

    it('follows strengths without asking the host, and is left out of the photograph beside', async () => {
      const path = join(room.folder, 'strengths.png');
      await writeFields(path);
      await copyFile(cmykPath, join(room.folder, 'paper.icc'));
      const window = await room.open({ path });
      const { page } = window;
      await choosePaper(page, 'paper.icc');
      const words = sign(page).getByRole('status');
      await words.getByText('% of the picture').waitFor();
      const before = await words.textContent();
      const asked: string[] = [];
      page.on('request', (request) => {
        if (/(paintStrata|readGamutTable|readScreenTable)$/.test(request.url())) asked.push(request.url());
      });
      // Neutral paper in place of paint: nothing of it lies outside.
      await page.getByRole('button', { name: 'Body', exact: true }).click({ modifiers: ['Shift'] });
      await page.keyboard.press('g');
      const paper = page.getByRole('textbox', { name: 'Paper, typed' });
      await paper.fill('100');
      await paper.press('Enter');
      await paper.blur();
      await words.getByText('Every colour of the picture lies within this paper').waitFor();
      await page.keyboard.press('Control+z');
      await page.keyboard.press('Control+z');
      await expect.poll(() => words.textContent()).toBe(before);
      expect(asked).toEqual([]);
      await page.keyboard.press('c');
      const marked = await readCanvas(page, 'stage');
      await page.keyboard.press('m');
      const plain = await readCanvas(page, 'stage');
      const place = await placeOf(page);
      // Yellow stands in the photograph's half, a strong green in the painting's.
      expect(hatchedShare(marked, plain, 13, place)).toBe(0);
      expect(hatchedShare(marked, plain, 16, place)).toBeGreaterThan(0.25);
      await room.close(window);
    });

    it('says in words when the profile is gone, and looks again', async () => {
      const path = join(room.folder, 'gone.png');
      await writeFields(path);
      const paper = join(room.folder, 'paper.icc');
      await copyFile(cmykPath, paper);
      const dataFolder = await mkdtemp(join(room.folder, 'data-'));
      const first = await room.open({ path, dataFolder });
      await choosePaper(first.page, 'paper.icc');
      await sign(first.page).getByText('% of the picture').waitFor();
      await untilSaved(path, ({ work }) => typeof work.output.profile === 'object');
      await room.close(first);
      await rm(paper);
      const window = await room.open({ path, dataFolder });
      const { page } = window;
      const trouble = page.getByRole('status').filter({ hasText: 'What the print cannot hold is not known' });
      await trouble.waitFor();
      expect(await trouble.textContent()).toContain('paper.icc');
      expect(await seriousFindings(page)).toEqual([]);
      await keepScreen(page, 'gamut-gone');
      await copyFile(cmykPath, paper);
      await page.getByRole('button', { name: 'Look again' }).click();
      await sign(page).getByText('% of the picture').waitFor();
      // The host's refusal itself shows in the console; nothing else may.
      window.faults.splice(
        0,
        window.faults.length,
        ...window.faults.filter((text) => !/status of/.test(text)),
      );
      await room.close(window);
    });
  },
);
