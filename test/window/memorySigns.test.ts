import { mkdir, mkdtemp, readFile, writeFile } from 'node:fs/promises';
import { dirname, join } from 'node:path';
import { describe, expect, it } from 'vitest';
import { recipeInMirror } from '../../main/store/recipePlaces.ts';
import { usualMirrorFolder } from '../../main/store/settings.ts';
import { seriousFindings } from './axe.ts';
import { chromiumFound } from './chromium.ts';
import { makeLongRecipe, writeRecipe } from './longRecipe.ts';
import { keepScreen, settled } from './openWindow.ts';
import { writePhotograph } from './photographs.ts';
import {
  card,
  holdOf,
  keepAs,
  numeralsOf,
  presentOf,
  setHold,
  thread,
  untilSaved,
  usePhotoWindows,
} from './photoWindow.ts';

describe.skipIf(!chromiumFound.path)('what the window says of a recipe', () => {
  const room = usePhotoWindows('signs');

  it('leaves a recipe of a newer version as it is, and says so', async () => {
    const path = await room.freshPhoto();
    await writeRecipe(path, { ...(await makeLongRecipe(path, 3)), schema: 99 } as never);
    const before = await readFile(`${path}.oxgall.json`);
    const window = await room.open({ path });
    const { page } = window;
    await page.getByText('Only for looking: a newer Oxgall wrote this recipe.').waitFor();
    expect(await page.getByRole('button', { name: 'Keep as new state' }).isDisabled()).toBe(true);
    await setHold(page, '0.8');
    await page.keyboard.press('k');
    expect(await page.getByRole('textbox', { name: 'Note of the new state' }).count()).toBe(0);
    await settled(page);
    await room.close(window);
    expect(await readFile(`${path}.oxgall.json`)).toEqual(before);
  });

  it('keeps both where the recipe was changed elsewhere, and the easel as it is', async () => {
    const path = await room.freshPhoto();
    const window = await room.open({ path });
    const { page } = window;
    await setHold(page, '0.5');
    await keepAs(page, 'ours');
    const ours = await untilSaved(path, ({ histories }) => histories[0].states.length === 2);
    await writeRecipe(path, await makeLongRecipe(path, 3));
    await setHold(page, '0.6');
    await page.getByRole('alert').getByRole('button', { name: 'Keep both' }).click();
    await expect.poll(() => numeralsOf(page)).toEqual(['I', 'II', 'III', 'IV']);
    const both = await untilSaved(path, ({ histories }) => histories[0].states.length === 4);
    expect(both.histories[0].states.map(({ id }) => id)).toContain(ours.histories[0].states[1].id);
    expect(await holdOf(page)).toBe('0.60');
    await room.close(window);
  });

  it('repaints what an older engine kept as a new state, which undo takes off the easel again', async () => {
    const path = await room.freshPhoto();
    await writeRecipe(path, await makeLongRecipe(path, 2, '0'));
    const window = await room.open({ path });
    const { page } = window;
    const sign = page.getByText(/^Kept by engine 0; today’s is/);
    await sign.waitFor();
    expect(await seriousFindings(page)).toEqual([]);
    await keepScreen(page, 'states-older-engine');
    await page.getByRole('button', { name: 'Repaint with today’s engine' }).click();
    await expect.poll(() => numeralsOf(page)).toEqual(['I', 'II', 'III']);
    expect(await presentOf(page)).toBe('III');
    await expect.poll(() => sign.count()).toBe(0);
    await page.keyboard.press('Control+z');
    await expect.poll(() => presentOf(page)).toBe('II');
    await sign.waitFor();
    expect(await numeralsOf(page)).toEqual(['I', 'II', 'III']);
    await room.close(window);
  });

  it('says that the photograph has changed', async () => {
    const path = await room.freshPhoto();
    await writeRecipe(path, await makeLongRecipe(path, 2));
    await writePhotograph(path, 'locomotion-house-cat', 700);
    const window = await room.open({ path });
    await window.page.getByText('The photograph has changed since.').waitFor();
    await room.close(window);
  });

  it('says where the recipe lies when its folder cannot be written', async () => {
    const path = await room.freshPhoto();
    const dataFolder = await mkdtemp(join(room.folder, 'data-'));
    // As it lies when an earlier day's work could not be written beside the photo.
    const mirrored = recipeInMirror(path, usualMirrorFolder(dataFolder));
    await mkdir(dirname(mirrored), { recursive: true });
    await writeFile(mirrored, JSON.stringify(await makeLongRecipe(path, 2)));
    const window = await room.open({ path, dataFolder });
    const { page } = window;
    expect(await numeralsOf(page)).toEqual(['I', 'II']);
    const sign = page.getByText('The recipe lies elsewhere: this folder cannot be written.');
    await sign.waitFor();
    expect(await sign.getAttribute('title')).toBe(mirrored);
    await room.close(window);
  });

  it('tells the files of every delivery, and which of them are alike to the pixel', async () => {
    const window = await room.open({ path: await room.freshPhoto(600) });
    const { page } = window;
    const deliver = async (name: string) => {
      await page.keyboard.press('Control+s');
      await page.getByRole('textbox', { name: /^Name/ }).fill(name);
      await page.getByRole('button', { name: 'Save', exact: true }).click();
      await page.getByRole('heading', { name: 'Saved' }).waitFor();
      await page.keyboard.press('Escape');
    };
    await deliver('for-the-client');
    await expect.poll(() => page.locator('.thread-state.is-delivered').count()).toBe(1);
    await deliver('for-the-printer');
    await thread(page)
      .getByRole('button', { name: /^State I, .*delivered/ })
      .hover();
    const files = card(page, 'I').getByRole('list', { name: 'Delivered files' }).getByRole('listitem');
    await expect
      .poll(() => files.allTextContents())
      .toEqual([
        expect.stringMatching(/^for-the-client\.png, delivered today at \d\d:\d\d$/),
        expect.stringMatching(/^for-the-printer\.png, .*, pixel for pixel as for-the-client\.png$/),
      ]);
    expect(await seriousFindings(page)).toEqual([]);
    await room.close(window);
  });
});
