import { mkdtemp, rm } from 'node:fs/promises';
import { tmpdir } from 'node:os';
import { join } from 'node:path';
import type { Page } from 'playwright-core';
import { afterEach, beforeEach, describe, expect, it } from 'vitest';
import { chromiumFound } from './chromium.ts';
import { type OpenWindow, openWindow } from './openWindow.ts';
import { frame, writeFrames } from './wallFrames.ts';

/** What has the focus: a frame's name, or else the element's. */
const focused = (page: Page) =>
  page.evaluate(() => {
    const element = document.activeElement as HTMLElement;
    return element.dataset.frame ?? element.tagName;
  });
const scrolled = (page: Page) =>
  page.locator('.wall-ground').evaluate((ground) => [ground.scrollTop, ground.scrollHeight]);
const isInView = (page: Page, name: string) =>
  frame(page, name).evaluate((print) => {
    const ground = print.closest('.wall-ground')!.getBoundingClientRect();
    const { top, bottom } = print.getBoundingClientRect();
    return top >= ground.top && bottom <= ground.bottom;
  });

describe.skipIf(!chromiumFound.path)('the focus on the Wall', () => {
  let folder: string;
  let opened: OpenWindow;
  let page: Page;

  beforeEach(async () => {
    folder = await mkdtemp(join(tmpdir(), 'oxgall-focus-'));
    await writeFrames(folder, 48, { isMixed: true, widthPx: 240 });
    opened = await openWindow({ path: folder });
    page = opened.page;
  }, 60_000);

  afterEach(async () => {
    await opened.close();
    await rm(folder, { recursive: true, force: true });
  });

  it('stays on its frame while the series is read and measured', { timeout: 60_000 }, async () => {
    await frame(page, 'plate-2.jpg').focus();
    await page.evaluate(() => {
      document.documentElement.dataset.lost = '0';
      document.addEventListener('focusout', () => {
        document.documentElement.dataset.lost = '1';
      });
    });
    await page.getByText(/^Measuring the frames: ([1-9]\d?) of 48/).waitFor({ timeout: 50_000 });
    expect(await focused(page)).toBe('plate-2.jpg');
    expect(await page.evaluate(() => document.documentElement.dataset.lost)).toBe('0');
  });

  it('goes with its frame where frames are hung anew', { timeout: 60_000 }, async () => {
    await frame(page, 'plate-1.jpg').waitFor();
    const names = await page
      .locator('[data-frame]')
      .evaluateAll((all) => all.map((one) => (one as HTMLElement).dataset.frame!));
    const last = names[names.length - 1];
    await frame(page, last).focus();
    // Larger prints: the row of that frame moves far down.
    for (let step = 0; step < 6; step++) await page.keyboard.press('+');
    expect(await focused(page)).toBe(last);
    await page.keyboard.press('ArrowLeft');
    const before = `plate-${Number(/\d+/.exec(last)![0]) - 1}.jpg`;
    await expect.poll(() => focused(page)).toBe(before);
    await expect.poll(() => isInView(page, before)).toBe(true);
  });

  it('comes to a frame at the edge of the view that is pressed, which is chosen where it is', {
    timeout: 60_000,
  }, async () => {
    await frame(page, 'plate-1.jpg').waitFor();
    const edge = await page.locator('.wall-ground').evaluate((ground) => {
      const { bottom } = ground.getBoundingClientRect();
      const cut = [...ground.querySelectorAll<HTMLElement>('[data-frame]')].find(
        (print) => print.getBoundingClientRect().top > bottom - 300,
      )!;
      ground.scrollTop += cut.getBoundingClientRect().top - (bottom - 24);
      const { left, top } = cut.getBoundingClientRect();
      return { name: cut.dataset.frame!, xPx: left + 30, yPx: top + 12 };
    });
    const before = await scrolled(page);
    await page.mouse.move(edge.xPx, edge.yPx);
    await page.mouse.down();
    await page.waitForTimeout(120);
    await page.mouse.up();
    await expect.poll(() => frame(page, edge.name).getAttribute('aria-pressed')).toBe('true');
    expect(await scrolled(page)).toEqual(before);
    expect(await focused(page)).toBe(edge.name);
  });

  it('waits on its frame while somebody scrolls away, and the keys go on from there', {
    timeout: 60_000,
  }, async () => {
    await frame(page, 'plate-2.jpg').focus();
    await page.locator('.wall-ground').evaluate((ground) => {
      ground.scrollTop = ground.scrollHeight;
    });
    await frame(page, 'plate-48.jpg').waitFor();
    const [far] = await scrolled(page);
    // What comes in of the frames meanwhile pulls nobody back.
    await page.getByText(/^Measuring the frames: ([1-9]\d?) of 48/).waitFor({ timeout: 50_000 });
    expect((await scrolled(page))[0]).toBe(far);
    expect(await focused(page)).toBe('plate-2.jpg');
    await page.keyboard.press('ArrowRight');
    await expect.poll(() => focused(page)).toBe('plate-3.jpg');
    await expect.poll(() => isInView(page, 'plate-3.jpg')).toBe(true);
  });
});
