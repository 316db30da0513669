import type { Page } from 'playwright-core';

/** Presses Tab until the element of that name has the focus, as somebody without a mouse would. */
export async function tabTo(page: Page, name: string | RegExp): Promise<void> {
  for (let press = 0; press < 80; press++) {
    const focused = await page.evaluate(() => {
      const element = document.activeElement as HTMLElement | null;
      const label = element?.getAttribute('aria-label') ?? element?.closest('label')?.textContent;
      return (label ?? element?.textContent ?? '').trim();
    });
    const isThere = typeof name === 'string' ? focused.startsWith(name) : name.test(focused);
    if (isThere) return;
    await page.keyboard.press('Tab');
  }
  throw new Error(`Expected Tab to reach ${name} within 80 presses`);
}
