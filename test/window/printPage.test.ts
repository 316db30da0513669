import { execFileSync } from 'node:child_process';
import { existsSync } from 'node:fs';
import { writeFile } from 'node:fs/promises';
import { dirname, join } from 'node:path';
import { fileURLToPath } from 'node:url';
import type { Locator, Page } from 'playwright-core';
import { describe, expect, it } from 'vitest';
import { p3Profile } from '../../core/colour/matrixProfile.ts';
import { seriousFindings } from './axe.ts';
import { tabTo } from './byKeyboard.ts';
import { chromiumFound } from './chromium.ts';
import { keepScreen, settled } from './openWindow.ts';
import { untilSaved, usePhotoWindows } from './photoWindow.ts';

const exiftool = ['/usr/bin/exiftool', '/usr/local/bin/exiftool'].find((path) => existsSync(path));
const program = fileURLToPath(new URL('../../dist/main/commandLine.js', import.meta.url));
const inks = '/usr/share/color/icc/ghostscript/default_cmyk.icc';

const field = (page: Page, name: string) => page.getByRole('textbox', { name: `${name}, typed` });
const colours = (page: Page) => page.getByRole('combobox', { name: 'Colours', exact: true });
const frameOn = (page: Page) => page.getByRole('slider', { name: /^Crop frame of / });

/** Tabs to a value and types it, as somebody without a mouse would. */
async function typeByKeys(page: Page, name: string, value: string): Promise<void> {
  await tabTo(page, `${name}, typed`);
  await page.keyboard.type(value);
  await page.keyboard.press('Enter');
}

const tell = (path: string): Record<string, unknown> =>
  JSON.parse(execFileSync(exiftool!, ['-json', '-n', path], { encoding: 'utf8' }))[0];

/** Where a place of the photo stands in the window, as the stage itself says how it is zoomed and moved. */
async function windowX(page: Page, photoX: number): Promise<number> {
  const stage = page.locator('.stage-hold');
  const [scale, originX] = (await stage.getAttribute('data-view'))!.split(' ').map(Number);
  return (await stage.boundingBox())!.x + originX + photoX * scale;
}

async function edges(frame: Locator): Promise<[number, number]> {
  const { x, width } = (await frame.boundingBox())!;
  return [x, x + width];
}

describe.skipIf(!chromiumFound.path || !exiftool)('the print page in a real window', () => {
  const room = usePhotoWindows('print-page');

  it('sets a print by keys and mouse, saves what was asked for, and has it all when opened again', async () => {
    const photo = await room.freshPhoto(900);
    const window = await room.open({ path: photo });
    const { page } = window;
    await page.keyboard.press('f');
    await page.getByRole('heading', { name: 'Print', exact: true }).waitFor();
    // 101.6 mm are 4 inches; a square of them at 150 an inch has 600 pixels an edge, 3 mm of bleed 17.7, so 18.
    await typeByKeys(page, 'Long edge in millimetres', '101.6');
    expect(await field(page, 'Long edge in inches').inputValue()).toBe('4 in');
    await typeByKeys(page, 'Pixels an inch', '150');
    expect(await page.getByRole('radio', { name: 'So many an inch' }).isChecked()).toBe(true);
    await page.getByText('1:1', { exact: true }).click();
    expect(await field(page, 'Short edge in inches').inputValue()).toBe('4 in');
    await page.getByRole('slider', { name: 'Bleed' }).focus();
    for (let press = 0; press < 6; press += 1) await page.keyboard.press('ArrowRight');
    expect(await field(page, 'Bleed').inputValue()).toBe('3 mm');
    await colours(page).selectOption('srgb');
    await page.getByRole('radio', { name: 'TIFF' }).check({ force: true });
    await settled(page);
    expect(await seriousFindings(page), 'print page').toEqual([]);
    await keepScreen(page, 'print-page');
    await page.keyboard.press('Control+s');
    const dialog = page.getByRole('dialog', { name: 'Save the painting' });
    await dialog
      .getByText(
        'TIFF of 8 bits, 101.6 × 101.6 mm at 150 pixels an inch, cropped to 1:1, with 3 mm of bleed, in sRGB.',
      )
      .waitFor();
    expect(await seriousFindings(page), 'save dialog').toEqual([]);
    await dialog.getByRole('button', { name: 'Save', exact: true }).click();
    await page.getByRole('heading', { name: 'Saved' }).waitFor();
    await page.keyboard.press('Escape');
    const told = tell(join(dirname(photo), 'plate-1 painted.tif'));
    expect(told).toMatchObject({ ImageWidth: 636, ImageHeight: 636, XResolution: 150, YResolution: 150 });
    expect(told.ProfileDescription).toMatch(/^sRGB/);
    await untilSaved(photo, ({ histories }) => histories[0].deliveries.length === 1);
    await room.close(window);
    const verified = execFileSync(process.execPath, [program, 'verify', photo], {
      encoding: 'utf8',
      env: { ...process.env, OXGALL_DATA: window.dataFolder },
    });
    expect(verified).toMatch(/1 of 1 deliveries identical/);
    const again = await room.open({ path: photo });
    await again.page.keyboard.press('f');
    expect(await field(again.page, 'Long edge in inches').inputValue()).toBe('4 in');
    expect(await field(again.page, 'Pixels an inch').inputValue()).toBe('150 ppi');
    expect(await field(again.page, 'Bleed').inputValue()).toBe('3 mm');
    expect(await colours(again.page).inputValue()).toBe('srgb');
    for (const name of ['So many an inch', 'Square, 1 to 1', 'TIFF'])
      expect(await again.page.getByRole('radio', { name }).isChecked(), name).toBe(true);
    await room.close(again);
  });

  it('shows the crop frame where the file is cut, at any zoom, and moves it by keys and hand', async () => {
    const photo = await room.freshPhoto(900);
    const window = await room.open({ path: photo });
    const { page } = window;
    await page.keyboard.press('f');
    await page.getByText('1:1', { exact: true }).click();
    const frame = frameOn(page);
    expect(await frame.getAttribute('aria-valuetext')).toBe('in the middle');
    // The photo is 900 × 720: a square of it is 720 wide and can move by 180.
    const isAt = async (left: number, what: string) => {
      const [from, to] = await edges(frame);
      expect(from, what).toBeCloseTo(await windowX(page, left), 0);
      expect(to, what).toBeCloseTo(await windowX(page, left + 720), 0);
    };
    await isAt(90, 'at first');
    await frame.focus();
    await page.keyboard.press('Home');
    expect(await frame.getAttribute('aria-valuetext')).toBe('at the left');
    await isAt(0, 'by Home');
    await page.keyboard.press('End');
    await isAt(180, 'by End');
    const before = (await edges(frame))[0];
    await page.keyboard.press('ArrowLeft');
    const step = before - (await edges(frame))[0];
    expect(step).toBeGreaterThan(0);
    expect(step).toBeLessThan(2.5);
    await page.keyboard.press('Home');
    const stage = (await page.locator('.stage-hold').boundingBox())!;
    const [x, y] = [stage.x + stage.width / 2, stage.y + stage.height / 2];
    const scale = Number((await page.locator('.stage-hold').getAttribute('data-view'))!.split(' ')[0]);
    await page.mouse.move(x, y);
    await page.mouse.down();
    await page.mouse.move(x + 100 * scale, y + 40, { steps: 5 });
    await page.mouse.up();
    const { work } = await untilSaved(photo, ({ work }) => work.output.cropFrame !== undefined);
    expect(work.output.cropFrame).toMatchObject({ aspect: 1, y01: 0.5 });
    await expect
      .poll(async () => {
        const { x01 } = (await untilSaved(photo, () => true)).work.output.cropFrame!;
        return Math.abs(x01 * 900 - 360 - 100);
      })
      .toBeLessThan(1.5);
    await isAt(100, 'by hand');
    await frame.focus();
    for (const key of ['+', '1', '-']) {
      await page.keyboard.press(key);
      await isAt(100, `after ${key}`);
    }
    // Beside the frame a drag moves the picture, and the frame with it.
    const viewBefore = await page.locator('.stage-hold').getAttribute('data-view');
    await page.mouse.move(stage.x + 8, stage.y + 8);
    await page.mouse.down();
    await page.mouse.move(stage.x + 48, stage.y + 28, { steps: 3 });
    await page.mouse.up();
    expect(await page.locator('.stage-hold').getAttribute('data-view')).not.toBe(viewBefore);
    await isAt(100, 'moved with the picture');
    expect(await seriousFindings(page), 'frame').toEqual([]);
    await keepScreen(page, 'print-frame');
    await page.getByRole('tab', { name: 'Body' }).click();
    expect(await frame.count()).toBe(0);
    await room.close(window);
  });

  it('finds a colour profile in a folder, and says what a format cannot hold', async () => {
    const photo = await room.freshPhoto(600);
    await writeFile(join(room.folder, 'wide.icc'), p3Profile());
    const window = await room.open({ path: photo, widthPx: 1024, heightPx: 700 });
    const { page } = window;
    await page.keyboard.press('Control+s');
    await page.getByRole('button', { name: /^Change the print/ }).click();
    await page.getByRole('heading', { name: 'Print', exact: true }).waitFor();
    await colours(page).selectOption('choose');
    const dialog = page.getByRole('dialog', { name: 'Choose a colour profile' });
    await dialog.getByRole('button', { name: 'wide.icc' }).waitFor();
    expect(await seriousFindings(page), 'list of profiles').toEqual([]);
    await dialog.getByRole('button', { name: 'wide.icc' }).click();
    await expect
      .poll(() => colours(page).evaluate((list) => (list as HTMLSelectElement).selectedOptions[0].text))
      .toBe('Display P3');
    await page.getByRole('combobox', { name: 'Colours out of reach' }).selectOption('perceptual');
    await untilSaved(photo, ({ work }) => work.output.intent === 'perceptual');
    expect((await untilSaved(photo, () => true)).work.output.profile).toEqual({
      file: join(room.folder, 'wide.icc'),
    });
    expect(await seriousFindings(page), 'converted colours').toEqual([]);
    if (existsSync(inks)) {
      await colours(page).selectOption('choose');
      await page
        .getByRole('navigation', { name: 'Places' })
        .getByRole('button', { name: 'Profiles', exact: true })
        .click();
      await page.getByRole('button', { name: /^ghostscript/ }).click();
      await page.getByRole('button', { name: 'default_cmyk.icc' }).click();
      await page.getByRole('alert').filter({ hasText: 'four inks' }).waitFor();
      await page.getByRole('radio', { name: 'TIFF' }).check({ force: true });
      await page.getByText('Four inks, by default_cmyk.').waitFor();
    }
    await room.close(window);
  });
});
