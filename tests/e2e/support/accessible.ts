import AxeBuilder from '@axe-core/playwright';
import type { Page } from 'playwright-core';
import { expect } from 'vitest';

/** Text of a dialog that is still fading in has too little contrast for a moment: only what stays is judged. */
async function waitForStillness(page: Page): Promise<void> {
  await page.evaluate(() => Promise.all(document.getAnimations().filter((one) => one.effect?.getTiming().iterations !== Infinity).map((one) => one.finished.catch(() => undefined))));
}

/** No violation that axe calls serious or worse. */
export async function expectAccessible(page: Page): Promise<void> {
  await waitForStillness(page);
  const { violations } = await new AxeBuilder({ page }).analyze();
  expect(violations.filter(({ impact }) => impact === 'serious' || impact === 'critical').map(({ id, nodes }) => `${id}: ${nodes.map(({ html }) => html.slice(0, 160)).join(' | ')}`)).toEqual([]);
}
