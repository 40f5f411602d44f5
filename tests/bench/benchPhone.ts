/**
 * The crew's first screen on a phone that never had the program, over a slow line, and every later opening without any line.
 * `npm start` in one shell, `npm run bench -- --phone http://localhost:3000` in another; it signs in as the demo estate's crew.
 */

import { chromium, type Browser, type BrowserContext, type Page } from 'playwright-core';

export interface PhoneRow {
  readonly open: 'first, 400 kbit/s and 300 ms' | 'later, without signal';
  readonly runs: number;
  readonly medianMs: number;
  readonly slowestMs: number;
  /** Script as it was sent, compressed; 0 where nothing was. */
  readonly scriptBytes: number;
}

const person = { email: 'crew@demo.example', password: 'patchrow-demo' };
/** A weak mobile signal: 400 kbit/s down, half of it up, 300 ms there and back. */
const slowLine = { offline: false, latency: 300, downloadThroughput: 400_000 / 8, uploadThroughput: 200_000 / 8 };
const phone = { viewport: { width: 390, height: 844 }, hasTouch: true, locale: 'en-GB' };

export async function benchPhone(address: string, runs: number): Promise<PhoneRow[]> {
  const browser = await chromium.launch({ executablePath: process.env.CHROMIUM ?? '/usr/bin/chromium', args: ['--no-sandbox'] });
  try {
    const { state, place } = await signedIn(browser, address);
    const [first, later, scripts]: [number[], number[], number[]] = [[], [], []];
    for (let run = 0; run < runs; run++) {
      const context = await browser.newContext({ ...phone, storageState: state });
      const page = await context.newPage();
      const bytes = countScript(page);
      await throttle(context, page);
      first.push(await msUntilWork(page, place));
      scripts.push(await bytes());
      await unthrottled(context, page);
      later.push(await msWithoutSignal(context, page, place));
      await context.close();
    }
    return [row('first, 400 kbit/s and 300 ms', first, Math.max(...scripts)), row('later, without signal', later, 0)];
  } finally {
    await browser.close();
  }
}

async function signedIn(browser: Browser, address: string): Promise<{ state: Awaited<ReturnType<BrowserContext['storageState']>>; place: string }> {
  const context = await browser.newContext(phone);
  const page = await context.newPage();
  await page.goto(`${address}/sign-in`);
  await page.getByLabel('E-mail').fill(person.email);
  await page.locator('input[type=password]').fill(person.password);
  await page.locator('form button[type=submit]').click();
  await page.waitForURL(/\/e\/[0-9a-f-]{36}\/field/);
  const [state, place] = [await context.storageState(), page.url()];
  await context.close();
  return { state, place };
}

/** The day's work shows with its first vine to start with. */
async function msUntilWork(page: Page, place: string): Promise<number> {
  const from = performance.now();
  await page.goto(place, { waitUntil: 'commit' });
  await page.locator('button.start:enabled').first().waitFor({ timeout: 120_000 });
  return performance.now() - from;
}

async function throttle(context: BrowserContext, page: Page): Promise<void> {
  const session = await context.newCDPSession(page);
  await session.send('Network.enable');
  await session.send('Network.emulateNetworkConditions', slowLine);
}

/** Waits on a good line until the phone has kept the program. */
async function unthrottled(context: BrowserContext, page: Page): Promise<void> {
  const session = await context.newCDPSession(page);
  await session.send('Network.emulateNetworkConditions', { offline: false, latency: 0, downloadThroughput: -1, uploadThroughput: -1 });
  await page.getByText('Ready for the row').waitFor({ timeout: 120_000 });
}

async function msWithoutSignal(context: BrowserContext, page: Page, place: string): Promise<number> {
  await context.setOffline(true);
  const ms = await msUntilWork(page, place);
  await context.setOffline(false);
  return ms;
}

function countScript(page: Page): () => Promise<number> {
  const sizes: Promise<number>[] = [];
  page.on('requestfinished', (request) => {
    if (request.resourceType() === 'script') sizes.push(request.sizes().then(({ responseBodySize }) => responseBodySize, () => 0));
  });
  return async () => (await Promise.all(sizes)).reduce((sum, size) => sum + size, 0);
}

function row(open: PhoneRow['open'], times: readonly number[], scriptBytes: number): PhoneRow {
  const sorted = [...times].sort((a, b) => a - b);
  return { open, runs: times.length, medianMs: sorted[Math.floor(sorted.length / 2)]!, slowestMs: sorted.at(-1)!, scriptBytes };
}
