import type { Page } from 'playwright-core';
import { afterAll, beforeAll, describe, expect, it } from 'vitest';
import { startApplication, type Application } from './support/application.ts';

let app: Application;

beforeAll(async () => {
  app = await startApplication();
}, 600_000);
afterAll(() => app?.close());

const mostTabs = 150;

/** What has the focus, as a screen reader names it, and whether the ring round it can be seen. */
async function held(page: Page): Promise<{ name: string; tag: string; isRinged: boolean; inDialog: boolean }> {
  return page.evaluate(() => {
    const element = document.activeElement as HTMLElement;
    const labels = 'labels' in element ? [...((element as HTMLInputElement).labels ?? [])] : [];
    const name = element.getAttribute('aria-label') ?? (labels.length > 0 ? labels.map((label) => label.textContent).join(' ') : element.textContent);
    return { name: (name ?? '').replace(/\s+/g, ' ').trim(), tag: element.tagName, isRinged: getComputedStyle(element).outlineStyle !== 'none', inDialog: element.closest('[role="dialog"]') !== null };
  });
}

/** Goes on with Tab until the thing named has the focus; what has it must always be seen. */
async function tabTo(page: Page, name: RegExp): Promise<void> {
  const passed = new Set<string>();
  for (let press = 0; press < mostTabs; press++) {
    const now = await held(page);
    passed.add(now.name.slice(0, 40));
    if (name.test(now.name)) {
      if (now.tag !== 'INPUT') expect(now.isRinged, `ring round ${now.name}`).toBe(true);
      return;
    }
    await page.keyboard.press('Tab');
  }
  throw new Error(`Tab never reaches ${String(name)}; it passed ${[...passed].join(', ')}`);
}

async function press(page: Page, name: RegExp): Promise<void> {
  await tabTo(page, name);
  // A busy button takes no press: whoever hears that it is busy waits.
  await expect.poll(() => page.evaluate(() => document.activeElement?.getAttribute('aria-busy') ?? null), { timeout: 45_000 }).toBe(null);
  await page.keyboard.press('Enter');
}

const heading = (page: Page, name: RegExp) => expect.poll(async () => ((now) => (now.tag === 'H1' ? now.name : ''))(await held(page)), { timeout: 45_000 }).toMatch(name);

/** Finds from anywhere and opens the first answer. */
async function find(page: Page, typed: string, answer: RegExp): Promise<void> {
  await page.keyboard.press('/');
  await expect.poll(async () => (await held(page)).inDialog).toBe(true);
  await page.keyboard.type(typed);
  await page.getByRole('option', { name: answer }).first().waitFor();
  await page.keyboard.press('Enter');
}

describe('without a mouse', () => {
  it('a person signs in, finds a block, zones it, keeps and publishes the zones, and locks a plan', async () => {
    const context = await app.browser.newContext({ locale: 'en-GB', viewport: { width: 1440, height: 900 } });
    const page = await context.newPage();
    page.setDefaultTimeout(45_000);
    await page.goto(`${app.url}/sign-in`);
    await tabTo(page, /^E-mail/);
    await page.keyboard.type('owner@demo.example');
    await tabTo(page, /^Password$/);
    await page.keyboard.type('patchrow-demo');
    await page.keyboard.press('Enter');
    await heading(page, /wait for you/);

    await find(page, 'hihg marl', /High Marl/);
    await page.waitForURL(/\/blocks\/[0-9a-f-]{36}$/);
    await heading(page, /High Marl/);
    expect(await page.title()).toMatch(/^High Marl/);

    await press(page, /^Make zones$/);
    await page.waitForURL(/\/zoning/);
    await heading(page, /\S/);
    await press(page, /^Run again$|^Zone this block$/);
    const before = page.url();
    await press(page, /^Run$/);
    await page.waitForURL((url) => url.href !== before);
    await page.getByRole('button', { name: /Keep .* as a draft/ }).waitFor({ timeout: 120_000 });
    await press(page, /^Keep .* as a draft$/);
    await page.waitForURL(/\/zonings\/[0-9a-f-]{36}\/edit$/);
    await heading(page, /High Marl/);
    await press(page, /^Publish version/);
    await page.waitForURL(/\/zones$/);
    await heading(page, /\S/);

    await find(page, 'sampling', /Sampling/);
    await page.waitForURL(/\/sampling$/);
    await heading(page, /^Sampling/);
    await tabTo(page, /^Block/);
    await page.keyboard.type('High');
    await press(page, /^New plan$/);
    await page.waitForURL(/\/plan$/);
    await heading(page, /\S/);
    await press(page, /^Draw the vines$/);
    await page.getByRole('button', { name: 'Lock plan' }).waitFor();

    await press(page, /^Lock plan$/);
    await expect.poll(async () => (await held(page)).inDialog, { timeout: 10_000 }).toBe(true);
    for (let step = 0; step < 8; step++) {
      await page.keyboard.press('Tab');
      expect((await held(page)).inDialog, 'the dialog keeps the focus').toBe(true);
    }
    await page.keyboard.press('Escape');
    await expect.poll(async () => (await held(page)).name).toBe('Lock plan');
    await page.keyboard.press('Enter');
    await expect.poll(async () => (await held(page)).inDialog, { timeout: 10_000 }).toBe(true);
    await press(page, /^Lock plan$/);
    await page.waitForURL(/\/targets$/);
    await context.close();
  });

  it('the first Tab skips to the content, ? opens the help of the screen, and single keys can be switched off', async () => {
    const { page, context, estateId } = await app.signIn('agronomist');
    await page.goto(`${app.url}/e/${estateId}/zones`);
    await page.locator('h1').waitFor();
    await page.keyboard.press('Tab');
    expect((await held(page)).name).toBe('To the content');
    await page.keyboard.press('Enter');
    await expect.poll(() => page.evaluate(() => document.activeElement?.id)).toBe('main');

    await page.keyboard.press('?');
    await page.waitForURL(/\/help#zoning$/);
    await heading(page, /^Help$/);
    await page.getByRole('heading', { name: 'Zoning', exact: true }).waitFor();

    await page.goto(`${app.url}/account`);
    await tabTo(page, /^Single keys act/);
    await page.keyboard.press('Space');
    await tabTo(page, /^Change password$/);
    await page.keyboard.press('/');
    await page.waitForTimeout(300);
    expect(await page.getByRole('dialog').count()).toBe(0);
    await context.close();
  });

  it('an outline can be given by typed corners, without the map', async () => {
    const { page, context, estateId } = await app.signIn('agronomist');
    await page.goto(`${app.url}/e/${estateId}/blocks/new`);
    await page.locator('h1').waitFor();
    await press(page, /^Paste coordinates$/);
    await tabTo(page, /^Corners, one a line/);
    for (const corner of ['2.4300 43.1100', '2.4322 43.1100', '2.4322 43.1112', '2.4300 43.1112']) {
      await page.keyboard.type(corner);
      await page.keyboard.press('Enter');
    }
    await press(page, /^Take these$/);
    await page.getByText('4 corners.').waitFor();
    await tabTo(page, /^Name$/);
    await page.keyboard.type('Typed Piece');
    await press(page, /^Make block$/);
    await page.waitForURL(/\/blocks\/[0-9a-f-]{36}$/);
    await heading(page, /Typed Piece/);
    await context.close();
  });

  it('an outline is drawn by touch on a phone, with map and words in one sight, and taken back step by step', async () => {
    const { page, context, estateId } = await app.signIn('agronomist', { phone: true });
    await page.goto(`${app.url}/e/${estateId}/blocks/new`);
    const map = page.locator('.estate-map[data-ready=true] canvas');
    await map.waitFor();
    const box = (await map.boundingBox())!;
    const outline = page.getByRole('heading', { name: 'Outline' });
    expect(box.y + box.height).toBeLessThan(await outline.evaluate((heading) => heading.getBoundingClientRect().bottom));
    expect(await outline.evaluate((heading) => heading.getBoundingClientRect().bottom <= innerHeight)).toBe(true);
    for (const [x, y] of [[0.1, 0.7], [0.3, 0.7], [0.3, 0.9], [0.1, 0.9]] as const) await page.touchscreen.tap(box.x + x * box.width, box.y + y * box.height);
    await page.getByText('4 corners.').waitFor();
    await page.getByRole('button', { name: 'One step back' }).tap();
    await page.getByText('3 corners.').waitFor();
    await page.touchscreen.tap(box.x + 0.1 * box.width, box.y + 0.7 * box.height);
    await page.getByRole('button', { name: 'Draw anew' }).waitFor();
    expect(await page.getByLabel(/^Longitude of corner/).count()).toBe(4);
    await context.close();
  });

  it('the crew records a vine, the winemaker puts a zone into a new lot, the owner invites and ends an access', async () => {
    const crew = await app.signIn('crew');
    await crew.page.goto(`${app.url}/e/${crew.estateId}/field`);
    await crew.page.getByRole('button', { name: 'Start the walk' }).first().waitFor();
    await press(crew.page, /^Start the walk$/);
    await press(crew.page, /^I have read this$/);
    await press(crew.page, /^No, leave it off$/);
    const place = crew.page.getByText(/^Row \d+, vine \d+/).first();
    const before = await place.innerText();
    await press(crew.page, /^2$/);
    await press(crew.page, /^1$/);
    await press(crew.page, /^Save and next$/);
    await expect.poll(() => place.innerText()).not.toBe(before);
    await crew.context.close();

    const maker = await app.signIn('winemaker');
    await maker.page.goto(`${app.url}/e/${maker.estateId}/lots`);
    await maker.page.getByRole('button', { name: 'New lot' }).waitFor();
    await press(maker.page, /^New lot$/);
    await tabTo(maker.page, /^Name$/);
    await maker.page.keyboard.type('By keys');
    await press(maker.page, /^Make the lot$/);
    await maker.page.getByText('By keys', { exact: true }).filter({ visible: true }).first().waitFor();
    // One stop in the table; the arrows go from line to line.
    await tabTo(maker.page, /^Heron Bank/);
    await maker.page.keyboard.press('ArrowDown');
    expect((await held(maker.page)).name).toMatch(/^Heron Bank/);
    await maker.page.keyboard.press('Enter');
    await press(maker.page, /^By keys$/);
    const lots = async () => ((await (await maker.page.request.get(`${app.url}/api/estates/${maker.estateId}/lots`)).json()) as { lots: { name: string; lines: { blockName: string }[] }[] }).lots;
    await expect.poll(async () => (await lots()).find(({ name }) => name === 'By keys')?.lines.map(({ blockName }) => blockName), { timeout: 20_000 }).toEqual(['Heron Bank']);
    await maker.context.close();

    const owner = await app.signIn('owner');
    await owner.page.goto(`${app.url}/e/${owner.estateId}/people`);
    await owner.page.getByRole('button', { name: 'Invite a person' }).waitFor();
    await press(owner.page, /^Invite a person$/);
    await tabTo(owner.page, /^E-mail/);
    await owner.page.keyboard.type('keys@example.org');
    await press(owner.page, /^Send invitation$/);
    await owner.page.getByText('keys@example.org').first().waitFor();
    await tabTo(owner.page, /^Person$/);
    await tabTo(owner.page, /^Hester Vane$/);
    for (let line = 0; line < 12 && !/^Lucía Serra/.test((await held(owner.page)).name); line++) await owner.page.keyboard.press('ArrowDown');
    await owner.page.keyboard.press('Enter');
    await press(owner.page, /^End access$/);
    await expect.poll(async () => (await held(owner.page)).inDialog).toBe(true);
    await press(owner.page, /^End access$/);
    await owner.page.getByText('Lucía Serra has no access any more.').waitFor();
    await owner.context.close();
  });
});
