import { mkdtemp, readFile, rm, writeFile } from 'node:fs/promises';
import { tmpdir } from 'node:os';
import { join } from 'node:path';
import type { Page } from 'playwright-core';
import { afterAll, beforeAll, describe, expect, it } from 'vitest';
import { defaultParameters } from '../../core/parameters/table.ts';
import type { State } from '../../core/presets/state.ts';
import { appendState } from '../../core/presets/thread.ts';
import { seriousFindings } from './axe.ts';
import { chromiumFound } from './chromium.ts';
import { keepScreen, type OpenWindow, openWindow, settled } from './openWindow.ts';
import { writePhotograph } from './photographs.ts';
import { countDifferent, readCanvas } from './readWindow.ts';

const strengthOf = async (page: Page) =>
  Number(await page.getByRole('slider', { name: 'Body strength' }).getAttribute('aria-valuenow'));

const setStrength = async (page: Page, presses: number) => {
  const slider = page.getByRole('slider', { name: 'Body strength' });
  for (let press = 0; press < presses; press++) await slider.press('PageDown');
};

const numerals = (page: Page) => page.locator('.thread-numeral').allTextContents();
const present = (page: Page) => page.locator('.thread-state.is-present .thread-numeral').textContent();

async function keepAs(page: Page, note: string): Promise<void> {
  const count = (await numerals(page)).length;
  await page.keyboard.press('k');
  await page.getByPlaceholder('a note, if you like').fill(note);
  await page.keyboard.press('Enter');
  await expect.poll(async () => (await numerals(page)).length).toBe(count + 1);
}

const stateButton = (page: Page, numeral: string) =>
  page.getByRole('button', { name: new RegExp(`^State ${numeral}(,|$)`) });

describe.skipIf(!chromiumFound.path)('the States thread in a real window', () => {
  let folder: string;
  let photo: string;
  let dataFolder: string;
  const windows: OpenWindow[] = [];
  const open = async (path = photo) => {
    const window = await openWindow({ path, dataFolder, environment: { HOME: folder } });
    windows.push(window);
    await settled(window.page);
    return window;
  };
  const close = async (window: OpenWindow) => {
    expect(window.faults).toEqual([]);
    await window.close();
    windows.splice(windows.indexOf(window), 1);
  };
  const recipeOf = async (path = photo) => JSON.parse(await readFile(`${path}.oxgall.json`, 'utf8'));

  beforeAll(async () => {
    folder = await mkdtemp(join(tmpdir(), 'oxgall-states-'));
    dataFolder = join(folder, 'data');
    photo = join(folder, 'ferry-bank.jpg');
    await writePhotograph(photo, 'nagasaki-boats', 1200);
  });
  afterAll(async () => {
    for (const window of windows) await window.close();
    await rm(folder, { recursive: true, force: true });
  });

  it('keeps three states, returns, compares, undoes the return, and finds all of it again', async () => {
    const first = await open();
    const { page } = first;
    // The preset as it comes is I; three more are kept.
    await setStrength(page, 1);
    await keepAs(page, 'a little thinner');
    await setStrength(page, 2);
    await keepAs(page, 'thin, for the cover');
    await setStrength(page, 1);
    await keepAs(page, 'thinnest');
    expect(await numerals(page)).toEqual(['I', 'II', 'III', 'IV']);
    expect(await present(page)).toBe('IV');
    expect(await strengthOf(page)).toBe(60);

    await stateButton(page, 'I').focus();
    await page.getByRole('button', { name: 'Return to I', exact: true }).click();
    await expect.poll(() => numerals(page)).toEqual(['I', 'II', 'III', 'IV', 'V']);
    expect(await present(page)).toBe('V');
    expect(await strengthOf(page)).toBe(100);

    await stateButton(page, 'I').focus();
    const other = page.getByLabel('Compare State I with');
    await other.selectOption({ label: 'State III, thin, for the cover' });
    await page.getByRole('heading', { name: 'State I against State III' }).waitFor();
    await expect
      .poll(() => page.locator('.compare-table tbody tr').allTextContents())
      .toEqual(['Body strength Body100 %70 %']);
    await settled(page);
    expect(await seriousFindings(page), 'comparing').toEqual([]);
    await keepScreen(page, 'states-compare');
    const side = async (split: 'Home' | 'End') => {
      await page.getByRole('slider', { name: /^Split between/ }).press(split);
      return readCanvas(page, 'stage');
    };
    // Home: the right one whole; End: the left one whole. They are painted differently.
    const [right, left] = [await side('Home'), await side('End')];
    expect(countDifferent(right, left)).toBeGreaterThan(20_000);
    await page.getByRole('button', { name: 'Back to the easel' }).click();

    await page.keyboard.press('Control+z');
    expect(await present(page)).toBe('IV');
    expect(await strengthOf(page)).toBe(60);
    expect(await numerals(page)).toHaveLength(5);
    await page.keyboard.press('Control+Shift+z');
    expect(await present(page)).toBe('V');
    await page.keyboard.press('Control+z');
    await expect
      .poll(async () => {
        const { work, histories } = await recipeOf();
        return histories[0].states.find(({ id }: State) => id === work.stateId)?.number;
      })
      .toBe(4);
    await close(first);

    const second = await open();
    expect(await numerals(second.page)).toEqual(['I', 'II', 'III', 'IV', 'V']);
    expect(await present(second.page)).toBe('IV');
    expect(await strengthOf(second.page)).toBe(60);
    await stateButton(second.page, 'III').focus();
    await second.page.getByText('Body strength 90 % → 70 %.').waitFor();
    await second.page.locator('.state-card canvas.is-there').waitFor();
    expect(await seriousFindings(second.page), 'card').toEqual([]);
    await keepScreen(second.page, 'states-card');
    await close(second);
  });

  it('is walked, kept and gone back on by keyboard alone, and names branches', async () => {
    const window = await open();
    const { page } = window;
    await page.keyboard.press('t');
    for (let press = 0; press < 3; press++) await page.keyboard.press('ArrowLeft');
    await expect
      .poll(() => page.evaluate(() => document.activeElement?.getAttribute('aria-label')))
      .toMatch(/^State I(,|$)/);
    await page.keyboard.press('Tab');
    const field = page.getByLabel('Note', { exact: true });
    await expect.poll(() => field.evaluate((input) => input === document.activeElement)).toBe(true);
    await page.keyboard.type('where it began');
    await page.keyboard.press('Enter');
    await expect
      .poll(async () => Object.values((await recipeOf()).histories[0].margins))
      .toEqual([{ note: 'where it began' }]);
    // V follows I, as II does: a branch, which may have a name.
    await stateButton(page, 'V').focus();
    const branch = page.getByLabel('Branch');
    await branch.fill('for the cover');
    await branch.press('Enter');
    await page.locator('.thread-branch', { hasText: 'for the cover' }).waitFor();
    await close(window);
  });

  it('marks delivered states and says which file', async () => {
    const window = await open();
    const { page } = window;
    await page.keyboard.press('Control+s');
    await page.getByRole('dialog').getByRole('button', { name: 'Save', exact: true }).click();
    await page.getByText('Saved', { exact: true }).waitFor({ timeout: 60_000 });
    await page.getByRole('button', { name: 'Back to the easel' }).click();
    const delivered = page.locator('.thread-state.is-delivered');
    await expect.poll(() => delivered.count()).toBe(1);
    await delivered.focus();
    await page.locator('.card-file', { hasText: 'ferry-bank painted.png' }).waitFor();
    await close(window);
  });

  it('takes the look of a recipe file that is dropped on the picture', async () => {
    const other = join(folder, 'reeds.jpg');
    await writePhotograph(other, 'french-alpine-landscape', 900);
    const window = await open(other);
    const { page } = window;
    expect(await numerals(page)).toEqual(['I']);
    const text = await readFile(`${photo}.oxgall.json`, 'utf8');
    const transfer = await page.evaluateHandle((recipe) => {
      const carried = new DataTransfer();
      carried.items.add(new File([recipe], 'ferry-bank.jpg.oxgall.json', { type: 'application/json' }));
      return carried;
    }, text);
    await page.dispatchEvent('.stage-hold', 'drop', { dataTransfer: transfer });
    await expect.poll(() => present(page)).toBe('IV');
    expect(await strengthOf(page)).toBe(60);
    await page.keyboard.press('Control+z');
    expect(await strengthOf(page)).toBe(100);
    await close(window);
  });

  it('makes, finds, renames, bins and brings back presets of one’s own', async () => {
    const window = await open();
    const { page } = window;
    await page.keyboard.press('p');
    await page.getByText('is built in and stays as it is').waitFor();
    await page.getByRole('button', { name: 'Make a preset of this…' }).click();
    await page.getByLabel('Name of the new preset').fill('Odalys at dusk');
    await page.keyboard.press('Enter');
    const own = page.locator('.preset', { hasText: 'Odalys at dusk' });
    await own.waitFor();
    await page.getByLabel('Find').fill('odalys');
    await expect.poll(() => page.locator('.preset').count()).toBe(1);
    await own.click();
    await expect.poll(() => own.getByRole('radio').isChecked()).toBe(true);
    await page.getByRole('button', { name: 'Rename…' }).click();
    await page.getByLabel('New name').fill('Odalys at dawn');
    await page.keyboard.press('Enter');
    await page.locator('.preset', { hasText: 'Odalys at dawn' }).waitFor();
    expect(await seriousFindings(page), 'presets').toEqual([]);
    await keepScreen(page, 'presets-own');
    await page.getByRole('button', { name: 'Put in the bin' }).click();
    await expect.poll(() => page.locator('.preset').count()).toBe(0);
    await page.getByText('In the bin: 1').click();
    await page
      .locator('.preset-bin')
      .getByRole('button', { name: /Take back/ })
      .click();
    await page.locator('.preset', { hasText: 'Odalys at dawn' }).waitFor();
    await close(window);
  });

  it('says that a recipe is only for looking, and offers to keep both after a change elsewhere', async () => {
    const newer = join(folder, 'newer.jpg');
    await writePhotograph(newer, 'french-alpine-landscape', 900);
    const text = await readFile(
      new URL('../fixtures/recipes/recipe-schema-99.json', import.meta.url),
      'utf8',
    );
    await writeFile(`${newer}.oxgall.json`, text);
    const looking = await open(newer);
    await looking.page.getByText('Only for looking').waitFor();
    await close(looking);

    const window = await open();
    const { page } = window;
    const recipe = await recipeOf();
    recipe.histories[0].margins = { ...recipe.histories[0].margins, elsewhere: { note: 'by another hand' } };
    await writeFile(`${photo}.oxgall.json`, JSON.stringify(recipe));
    await setStrength(page, 1);
    await page.getByRole('alert').getByRole('button', { name: 'Keep both' }).click();
    await page.getByText('Both versions are kept').waitFor();
    expect((await recipeOf()).histories[0].margins.elsewhere).toEqual({ note: 'by another hand' });
    await close(window);
  });

  it('stays smooth with five hundred states', async () => {
    const long = join(folder, 'long.jpg');
    await writePhotograph(long, 'french-alpine-landscape', 901);
    const making = await open(long);
    await setStrength(making.page, 1);
    await keepAs(making.page, 'the second');
    await expect.poll(async () => (await recipeOf(long)).histories[0].states.length).toBe(2);
    await close(making);
    const recipe = await recipeOf(long);
    let states: State[] = recipe.histories[0].states;
    while (states.length < 500) {
      const parameters = { ...defaultParameters(), 'body.hold': (states.length % 90) / 100 + 0.05 };
      const time = new Date(Date.UTC(2031, 3, 5, 6, 7, states.length)).toISOString();
      const content = { parameters, engineVersion: '1', note: '', time, parent: states.at(-1)!.id };
      states = appendState(states, content).states;
    }
    recipe.histories[0].states = states;
    await writeFile(`${long}.oxgall.json`, JSON.stringify(recipe));
    const window = await open(long);
    const { page } = window;
    // Only what is in view is there at all.
    expect(await page.locator('.thread-state').count()).toBeLessThan(60);
    const frames = await page.locator('.thread-hold').evaluate(
      (hold) =>
        new Promise<number[]>((resolve) => {
          const times: number[] = [];
          let last = performance.now();
          const scroll = (now: number) => {
            times.push(now - last);
            last = now;
            hold.scrollLeft += 140;
            if (times.length < 120) requestAnimationFrame(scroll);
            else resolve(times.slice(1));
          };
          requestAnimationFrame(scroll);
        }),
    );
    const median = frames.sort((a, b) => a - b)[Math.floor(frames.length / 2)];
    expect(median).toBeLessThan(process.env.OXGALL_STRICT ? 18 : 60);
    await page.keyboard.press('t');
    await page.locator('.thread-state.is-present:focus').waitFor();
    await page.keyboard.press('End');
    await stateButton(page, 'D').waitFor();
    await close(window);
  });
});
