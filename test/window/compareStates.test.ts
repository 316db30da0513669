import { describe, expect, it } from 'vitest';
import { seriousFindings } from './axe.ts';
import { tabTo } from './byKeyboard.ts';
import { chromiumFound } from './chromium.ts';
import { keepScreen, settled } from './openWindow.ts';
import {
  card,
  holdOf,
  keepAs,
  numeral,
  numeralsOf,
  presentOf,
  setBody,
  setHold,
  thread,
  usePhotoWindows,
} from './photoWindow.ts';
import { countDifferent, opaqueBox, pixelAt, readCanvas, type WindowPixels } from './readWindow.ts';

describe.skipIf(!chromiumFound.path)('comparing states in a real window', () => {
  const room = usePhotoWindows('compare');

  it('shows the very pixels of either state on its side of the split, and what differs in a table', async () => {
    const window = await room.open({ path: await room.freshPhoto() });
    const { page } = window;
    const first = await readCanvas(page, 'stage');
    await setBody(page, 'Brush', '5');
    await keepAs(page, 'calmer water');
    await setBody(page, 'Brush', '9');
    await keepAs(page, 'every reed');
    await settled(page);
    const third = await readCanvas(page, 'stage');
    expect(countDifferent(first, third)).toBeGreaterThan(10_000);
    // Back to II, so that neither side is what lies on the easel.
    await page.keyboard.press('Control+z');
    await page.keyboard.press('Control+z');
    await numeral(page, 'I').hover();
    await card(page, 'I').getByRole('combobox').selectOption({ label: 'State III, every reed' });
    await page.getByRole('heading', { name: 'State I against State III' }).waitFor();
    await page.mouse.move(400, 450);
    const row = page.getByRole('row', { name: /^Brush/ });
    expect(await row.getByRole('cell').allTextContents()).toEqual(['3.2 mm', '9 mm']);
    expect(await page.locator('.compare-table tbody tr').count()).toBe(1);
    await expect
      .poll(async () => differencesBesideSplit(await readCanvas(page, 'stage'), first, third))
      .toEqual([0, 0]);
    expect(await seriousFindings(page)).toEqual([]);
    await keepScreen(page, 'compare-states');
    await page.keyboard.press('Escape');
    await expect.poll(() => page.getByRole('complementary', { name: 'Comparison' }).count()).toBe(0);
    await room.close(window);
  });

  it('compares a state that is dragged onto the picture with the easel, split or in turns', async () => {
    const window = await room.open({ path: await room.freshPhoto() });
    const { page } = window;
    const first = await readCanvas(page, 'stage');
    await setBody(page, 'Brush', '9');
    await settled(page);
    const now = await readCanvas(page, 'stage');
    expect(countDifferent(first, now)).toBeGreaterThan(10_000);
    await numeral(page, 'I').dragTo(page.locator('.stage-hold'));
    await page.getByRole('heading', { name: 'State I against The easel' }).waitFor();
    await expect
      .poll(async () => differencesBesideSplit(await readCanvas(page, 'stage'), first, now))
      .toEqual([0, 0]);
    // By hand where motion is unwelcome.
    await page.emulateMedia({ reducedMotion: 'reduce' });
    await page.keyboard.press('v');
    const seen: string[] = [];
    for (let turn = 0; turn < 2; turn++) {
      await page.getByRole('button', { name: 'Turn over' }).click();
      const shown = await readCanvas(page, 'stage');
      if (countDifferent(shown, first) === 0) seen.push('state I');
      if (countDifferent(shown, now) === 0) seen.push('the easel');
    }
    expect(seen.toSorted()).toEqual(['state I', 'the easel']);
    await room.close(window);
  });

  it('lets the two take turns by the clock', async () => {
    const window = await room.open({ path: await room.freshPhoto() });
    const { page } = window;
    await setBody(page, 'Brush', '9');
    await settled(page);
    await numeral(page, 'I').dragTo(page.locator('.stage-hold'));
    await page.getByRole('button', { name: 'Let them take turns' }).click();
    const split = page.getByRole('slider', { name: /^Split between/ });
    const places = new Set<string | null>();
    await expect
      .poll(async () => places.add(await split.getAttribute('aria-valuenow')).size)
      .toBeGreaterThanOrEqual(2);
    expect([...places].every((place) => place === '0' || place === '100')).toBe(true);
    await room.close(window);
  });

  it('keeps, returns, compares and goes back by keyboard alone', async () => {
    const window = await room.open({ path: await room.freshPhoto() });
    const { page } = window;
    const press = async (...keys: string[]) => {
      for (const key of keys) await page.keyboard.press(key);
    };
    await press('b');
    for (const note of ['calmer water', 'every reed']) {
      await tabTo(page, /^Crispness$/);
      await press('ArrowRight', 'k');
      await page.keyboard.type(note);
      await press('Enter');
      await thread(page)
        .getByRole('button', { name: new RegExp(note) })
        .waitFor();
    }
    await press('t', 'Home');
    await card(page, 'I').waitFor();
    await tabTo(page, 'Return to I');
    await press('Enter');
    await expect.poll(() => presentOf(page)).toBe('IV');
    await press('t', 'Home');
    await tabTo(page, 'Compare State I with');
    await press('s');
    await page.getByRole('heading', { name: /^State I against State/ }).waitFor();
    await expect.poll(() => page.locator('.state-card').count()).toBe(0);
    await press('v');
    await page.getByRole('button', { name: 'Let them take turns', pressed: true }).waitFor();
    // While something is painted, Escape stops that first.
    await settled(page);
    await press('Escape');
    await expect.poll(() => page.getByRole('complementary', { name: 'Comparison' }).count()).toBe(0);
    await press('Control+z');
    await expect.poll(() => presentOf(page)).toBe('III');
    await press('Control+Shift+z');
    await expect.poll(() => presentOf(page)).toBe('IV');
    await room.close(window);
  });

  it('sets aside on return what nobody kept, and brings it back with undo', async () => {
    const window = await room.open({ path: await room.freshPhoto() });
    const { page } = window;
    await setHold(page, '0.7');
    await thread(page).getByRole('button', { name: 'Not kept yet: Hold 0.25 → 0.7.' }).waitFor();
    await numeral(page, 'I').hover();
    await card(page, 'I').getByRole('button', { name: 'Return to I' }).click();
    await expect.poll(() => numeralsOf(page)).toEqual(['I', 'II', 'III']);
    expect(await thread(page).locator('.thread-unkept').count()).toBe(0);
    expect(await holdOf(page)).toBe('0.25');
    await numeral(page, 'II').hover();
    expect(await card(page, 'II').getByRole('textbox', { name: 'Note' }).inputValue()).toBe('Set aside');
    await page.mouse.move(400, 450);
    await page.keyboard.press('Control+z');
    await expect.poll(() => holdOf(page)).toBe('0.70');
    await room.close(window);
  });

  it('loses no word that was typed into a card', async () => {
    const window = await room.open({ path: await room.freshPhoto() });
    const { page } = window;
    await setHold(page, '0.5');
    await keepAs(page, 'calmer water');
    await numeral(page, 'I').hover();
    const note = card(page, 'I').getByRole('textbox', { name: 'Note' });
    await note.pressSequentially('where Odalys began');
    // The pointer strays over another state, and off the thread: the card stays while it is written in.
    await numeral(page, 'II').hover();
    await page.mouse.move(400, 450);
    expect(await card(page, 'I').isVisible()).toBe(true);
    await page.locator('.stage-hold').click();
    await thread(page).getByRole('button', { name: 'State I, where Odalys began' }).waitFor();
    await numeral(page, 'I').hover();
    await note.fill('never mind');
    await note.press('Escape');
    await expect.poll(() => card(page, 'I').count()).toBe(0);
    expect(await numeral(page, 'I').getAttribute('aria-label')).toBe('State I, where Odalys began');
    await room.close(window);
  });
});

/** How many pixels differ from the one on the left of a split in the middle, and from the other on its right. */
function differencesBesideSplit(
  split: WindowPixels,
  onLeft: WindowPixels,
  onRight: WindowPixels,
): [number, number] {
  const { left, right, top, bottom } = opaqueBox(split);
  const middle = Math.round((left + right) / 2);
  const counts: [number, number] = [0, 0];
  for (let y = top; y < bottom; y += 3)
    for (let x = left; x < right; x += 3) {
      if (Math.abs(x - middle) <= 2) continue;
      const expected = pixelAt(x < middle ? onLeft : onRight, x, y);
      const isSame = pixelAt(split, x, y).every((value, c) => value === expected[c]);
      if (!isSame) counts[x < middle ? 0 : 1] += 1;
    }
  return counts;
}
