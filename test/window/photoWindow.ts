import { mkdtemp, readFile, rm } from 'node:fs/promises';
import { tmpdir } from 'node:os';
import { join } from 'node:path';
import type { Page } from 'playwright-core';
import { afterAll, beforeAll, expect } from 'vitest';
import type { Recipe } from '../../core/recipes/recipe.ts';
import { type OpenWindow, openWindow, settled } from './openWindow.ts';
import { type PhotographName, writePhotograph } from './photographs.ts';

/** A folder of photographs nobody has worked on yet, and windows on them; all goes when the tests are done. */
export function usePhotoWindows(name: string) {
  const windows: OpenWindow[] = [];
  let number = 0;
  const room = {
    folder: '',
    async freshPhoto(widthPx = 900, photograph: PhotographName = 'nagasaki-boats'): Promise<string> {
      number += 1;
      const path = join(room.folder, `plate-${number}.jpg`);
      await writePhotograph(path, photograph, widthPx);
      return path;
    },
    async open(options: Parameters<typeof openWindow>[0]): Promise<OpenWindow> {
      const window = await openWindow({ ...options, environment: { HOME: room.folder } });
      windows.push(window);
      await settled(window.page);
      return window;
    },
    /** Closes a window and holds it to having reported no fault. */
    async close(window: OpenWindow): Promise<void> {
      expect(window.faults).toEqual([]);
      await window.close();
      windows.splice(windows.indexOf(window), 1);
    },
  };
  beforeAll(async () => {
    room.folder = await mkdtemp(join(tmpdir(), `oxgall-${name}-`));
  });
  afterAll(async () => {
    for (const window of windows) await window.close();
    await rm(room.folder, { recursive: true, force: true });
  });
  return room;
}

export const thread = (page: Page) => page.getByRole('toolbar', { name: /^States of / });

export const numeral = (page: Page, roman: string) =>
  thread(page).getByRole('button', { name: new RegExp(`^State ${roman}(,|$)`) });

export const card = (page: Page, roman: string) =>
  page.getByRole('region', { name: `State ${roman}`, exact: true });

export const numeralsOf = (page: Page) => thread(page).locator('.thread-numeral').allTextContents();

export const presentOf = (page: Page) =>
  thread(page).locator('[aria-current=true] .thread-numeral').textContent();

/** Types a value of the body. */
export async function setBody(page: Page, name: 'Brush' | 'Hold', value: string): Promise<void> {
  await page.getByRole('tab', { name: 'Body' }).click();
  const field = page.getByRole('textbox', { name: `${name}, typed` });
  await field.fill(value);
  await field.press('Enter');
  // Keys are letters again.
  await field.blur();
}

export const setHold = (page: Page, value: string) => setBody(page, 'Hold', value);

export const holdOf = (page: Page) => page.getByRole('textbox', { name: 'Hold, typed' }).inputValue();

export async function keepAs(page: Page, note: string): Promise<void> {
  const count = (await numeralsOf(page)).length;
  await page.keyboard.press('k');
  await page.getByRole('textbox', { name: 'Note of the new state' }).fill(note);
  await page.keyboard.press('Enter');
  await expect.poll(async () => (await numeralsOf(page)).length).toBe(count + 1);
}

/** Waits until the recipe beside a photo is as wished. */
export async function untilSaved(photo: string, isSo: (recipe: Recipe) => boolean): Promise<Recipe> {
  let recipe: Recipe | null = null;
  await expect
    .poll(async () => {
      const text = await readFile(`${photo}.oxgall.json`, 'utf8').catch(() => null);
      recipe = text === null ? null : JSON.parse(text);
      return recipe !== null && isSo(recipe);
    })
    .toBe(true);
  return recipe!;
}
