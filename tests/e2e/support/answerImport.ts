import type { Page } from 'playwright-core';
import { expect } from 'vitest';

/** Gives the answers that are still asked for, in steps, until the file is placed or, for outlines, offers what `ends` says. */
export async function answer(page: Page, file: string, answers: Record<string, string | RegExp>, ends = 'Ready'): Promise<void> {
  const line = page.locator('li.import-line', { hasText: file }).first();
  await line.waitFor();
  for (let step = 0; step < 6; step++) {
    await page.waitForFunction(() => document.querySelector('[aria-busy="true"]') === null);
    if ((await line.getByRole('button', { name: 'Confirm', exact: true }).count()) === 0) {
      if (await line.getByText(ends, { exact: true }).count()) break;
      await line.locator('h2 button').click();
      if ((await line.getByRole('button', { name: 'Confirm', exact: true }).count()) === 0) break;
    }
    for (const [question, words] of Object.entries(answers)) {
      const choice = line.getByRole('group', { name: question }).getByText(words, { exact: true });
      if (await choice.count()) await choice.first().click();
      const list = line.getByLabel(question);
      if ((await list.count()) && (await list.first().evaluate((element) => element.tagName)) === 'SELECT') await list.first().selectOption({ label: typeof words === 'string' ? words : ((await list.first().locator('option').allInnerTexts()).find((text) => words.test(text)) ?? '') });
      if ((await list.count()) && (await list.first().getAttribute('type')) === 'date') await list.first().fill(String(words));
    }
    const answered = page.waitForResponse((response) => response.request().method() !== 'GET' && response.url().includes('/imports/'));
    await line.getByRole('button', { name: 'Confirm', exact: true }).click();
    await answered;
  }
  await expect.poll(() => line.getByText(ends, { exact: true }).count(), { timeout: 90_000 }).toBeGreaterThan(0);
}
