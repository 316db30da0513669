import { mkdtemp, readdir, readFile, rm, writeFile } from 'node:fs/promises';
import { tmpdir } from 'node:os';
import { join } from 'node:path';
import type { Page } from 'playwright-core';
import sharp from 'sharp';
import { afterAll, beforeAll, describe, expect, it } from 'vitest';
import { seriousFindings } from './axe.ts';
import { tabTo } from './byKeyboard.ts';
import { chromiumFound } from './chromium.ts';
import { keepScreen, type OpenWindow, openWindow, settled } from './openWindow.ts';
import { writePhotograph } from './photographs.ts';
import { countDifferent, opaqueBox, pixelAt, readCanvas } from './readWindow.ts';

/** Moves a range by keys until it stands elsewhere. */
async function moveTrack(page: Page, name: string): Promise<void> {
  const track = page.getByRole('slider', { name, exact: true });
  const { value, max } = await track.evaluate((element) => {
    const { value, max } = element as HTMLInputElement;
    return { value: Number(value), max: Number(max) };
  });
  for (let press = 0; press < 3; press++) await track.press(value >= max ? 'PageDown' : 'PageUp');
}

const strengthOf = async (page: Page, name: string) =>
  Number(await page.getByRole('slider', { name: `${name} strength` }).getAttribute('aria-valuenow'));

describe.skipIf(!chromiumFound.path)('easel in a real window', () => {
  let folder: string;
  let photo: string;
  const windows: OpenWindow[] = [];
  const open = async (options: Parameters<typeof openWindow>[0] = {}) => {
    const window = await openWindow({ ...options, environment: { HOME: folder, ...options.environment } });
    windows.push(window);
    return window;
  };
  const openAtWork = async (options: Parameters<typeof openWindow>[0] = {}) => {
    // What an earlier test did to the photo is none of this one's business.
    if (!options.dataFolder) await rm(`${photo}.oxgall.json`, { force: true });
    const window = await open({ path: photo, ...options });
    await settled(window.page);
    return window;
  };
  /** Closes a window and holds it to having reported no fault. */
  const close = async (window: OpenWindow) => {
    expect(window.faults).toEqual([]);
    await window.close();
    windows.splice(windows.indexOf(window), 1);
  };

  beforeAll(async () => {
    folder = await mkdtemp(join(tmpdir(), 'oxgall-window-'));
    photo = join(folder, 'ferry-bank.jpg');
    await writePhotograph(photo, 'nagasaki-boats', 1800);
  });
  afterAll(async () => {
    for (const window of windows) await window.close();
    await rm(folder, { recursive: true, force: true });
  });

  it('goes from opening to a saved file by keyboard alone', async () => {
    const window = await open();
    const { page } = window;
    await page.getByRole('button', { name: 'Open a photograph…' }).waitFor();
    expect(await seriousFindings(page), 'first screen').toEqual([]);
    await keepScreen(page, 'first');
    await tabTo(page, 'Open a photograph…');
    await page.keyboard.press('Enter');
    await page.getByRole('button', { name: /^ferry-bank\.jpg/ }).waitFor();
    expect(await seriousFindings(page), 'list of photographs').toEqual([]);
    await tabTo(page, /^ferry-bank\.jpg/);
    await page.keyboard.press('Enter');
    await settled(page);
    await page.keyboard.press('p');
    await tabTo(page, 'Low Water');
    await page.keyboard.press('Space');
    await tabTo(page, 'Body strength');
    for (let press = 0; press < 5; press++) await page.keyboard.press('ArrowDown');
    expect(await strengthOf(page, 'Body')).toBe(95);
    await page.keyboard.press('Control+s');
    await page.getByRole('textbox', { name: /^Name/ }).waitFor();
    expect(await seriousFindings(page), 'saving').toEqual([]);
    await page.keyboard.press('Enter');
    await page.getByRole('heading', { name: 'Saved' }).waitFor();
    expect(await seriousFindings(page), 'saved').toEqual([]);
    await page.keyboard.press('Escape');
    const saved = await sharp(join(folder, 'ferry-bank painted.png')).metadata();
    expect([saved.width, saved.height]).toEqual([1800, (await sharp(photo).metadata()).height]);
    await close(window);
  });

  it('moves every control, and each changes the picture', async () => {
    const window = await openAtWork();
    const { page } = window;
    let last = await readCanvas(page, 'stage');
    const expectChange = async (what: string) => {
      await settled(page);
      const now = await readCanvas(page, 'stage');
      expect(countDifferent(now, last), what).toBeGreaterThan(20);
      last = now;
    };
    for (const [key, tracks] of [
      ['b', ['Strength', 'Brush', 'Pull', 'Crispness', 'Hold', 'Noise floor', 'Coats']],
      ['i', ['Strength', 'Ink width', 'Ink threshold', 'Ink softness']],
    ] as const) {
      await page.keyboard.press(key);
      await page.getByText('Finer points').click();
      await settled(page);
      for (const name of tracks) {
        await moveTrack(page, name);
        await expectChange(name);
      }
    }
    await page.getByRole('combobox', { name: 'Ink blend' }).selectOption('normal');
    await page.getByRole('radio', { name: 'Sanguine' }).check({ force: true });
    await expectChange('Ink colour');
    await page.getByRole('combobox', { name: 'Ink blend' }).selectOption('screen');
    await expectChange('Ink blend');
    await page.getByRole('radio', { name: 'Photo', exact: true }).check({ force: true });
    await expectChange('Draw from');
    await page.keyboard.press('b');
    await page.getByText('Finer points').click();
    await page.getByRole('combobox', { name: 'Method' }).selectOption('quadrant');
    await expectChange('Method');
    await page.keyboard.press('g');
    await page.getByRole('textbox', { name: 'Body strength, typed' }).fill('40');
    await page.keyboard.press('Enter');
    await moveTrack(page, 'Paper');
    await expectChange('Paper');
    await page.getByRole('radio', { name: 'Slate' }).check({ force: true });
    await expectChange('Paper colour');
    await keepScreen(page, 'every-control');
    await close(window);
  });

  it('makes one undo step of a pulled edge, and resets with a double click', async () => {
    const window = await openAtWork();
    const { page } = window;
    const edge = page.getByRole('slider', { name: 'Line strength' });
    const box = (await edge.boundingBox())!;
    const at = { x: box.x + box.width / 2, y: box.y + box.height / 2 };
    await page.mouse.move(at.x, at.y);
    await page.mouse.down();
    for (let step = 1; step <= 12; step++) await page.mouse.move(at.x, at.y + step * 2);
    await page.mouse.up();
    const pulled = await strengthOf(page, 'Line');
    expect(pulled).toBeLessThan(40);
    await page.keyboard.press('Control+z');
    expect(await strengthOf(page, 'Line')).toBe(70);
    await page.keyboard.press('Control+Shift+z');
    expect(await strengthOf(page, 'Line')).toBe(pulled);
    await page.getByRole('slider', { name: 'Line strength' }).dblclick();
    expect(await strengthOf(page, 'Line')).toBe(70);
    await page.getByRole('button', { name: 'Line', exact: true }).click({ modifiers: ['Shift'] });
    expect(await strengthOf(page, 'Line')).toBe(0);
    await page.getByRole('button', { name: /^Line, lifted/ }).click({ modifiers: ['Shift'] });
    expect(await strengthOf(page, 'Line')).toBe(70);
    await close(window);
  });

  it('asks the host for nothing while strength, blend and colours move', async () => {
    const window = await openAtWork();
    const { page } = window;
    const asked: string[] = [];
    page.on('request', (request) => {
      if (request.url().endsWith('/paintStrata')) asked.push(request.url());
    });
    const before = await readCanvas(page, 'stage');
    await page.getByRole('slider', { name: 'Body strength' }).press('PageDown');
    await page.keyboard.press('i');
    await page.getByText('Finer points').click();
    await page.getByRole('combobox', { name: 'Ink blend' }).selectOption('overlay');
    await page.getByRole('radio', { name: 'Indigo' }).check({ force: true });
    expect(countDifferent(await readCanvas(page, 'stage'), before)).toBeGreaterThan(1000);
    expect(asked).toEqual([]);
    await close(window);
  });

  it('shows at 100 % the very pixels that it saves', async () => {
    const window = await openAtWork();
    const { page } = window;
    await page.keyboard.press('1');
    await settled(page);
    await keepScreen(page, 'full-size');
    const shown = await readCanvas(page, 'stage');
    await page.keyboard.press('Control+s');
    await page.getByRole('textbox', { name: /^Name/ }).fill('exact');
    await page.getByRole('button', { name: 'Save', exact: true }).click();
    await page.getByRole('heading', { name: 'Saved' }).waitFor();
    const file = await sharp(join(folder, 'exact.png'))
      .removeAlpha()
      .raw()
      .toBuffer({ resolveWithObject: true });
    const { originX, originY } = await placeOf(page);
    let largest = 0;
    let compared = 0;
    for (let y = 0; y < shown.heightPx; y++)
      for (let x = 0; x < shown.widthPx; x++) {
        const [px, py] = [x - originX, y - originY];
        if (px < 0 || py < 0 || px >= file.info.width || py >= file.info.height) continue;
        const inFile = (py * file.info.width + px) * 3;
        const onStage = (y * shown.widthPx + x) * 4;
        for (let c = 0; c < 3; c++)
          largest = Math.max(largest, Math.abs(file.data[inFile + c] - shown.data[onStage + c]));
        compared += 1;
      }
    expect(compared).toBeGreaterThan(400_000);
    expect(largest).toBe(0);
    await close(window);
  });

  it('keeps the Section under the picture, to the pixel, at any zoom', async () => {
    const window = await openAtWork();
    const { page } = window;
    // With no line over it, body at full strength is the picture itself.
    await page.getByRole('button', { name: 'Line', exact: true }).click({ modifiers: ['Shift'] });
    for (const key of ['1', '+', '0'] as const) {
      await page.keyboard.press(key);
      await settled(page);
      const stage = await readCanvas(page, 'stage');
      const section = await readCanvas(page, 'section');
      const cut = page.getByRole('slider', { name: 'Cut' });
      const stageBox = (await page.locator('.stage-canvas').boundingBox())!;
      const cutBox = (await cut.boundingBox())!;
      const cutY = Math.round(cutBox.y + 14 - stageBox.y);
      const sectionBox = (await page.locator('.section-canvas').boundingBox())!;
      const band = (await page.getByRole('button', { name: 'Body: show its controls' }).boundingBox())!;
      const bandY = Math.round(band.y - sectionBox.y + Math.floor(band.height / 2));
      let largest = 0;
      for (let x = Math.ceil(band.x) + 4; x < band.x + band.width - 4; x += 3)
        for (let c = 0; c < 3; c++)
          largest = Math.max(largest, Math.abs(pixelAt(stage, x, cutY)[c] - pixelAt(section, x, bandY)[c]));
      // One step for the two roundings of 16-bit paint, more where both are resampled.
      expect(largest, `at key ${key}`).toBeLessThanOrEqual(key === '0' ? 8 : 1);
    }
    await close(window);
  });

  it('splits photograph and painting, and lifts all paint while L is held', async () => {
    const window = await openAtWork();
    const { page } = window;
    const painted = await readCanvas(page, 'stage');
    await page.keyboard.down('l');
    const bare = await readCanvas(page, 'stage');
    await page.keyboard.up('l');
    expect(countDifferent(bare, painted)).toBeGreaterThan(10_000);
    expect(countDifferent(await readCanvas(page, 'stage'), painted)).toBe(0);
    await page.keyboard.press('c');
    const split = await readCanvas(page, 'stage');
    const { left, right, top } = opaqueBox(painted);
    const middle = Math.round((left + right) / 2);
    for (let y = top + 20; y < top + 220; y += 4) {
      for (let x = left; x < middle - 2; x += 5) expect(pixelAt(split, x, y)).toEqual(pixelAt(bare, x, y));
      for (let x = middle + 2; x < right; x += 5)
        expect(pixelAt(split, x, y)).toEqual(pixelAt(painted, x, y));
    }
    expect(await seriousFindings(page), 'comparing').toEqual([]);
    const divider = page.getByRole('slider', { name: 'Split between photograph and painting' });
    await divider.press('Home');
    expect(countDifferent(await readCanvas(page, 'stage'), painted)).toBe(0);
    await keepScreen(page, 'compare');
    await close(window);
  });

  it('zooms at the pointer and pans by dragging', async () => {
    const window = await openAtWork();
    const { page } = window;
    const stage = (await page.locator('.stage-canvas').boundingBox())!;
    await page.mouse.move(stage.x + stage.width / 2 + 80, stage.y + stage.height / 2);
    for (let notch = 0; notch < 4; notch++) await page.mouse.wheel(0, -120);
    await settled(page);
    const zoom = page.getByRole('textbox', { name: 'Zoom, typed' });
    expect(Number.parseInt(await zoom.inputValue(), 10)).toBeGreaterThan(60);
    const before = await readCanvas(page, 'stage');
    await page.mouse.down();
    await page.mouse.move(stage.x + stage.width / 2 + 50, stage.y + stage.height / 2 + 20, { steps: 3 });
    await page.mouse.up();
    await settled(page);
    const after = await readCanvas(page, 'stage');
    const at = { x: Math.round(stage.width / 2), y: Math.round(stage.height / 2) - 40 };
    const [moved, still] = [pixelAt(after, at.x - 30, at.y + 20), pixelAt(before, at.x, at.y)];
    // Resampled between pixels, so a step of rounding is allowed.
    for (let c = 0; c < 3; c++) expect(Math.abs(moved[c] - still[c])).toBeLessThanOrEqual(2);
    await close(window);
  });

  it('brings the changes back after the program was killed', async () => {
    const dataFolder = await mkdtemp(join(tmpdir(), 'oxgall-window-kept-'));
    const first = await openAtWork({ dataFolder });
    await rm(`${photo}.oxgall.json`, { force: true });
    await first.page.getByRole('slider', { name: 'Body strength' }).press('PageDown');
    await expect
      .poll(() => readFile(`${photo}.oxgall.json`, 'utf8').catch(() => ''))
      .toContain('body.strength');
    first.host.kill('SIGKILL');
    await first.close();
    windows.splice(windows.indexOf(first), 1);
    const second = await openAtWork({ dataFolder });
    expect(await strengthOf(second.page, 'Body')).toBe(90);
    await second.page.getByText('are as you left them').waitFor();
    await second.page.getByRole('button', { name: 'Start afresh' }).click();
    expect(await strengthOf(second.page, 'Body')).toBe(100);
    await close(second);
    await rm(dataFolder, { recursive: true, force: true });
  });

  it('says in plain words what cannot be opened, and stays where it was', async () => {
    await writeFile(join(folder, 'torn.jpg'), Buffer.from([0xff, 0xd8, 0xff, 0xe0, 0, 16, 1, 2, 3]));
    const window = await open();
    const { page } = window;
    await page.getByRole('button', { name: 'Open a photograph…' }).click();
    await page.getByRole('button', { name: /^torn\.jpg/ }).click();
    const alert = page.getByRole('alert');
    await alert.waitFor();
    expect(await alert.textContent()).toMatch(/torn\.jpg/);
    expect(await seriousFindings(page), 'trouble').toEqual([]);
    await page.getByRole('button', { name: 'Put away' }).click();
    expect(await page.getByRole('button', { name: 'Open a photograph…' }).isEnabled()).toBe(true);
    // The host's refusal itself shows in the console; nothing else may.
    window.faults.splice(0, window.faults.length, ...window.faults.filter((text) => !/status of/.test(text)));
    await close(window);
    await rm(join(folder, 'torn.jpg'));
  });

  it('keeps nobody out: axe finds nothing serious on any page', async () => {
    const window = await openAtWork();
    const { page } = window;
    for (const key of ['b', 'i', 'g', 'p', 'f'] as const) {
      await page.keyboard.press(key);
      expect(await seriousFindings(page), `page ${key}`).toEqual([]);
    }
    for (const surround of ['Light surround', 'Dark surround']) {
      await page.getByRole('radio', { name: surround }).check({ force: true });
      expect(await seriousFindings(page), surround).toEqual([]);
    }
    await page.keyboard.press('?');
    await page.getByRole('heading', { name: 'Keys' }).waitFor();
    expect(await seriousFindings(page), 'keys').toEqual([]);
    await close(window);
  });

  it('can be told to stop saving, and leaves no file', async () => {
    const large = join(folder, 'large-bank.jpg');
    await writePhotograph(large, 'nagasaki-boats', 4600);
    const window = await openAtWork({ path: large });
    const { page } = window;
    const before = await readdir(folder);
    await page.keyboard.press('Control+s');
    await page.getByRole('textbox', { name: /^Name/ }).fill('unwanted');
    await page.getByRole('button', { name: 'Save', exact: true }).click();
    await page.getByRole('button', { name: 'Cancel saving' }).click();
    await page.getByRole('button', { name: 'Save', exact: true }).waitFor();
    expect(await readdir(folder)).toEqual(before);
    await close(window);
  });
});

/** Where the photo's first pixel stands on the stage, as the window says. */
async function placeOf(page: Page): Promise<{ scale: number; originX: number; originY: number }> {
  const text = await page.locator('.stage-hold').getAttribute('data-view');
  const [scale, originX, originY] = text!.split(' ').map(Number);
  return { scale, originX, originY };
}
