import { mkdtemp, readFile } from 'node:fs/promises';
import { join } from 'node:path';
import type { Locator, Page } from 'playwright-core';
import { describe, expect, it } from 'vitest';
import { seriousFindings } from './axe.ts';
import { chromiumFound } from './chromium.ts';
import { makeLongRecipe } from './longRecipe.ts';
import { keepScreen, settled } from './openWindow.ts';
import {
  card,
  holdOf,
  keepAs,
  numeral,
  numeralsOf,
  presentOf,
  setBody,
  thread,
  untilSaved,
  usePhotoWindows,
} from './photoWindow.ts';
import { countDifferent, readCanvas } from './readWindow.ts';

const brushOf = (page: Page) => page.getByRole('textbox', { name: 'Brush, typed' }).inputValue();

/** Drops a file made of this text on an element, as the browser would. */
async function dropFile(target: Locator, name: string, text: string): Promise<void> {
  const transfer = await target.page().evaluateHandle(
    ([fileName, content]) => {
      const carried = new DataTransfer();
      carried.items.add(new File([content], fileName, { type: 'application/json' }));
      return carried;
    },
    [name, text],
  );
  await target.dispatchEvent('drop', { dataTransfer: transfer });
}

describe.skipIf(!chromiumFound.path)('the States thread in a real window', () => {
  const room = usePhotoWindows('states');

  it('keeps three states, returns to the first, compares, undoes the return, and finds all of it again', async () => {
    const path = await room.freshPhoto();
    const dataFolder = await mkdtemp(join(room.folder, 'data-'));
    const window = await room.open({ path, dataFolder });
    const { page } = window;
    const first = await readCanvas(page, 'stage');
    await setBody(page, 'Brush', '5');
    await keepAs(page, 'broader');
    await setBody(page, 'Brush', '9');
    await keepAs(page, 'for the cover');
    await settled(page);
    const third = await readCanvas(page, 'stage');
    expect(await numeralsOf(page)).toEqual(['I', 'II', 'III']);
    expect(await presentOf(page)).toBe('III');

    await numeral(page, 'II').hover();
    await card(page, 'II').getByText('Brush 3.2 mm → 5 mm.').waitFor();
    await card(page, 'II').locator('canvas.is-there').waitFor();
    expect(await seriousFindings(page), 'card').toEqual([]);
    await keepScreen(page, 'states-card');
    await numeral(page, 'I').hover();
    await card(page, 'I').getByRole('button', { name: 'Return to I' }).click();
    await expect.poll(() => presentOf(page)).toBe('IV');
    expect(await brushOf(page)).toMatch(/^3\.2/);
    await page.mouse.move(400, 450);
    await settled(page);
    expect(countDifferent(await readCanvas(page, 'stage'), first)).toBe(0);

    await numeral(page, 'I').hover();
    await card(page, 'I').getByRole('combobox').selectOption({ label: 'State III, for the cover' });
    await page.getByRole('heading', { name: 'State I against State III' }).waitFor();
    await expect
      .poll(() => page.locator('.compare-table tbody tr').allTextContents())
      .toEqual(['Brush Body3.2 mm9 mm']);
    await page.getByRole('button', { name: 'Back to the easel' }).click();

    await page.keyboard.press('Control+z');
    await expect.poll(() => presentOf(page)).toBe('III');
    await page.keyboard.press('Control+Shift+z');
    await expect.poll(() => presentOf(page)).toBe('IV');
    await page.keyboard.press('Control+z');
    await untilSaved(
      path,
      ({ work, histories: [{ states }] }) => states.length === 4 && work.stateId === states[2].id,
    );
    await room.close(window);

    const again = await room.open({ path, dataFolder });
    expect(await numeralsOf(again.page)).toEqual(['I', 'II', 'III', 'IV']);
    expect(await presentOf(again.page)).toBe('III');
    expect(countDifferent(await readCanvas(again.page, 'stage'), third)).toBe(0);
    await numeral(again.page, 'III').hover();
    const note = card(again.page, 'III').getByRole('textbox', { name: 'Note' });
    expect(await note.inputValue()).toBe('for the cover');
    await room.close(again);
  });

  it('is walked and written beside by keyboard alone, and names branches', async () => {
    const path = await room.freshPhoto();
    const window = await room.open({ path });
    const { page } = window;
    await setBody(page, 'Brush', '5');
    await keepAs(page, 'broader');
    await page.keyboard.press('t');
    await page.keyboard.press('ArrowLeft');
    await expect.poll(() => numeral(page, 'I').evaluate((it) => it === document.activeElement)).toBe(true);
    await page.keyboard.press('Tab');
    await page.keyboard.type('where it began');
    await page.keyboard.press('Enter');
    await expect.poll(() => numeral(page, 'I').getAttribute('aria-label')).toBe('State I, where it began');
    await page.keyboard.press('Tab');
    await page.keyboard.press('Tab');
    await page.keyboard.press('Enter');
    await expect.poll(() => presentOf(page)).toBe('III');
    // III follows I, as II does: a branch, which may have a name.
    await page.keyboard.press('t');
    await card(page, 'III').waitFor();
    await card(page, 'III').getByRole('textbox', { name: 'Branch' }).fill('for the cover');
    await page.keyboard.press('Enter');
    await thread(page).getByText('for the cover').waitFor();
    expect(await seriousFindings(page)).toEqual([]);
    const { histories } = await untilSaved(
      path,
      (recipe) => Object.keys(recipe.histories[0].margins).length === 2,
    );
    const [{ states, margins }] = histories;
    expect(margins).toEqual({
      [states[0].id]: { note: 'where it began' },
      [states[2].id]: { branch: 'for the cover' },
    });
    await room.close(window);
  });

  it('takes the look of a recipe file that is dropped on the picture', async () => {
    const given = await makeLongRecipe(await room.freshPhoto(600), 3);
    const window = await room.open({ path: await room.freshPhoto() });
    const { page } = window;
    await page.keyboard.press('b');
    await dropFile(page.locator('.stage-hold'), 'heron.jpg.oxgall.json', JSON.stringify(given));
    await expect.poll(() => numeralsOf(page)).toEqual(['I', 'II', 'III']);
    expect(await presentOf(page)).toBe('III');
    expect(await holdOf(page)).toBe('0.12');
    await page.keyboard.press('Control+z');
    expect(await holdOf(page)).toBe('0.25');
    await dropFile(page.locator('.stage-hold'), 'other.oxgall.json', '{"format":"other"}');
    await page.getByText('Choose a recipe file that Oxgall has written.').waitFor();
    // The host's refusal itself shows in the console; nothing else may.
    window.faults.splice(0, window.faults.length, ...window.faults.filter((text) => !/status of/.test(text)));
    await room.close(window);
  });

  it('writes no recipe for a photo that was only looked at', async () => {
    const path = await room.freshPhoto();
    const window = await room.open({ path });
    await numeral(window.page, 'I').hover();
    await card(window.page, 'I').locator('canvas.is-there').waitFor();
    await room.close(window);
    expect(await readFile(`${path}.oxgall.json`).catch(() => null)).toBeNull();
  });
});
