import { AxeBuilder } from '@axe-core/playwright';
import type { Page } from 'playwright-core';

/** Findings of the axe rules that would keep somebody out, as short lines. */
export async function seriousFindings(page: Page): Promise<string[]> {
  const { violations } = await new AxeBuilder({ page }).analyze();
  return violations
    .filter(({ impact }) => impact === 'serious' || impact === 'critical')
    .map(({ id, nodes }) => `${id}: ${nodes.map((node) => node.target.join(' ')).join('; ')}`);
}
