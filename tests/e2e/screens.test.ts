import { mkdirSync, readdirSync, readFileSync } from 'node:fs';
import { join } from 'node:path';
import AxeBuilder from '@axe-core/playwright';
import type { BrowserContext, Page } from 'playwright-core';
import { afterAll, beforeAll, describe, expect, it } from 'vitest';
import { views } from '../../src/router/views.ts';
import { startApplication, type Application } from './support/application.ts';
import { findIds, placesWithViews, type Place } from './support/places.ts';

/**
 * Every screen of the demo estate, on a desk and a phone, light and dark: something is there, nothing runs out of the page, no
 * key stands for a text, nothing fails in the console, axe finds no serious fault. With PATCHROW_SCREENS, a folder, all three
 * sizes are looked at in both themes and the pictures kept.
 */

const desk = { width: 1440, height: 900 };
const tablet = { width: 1024, height: 768 };
const phone = { width: 390, height: 844 };
const themes = ['light', 'dark'] as const;
const picturesFolder = process.env.PATCHROW_SCREENS;
const sizesOf = (theme: Theme) => (picturesFolder ? [desk, tablet, phone] : theme === 'light' ? [desk, phone] : [desk]);
const features = readdirSync(join(import.meta.dirname, '../../src/locales/en')).map((file) => file.replace('.json', ''));
const bareKey = new RegExp(`^(${features.join('|')})\\.[a-zA-Z]+(\\.[a-zA-Z]+)*$`, 'm');

type Theme = (typeof themes)[number];
let app: Application;
let places: Place[] = [];
const pages = new Map<string, { page: Page; context: BrowserContext; faults: string[] }>();

beforeAll(async () => {
  app = await startApplication();
  const { page, context, estateId } = await app.signIn('owner');
  places = placesWithViews(await findIds(page.request, app.url, estateId));
  await context.close();
  if (picturesFolder) mkdirSync(picturesFolder, { recursive: true });
}, 600_000);
afterAll(() => app?.close());

async function pageFor(role: Place['role'], theme: Theme) {
  const key = `${role} ${theme}`;
  const known = pages.get(key);
  if (known) return known;
  const { page, context } = role === 'nobody' ? await app.visit() : await app.signIn(role);
  await page.emulateMedia({ colorScheme: theme, reducedMotion: 'reduce' });
  const faults: string[] = [];
  page.on('console', (message) => message.type() === 'error' && faults.push(message.text()));
  page.on('pageerror', (error) => faults.push(error.message));
  pages.set(key, { page, context, faults });
  return pages.get(key)!;
}

async function settle(page: Page): Promise<void> {
  await page.waitForLoadState('load');
  await page.locator('h1, h2').filter({ visible: true }).first().waitFor();
  await page.waitForFunction(() => document.querySelector('[aria-busy="true"]') === null, undefined, { timeout: 20_000 });
}

/** What depends on the theme is contrast; everything else is looked at once. */
const axe = (page: Page, theme: Theme) => (theme === 'light' ? new AxeBuilder({ page }) : new AxeBuilder({ page }).withRules('color-contrast'));

const seriousFaults = async (page: Page, theme: Theme) =>
  (await axe(page, theme).analyze()).violations
    .filter(({ impact }) => impact === 'serious' || impact === 'critical')
    .map(({ id, nodes }) => `${id}: ${nodes.map(({ html, target }) => `${String(target)} ${html.slice(0, 120)}`).slice(0, 4).join(' | ')}`);

describe.each(themes)('in the %s theme', (theme) => {
  it.each(Object.keys(views).filter((name) => name !== 'home'))('the screen %s stands', async (name) => {
    const place = places.find((each) => each.name === name)!;
    const { page, faults } = await pageFor(place.role, theme);
    faults.length = 0;
    const found: string[] = [];
    await page.goto(`${app.url}${place.path}`);
    for (const size of sizesOf(theme)) {
      await page.setViewportSize(size);
      await settle(page);
      // Parts that measure their room, such as the row strip, need a moment after the size changed.
      const fits = await page.waitForFunction(() => document.documentElement.scrollWidth <= innerWidth, undefined, { timeout: 3000 }).then(() => true, () => false);
      if (!fits) found.push(`${size.width}: the page is wider than the screen`);
      const key = bareKey.exec(await page.locator('body').innerText());
      if (key) found.push(`${size.width}: the key ${key[0]} stands for a text`);
      if (size !== tablet) found.push(...(await seriousFaults(page, theme)).map((fault) => `${size.width}: ${fault}`));
      if (picturesFolder) {
        await page.waitForTimeout(1200);
        await page.screenshot({ path: join(picturesFolder, `${name}-${size.width}-${theme}.png`) });
      }
    }
    // A link that has ended is looked at as such; the browser notes the answer.
    expect([...found, ...faults.filter((fault) => place.role !== 'nobody' || !/404|410/.test(fault))]).toEqual([]);
  });
});

it('keeps a name of eighty letters without a space within a phone', async () => {
  const { page, context, estateId } = await app.signIn('agronomist', { phone: true });
  const { items } = (await (await page.request.get(`${app.url}/api/estates/${estateId}/blocks`)).json()) as { items: { id: string; name: string }[] };
  const { id, name } = items.find((block) => block.name === "Tinker's Acre")!;
  const long = 'W'.repeat(80);
  await page.route('**/api/estates/**', async (route) => {
    const response = await route.fetch();
    if (!response.headers()['content-type']?.includes('json')) return route.fulfill({ response });
    await route.fulfill({ response, body: (await response.text()).replaceAll(name, long) });
  });
  const wide: string[] = [];
  for (const [place, head] of [[`blocks/${id}`, 'h1'], [`blocks/${id}/zoning`, '.above']] as const) {
    await page.goto(`${app.url}/e/${estateId}/${place}`);
    await page.locator(`.page-head ${head}`).filter({ hasText: long }).waitFor();
    await settle(page);
    if (await page.evaluate(() => document.documentElement.scrollWidth > innerWidth)) wide.push(place.replace(id, 'block'));
  }
  await page.unrouteAll({ behavior: 'ignoreErrors' });
  await context.close();
  expect(wide).toEqual([]);
});

it('keeps every view file reachable from a place', () => {
  const listed = readFileSync(join(import.meta.dirname, '../../src/router/views.ts'), 'utf8');
  const folder = join(import.meta.dirname, '../../src/views');
  const files = readdirSync(folder).flatMap((feature) => readdirSync(join(folder, feature)).filter((file) => file.endsWith('View.vue')).map((file) => `${feature}/${file}`));
  expect(files.length).toBeGreaterThan(20);
  expect(files.filter((file) => !listed.includes(file)).filter((file) => file !== 'door/ErrorView.vue')).toEqual([]);
});
