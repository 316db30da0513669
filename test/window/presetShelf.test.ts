import { readdir } from 'node:fs/promises';
import { join } from 'node:path';
import type { Page } from 'playwright-core';
import { describe, expect, it } from 'vitest';
import { seriousFindings } from './axe.ts';
import { chromiumFound } from './chromium.ts';
import { makeLongRecipe, writeRecipe } from './longRecipe.ts';
import { keepScreen } from './openWindow.ts';
import { numeralsOf, presentOf, setHold, usePhotoWindows } from './photoWindow.ts';

const own = (page: Page, title: string) => page.locator('.preset', { hasText: title });

async function makeOwn(page: Page, title: string): Promise<void> {
  await page.keyboard.press('p');
  await page.getByRole('button', { name: 'Make a preset of this…' }).click();
  await page.getByRole('textbox', { name: 'Name of the new preset' }).fill(title);
  await page.keyboard.press('Enter');
  await own(page, title).click();
  await expect.poll(() => own(page, title).getByRole('radio').isChecked()).toBe(true);
}

describe.skipIf(!chromiumFound.path)('presets of one’s own in a real window', () => {
  const room = usePhotoWindows('presets');

  it('are described, found by their words, and grow by a state; built-in ones stay as they are', async () => {
    const window = await room.open({ path: await room.freshPhoto() });
    const { page } = window;
    await page.keyboard.press('p');
    await page.getByText('Low Water is built in and stays as it is.').waitFor();
    for (const step of ['Rename…', 'Describe…', 'Put in the bin', 'Add the easel as a state'])
      expect(await page.getByRole('button', { name: step }).count(), step).toBe(0);
    await makeOwn(page, 'Heron Grey');
    await own(page, 'Heron Grey').locator('canvas.is-there').waitFor();
    await page.getByRole('button', { name: 'Describe…' }).click();
    await page.getByRole('textbox', { name: 'What it is good for' }).fill('Still water at dusk.');
    await page.keyboard.press('Enter');
    await page.getByRole('textbox', { name: 'Find' }).fill('DUSK still');
    await expect.poll(() => page.locator('.preset-name').allTextContents()).toEqual(['Heron Grey']);
    await page.getByRole('textbox', { name: 'Find' }).fill('no such words');
    await page.getByText('No preset has “no such words” in its name or words.').waitFor();
    await page.getByRole('textbox', { name: 'Find' }).fill('');
    await setHold(page, '0.66');
    await page.keyboard.press('p');
    await page.getByRole('button', { name: 'Add the easel as a state' }).click();
    await page.getByText('your own, 2 states').waitFor();
    expect(await seriousFindings(page)).toEqual([]);
    await keepScreen(page, 'presets-own');
    await room.close(window);
  });

  it('are handed on as a file, and taken in from one elsewhere', async () => {
    const window = await room.open({ path: await room.freshPhoto() });
    const { page } = window;
    await makeOwn(page, 'Ferry Rope');
    await page.getByRole('button', { name: 'Hand on as a file' }).click();
    await expect.poll(() => readdir(room.folder)).toContain('Ferry Rope.oxgall-presets.json');
    await page.getByRole('button', { name: 'Duplicate' }).click();
    await expect.poll(() => page.locator('.preset-own').count()).toBe(2);
    await page.getByRole('button', { name: 'Hand on all of your own' }).click();
    await expect.poll(() => readdir(room.folder)).toContain('My presets.oxgall-presets.json');
    await room.close(window);

    // Another machine: its own data folder.
    const other = await room.open({ path: await room.freshPhoto() });
    await other.page.keyboard.press('p');
    expect(await other.page.locator('.preset-own').count()).toBe(0);
    const file = join(room.folder, 'My presets.oxgall-presets.json');
    await other.page.getByLabel('Take in from a file…').setInputFiles(file);
    await other.page.getByText('Taken in from My presets.oxgall-presets.json: 2.').waitFor();
    await expect.poll(() => other.page.locator('.preset-own').count()).toBe(2);
    // A recipe taken in the same way gives its look, so that nobody needs to drag one.
    const plate = await room.freshPhoto(600);
    await writeRecipe(plate, await makeLongRecipe(plate, 3));
    await other.page.getByLabel('Take in from a file…').setInputFiles(`${plate}.oxgall.json`);
    await expect.poll(() => numeralsOf(other.page)).toEqual(['I', 'II', 'III']);
    expect(await presentOf(other.page)).toBe('III');
    await room.close(other);
  });

  it('are renamed, go into the bin with one step, and are taken back with another', async () => {
    const window = await room.open({ path: await room.freshPhoto() });
    const { page } = window;
    await makeOwn(page, 'Odalys at dusk');
    await page.getByRole('button', { name: 'Rename…' }).click();
    await page.getByRole('textbox', { name: 'New name' }).fill('Low Tide');
    await page.keyboard.press('Enter');
    await own(page, 'Low Tide').waitFor();
    await page.getByRole('button', { name: 'Put in the bin' }).click();
    await expect.poll(() => own(page, 'Low Tide').count()).toBe(0);
    // The photograph goes on being painted by it.
    await page.locator('.thread-preset').waitFor();
    expect(await page.locator('.thread-state.is-present').count()).toBe(1);
    await page.getByText('In the bin: 1').click();
    await page.getByRole('button', { name: 'Take back Low Tide' }).click();
    await own(page, 'Low Tide').waitFor();
    await room.close(window);
  });
});
