import { describe, expect, it } from 'vitest';
import { chromiumFound } from './chromium.ts';
import { makeLongRecipe, writeRecipe } from './longRecipe.ts';
import { keepScreen, settled } from './openWindow.ts';
import { card, numeral, presentOf, usePhotoWindows } from './photoWindow.ts';

describe.skipIf(!chromiumFound.path)('a thread of five hundred states', () => {
  const room = usePhotoWindows('long');

  it('scrolls smoothly, and holds only what is in view', async () => {
    const path = await room.freshPhoto(700);
    await writeRecipe(path, await makeLongRecipe(path, 500));
    const window = await room.open({ path });
    const { page } = window;
    expect(await page.locator('.thread-state').count()).toBeLessThan(60);
    const intervals = await page.locator('.thread-hold').evaluate(async (hold) => {
      const frame = () => new Promise<number>((resolve) => requestAnimationFrame(resolve));
      const times: number[] = [];
      hold.scrollLeft = 0;
      let lastMs = await frame();
      while (hold.scrollLeft + hold.clientWidth < hold.scrollWidth - 1) {
        hold.scrollLeft += 160;
        const nowMs = await frame();
        times.push(nowMs - lastMs);
        lastMs = nowMs;
      }
      return times;
    });
    const median = intervals.toSorted((a, b) => a - b)[intervals.length >> 1];
    process.stdout.write(`500 states scroll at ${(1000 / median).toFixed(0)} frames a second\n`);
    expect(intervals.length).toBeGreaterThan(150);
    expect(1000 / median).toBeGreaterThanOrEqual(process.env.OXGALL_STRICT ? 55 : 15);
    // What came into view by scrolling is there, and can be pointed at.
    await numeral(page, 'CDXCIX').hover();
    await card(page, 'CDXCIX').waitFor();
    await room.close(window);
  });

  it('opens hardly later than one, and the keyboard reaches both of its ends', {
    timeout: 120_000,
  }, async () => {
    const short = await room.freshPhoto(700);
    const long = await room.freshPhoto(700);
    await writeRecipe(short, await makeLongRecipe(short, 1));
    await writeRecipe(long, await makeLongRecipe(long, 500));
    const window = await room.open({ path: short });
    const { page } = window;
    const openFor = async (path: string) => {
      const name = path.split('/').at(-1)!;
      await page.keyboard.press('Control+o');
      const row = page.getByRole('button', { name: new RegExp(`^${name}`) });
      await row.waitFor();
      const shown = page.evaluate(
        async (heading) => {
          const startMs = await new Promise<number>((resolve) =>
            document.addEventListener('click', () => resolve(performance.now()), { once: true }),
          );
          const frame = () => new Promise((resolve) => requestAnimationFrame(resolve));
          while (document.querySelector('h1')?.textContent !== heading) await frame();
          while (!document.querySelector('.thread-state')) await frame();
          return performance.now() - startMs;
        },
        name.replace('.jpg', ''),
      );
      await row.click();
      const tookMs = await shown;
      await settled(page);
      return tookMs;
    };
    const times: Record<'short' | 'long', number[]> = { short: [], long: [] };
    await openFor(long);
    for (let round = 0; round < 5; round++) {
      times.short.push(await openFor(short));
      times.long.push(await openFor(long));
    }
    // The least of each: whoever else works on the machine only ever adds to it.
    const laterMs = Math.min(...times.long) - Math.min(...times.short);
    process.stdout.write(`500 states open ${laterMs.toFixed(0)} ms later than one\n`);
    expect(laterMs).toBeLessThanOrEqual(process.env.OXGALL_STRICT ? 100 : 500);

    expect(await presentOf(page)).toBe('D');
    await page.keyboard.press('t');
    await expect.poll(() => numeral(page, 'D').evaluate((it) => it === document.activeElement)).toBe(true);
    await page.keyboard.press('Home');
    await expect.poll(() => numeral(page, 'I').evaluate((it) => it === document.activeElement)).toBe(true);
    await card(page, 'I').waitFor();
    await page.keyboard.press('End');
    await card(page, 'D').waitFor();
    await keepScreen(page, 'states-long');
    await room.close(window);
  });
});
