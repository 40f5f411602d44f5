import AxeBuilder from '@axe-core/playwright';
import QRCode from 'qrcode';
import type { BrowserContext, Page } from 'playwright-core';
import { afterAll, beforeAll, describe, expect, it } from 'vitest';
import type { ConflictList } from '../../shared/contracts/conflicts.ts';
import type { PlanList } from '../../shared/contracts/plans.ts';
import type { ReadingView } from '../../shared/contracts/readings.ts';
import type { RoundSummary } from '../../shared/contracts/rounds.ts';
import { startApplication, type Application } from './support/application.ts';
import { asksOf, heldBy, keepOld, keyIn, openOffice, openPhone, recordMany, startWalk, storedBy, tapFast, type Office } from './support/fieldPhones.ts';

const names = ['Ana Reed', 'Ben Moor', 'Cleo Lane'];
const pin = '4711';

let app: Application;
let office: Office;
let roundId: string;
let code: string;
const phones: { page: Page; context: BrowserContext }[] = [];
let [ana, ben, cleo]: (Awaited<ReturnType<typeof heldBy>> | undefined)[] = [];

/** A value within the usual range of a measure, different at each place. */
const usual = (code: string, at: number): number => (code === 'clusterCount' ? 20 + at : (50 + at) / 100);

beforeAll(async () => {
  app = await startApplication();
  office = await openOffice(app, 'manager');
  code = (await office.post<{ code: string }>('/crew-code')).code;
  const people = [];
  for (const name of names) people.push((await office.post<{ id: string }>('/crew', { name, pin })).id);
  const { zonings } = await office.get<PlanList>('/plans');
  const zoning = zonings.find(({ blockName }) => /Furrow/.test(blockName)) ?? zonings[0]!;
  const measures = ['clusterCount', 'pruningWeight'].map((measure) => ({ code: measure, margin: 0.075, marginKind: 'relative', confidence: 0.95 }));
  const plan = await office.post<{ id: string }>(`/zonings/${zoning.id}/plans`, { name: 'Whole day', measures, seed: 4 });
  await office.post(`/plans/${plan.id}/lock`);
  roundId = (await office.post<{ id: string }>(`/plans/${plan.id}/rounds`, { onDate: new Date().toISOString().slice(0, 10), people })).id;
}, 600_000);
afterAll(() => app?.close());

const readings = async (): Promise<ReadingView[]> => {
  const all: ReadingView[] = [];
  for (let after: string | null = ''; after !== null; ) {
    const page: { items: ReadingView[]; next: string | null } = await office.get(`/readings?round=${roundId}${after ? `&after=${encodeURIComponent(after)}` : ''}`);
    all.push(...page.items);
    after = page.next;
  }
  return all;
};

describe('a day of three phones without signal, one of which is lost', () => {
  it('three people sign in with code, name and PIN, and their phones are ready for the row', async () => {
    phones.push(...(await Promise.all(names.map((name) => openPhone(app, { code, name, pin })))));
    const { violations } = await new AxeBuilder({ page: phones[0]!.page }).analyze();
    expect(violations.filter(({ impact }) => impact === 'serious' || impact === 'critical').map(({ id }) => id)).toEqual([]);
  });

  it('a phone that never had the program shows the work after less than 200 KB of script', async () => {
    const context = await app.browser.newContext({ locale: 'en-GB', viewport: { width: 390, height: 844 }, storageState: await phones[0]!.context.storageState(), serviceWorkers: 'block' });
    const page = await context.newPage();
    const scripts: Promise<number>[] = [];
    page.on('requestfinished', (request) => {
      if (request.resourceType() === 'script') scripts.push(request.sizes().then(({ responseBodySize }) => responseBodySize));
    });
    await page.goto(new URL(phones[0]!.page.url()).href);
    await page.getByRole('button', { name: 'Start the walk' }).waitFor();
    const bytes = (await Promise.all(scripts)).reduce((sum, size) => sum + size, 0);
    expect(scripts.length).toBeGreaterThan(3);
    expect(bytes).toBeLessThan(200 * 1024);
    await context.close();
  });

  it('the phone’s place is asked for once, drawn as a wide circle, and neither kept nor sent', async () => {
    const context = await app.browser.newContext({ locale: 'en-GB', viewport: { width: 390, height: 844 }, hasTouch: true, storageState: await phones[0]!.context.storageState(), serviceWorkers: 'block', permissions: ['geolocation'] });
    const page = await context.newPage();
    const sent: string[] = [];
    page.on('request', (request) => sent.push(request.url(), request.postData() ?? ''));
    await page.goto(phones[0]!.page.url());
    await page.getByRole('button', { name: 'Start the walk' }).tap();
    await page.getByRole('button', { name: 'I have read this' }).tap();
    await page.getByRole('button', { name: 'Yes, show it' }).tap();
    const { round } = await heldBy(page);
    const row = round.rows.find(({ id }) => id === round.stops[0]!.rowId)!;
    const [[lon, lat]] = row.ends!;
    await context.setGeolocation({ longitude: lon, latitude: lat, accuracy: 3 });
    await page.getByText(/Your place, roughly: near vine \d+ to \d+, in this row or one beside it/).waitFor();
    expect(Number(await page.locator('circle.fog').getAttribute('r'))).toBeGreaterThan(40);
    await context.setGeolocation({ longitude: lon + 0.01, latitude: lat, accuracy: 12 });
    await page.getByText(/Your place, roughly: \d+ m or more from this row/).waitFor();
    expect(await page.locator('circle.fog').count()).toBe(0);
    await context.setGeolocation({ longitude: lon, latitude: lat, accuracy: 3 });
    await page.getByRole('button', { name: 'The block from above' }).tap();
    await page.locator('.plan circle.fog').first().waitFor();
    expect(Number(await page.locator('.plan > svg circle.fog').getAttribute('r'))).toBeGreaterThanOrEqual(30);
    expect(await page.locator('.plan > svg circle:not(.fog)').count()).toBe(round.stops.length);
    await page.getByRole('button', { name: 'Back to the vine' }).tap();
    await context.setGeolocation({ longitude: lon + 0.01, latitude: lat, accuracy: 12 });
    await page.reload();
    await page.getByRole('heading', { name: /Row \d+, vine \d+/ }).waitFor();
    const [east, kept] = [String(lon + 0.01).slice(0, 8), await page.evaluate(() => JSON.stringify(localStorage))];
    expect([...sent, kept].filter((text) => text.includes(east))).toEqual([]);
    await context.close();
  });

  it('Ana types by taps without signal: values, an odd one kept by two taps, a missing vine and its reserve, an undo', async () => {
    const [{ page, context }] = phones as [(typeof phones)[number]];
    await startWalk(page);
    await context.setOffline(true);
    const asks = asksOf((await heldBy(page)).round);
    // Which vine is asked for what is drawn by lot; the third that has no reading yet when one comes to it is missing.
    const missing = asks.findIndex(({ targetId }, at) => at >= 4 && targetId !== asks[at - 1]!.targetId);
    const typed = asks.slice(0, missing + 1).map(({ code }, at) => (at === 2 ? 999 : usual(code, at)));
    for (const [at, value] of typed.slice(0, missing).entries()) {
      await keyIn(page, value);
      if (at === 2) await page.getByRole('button', { name: 'Yes, keep it' }).tap();
    }
    await page.getByRole('button', { name: 'Not this vine' }).tap();
    await page.getByRole('button', { name: 'Nothing, missing vine' }).tap();
    await page.getByText('Reserve vine').waitFor();
    await keyIn(page, 4);
    await page.getByRole('button', { name: 'Undo' }).tap();
    await page.getByRole('button', { name: 'Erase' }).tap();
    await keyIn(page, typed[missing]!);
    await expect.poll(async () => (await heldBy(page)).readings.map(({ value }) => value)).toEqual(typed);
    expect((await heldBy(page)).readings.map(({ flags }) => flags.join())).toEqual(typed.map((_, at) => (at === 2 ? 'odd' : at === missing ? 'reserve' : '')));
    const keys = await page.locator('.pad button, .acts button, .erase, .back').evaluateAll((buttons) => buttons.map((button) => Math.min(button.getBoundingClientRect().width, button.getBoundingClientRect().height)));
    expect(keys.length).toBeGreaterThan(14);
    expect(Math.min(...keys)).toBeGreaterThanOrEqual(64);
  });

  it('taps that come faster than the phone writes belong to their own vine, and what cannot be written is said', async () => {
    const [{ page }] = phones as [(typeof phones)[number]];
    const { readings: before, round } = await heldBy(page);
    const typed = asksOf(round).slice(before.length, before.length + 3).map(({ targetId, code }, at) => ({ targetId, measureCode: code, value: usual(code, at + 20) }));
    await tapFast(page, typed.map(({ value }) => String(value)));
    await expect.poll(async () => (await heldBy(page)).readings.slice(before.length).map(({ targetId, measureCode, value }) => ({ targetId, measureCode, value }))).toEqual(typed);
    const stored = async () => (await storedBy(page)).filter(({ kind }) => kind === 'reading').length;
    expect(await stored()).toBe(before.length + 3);
    // The phone has no room left.
    await page.evaluate(() => {
      const add = IDBObjectStore.prototype.add;
      IDBObjectStore.prototype.add = () => {
        IDBObjectStore.prototype.add = add;
        throw new DOMException('No room.', 'QuotaExceededError');
      };
    });
    const place = await page.getByRole('heading', { name: /Row \d+, vine \d+/ }).textContent();
    await keyIn(page, 1);
    await page.getByText('This phone could not keep it.').waitFor();
    expect(await page.getByRole('heading', { name: /Row \d+, vine \d+/ }).textContent()).toBe(place);
    expect((await heldBy(page)).readings).toHaveLength(before.length + 3);
    await page.getByRole('button', { name: 'Save and next' }).tap();
    await page.getByText('This phone could not keep it.').waitFor({ state: 'detached' });
    expect(await stored()).toBe(before.length + 4);
  });

  it('with a signal that never answers the phone opens at once, and the walk goes on', async () => {
    const [{ page, context }] = phones as [(typeof phones)[number]];
    await context.route('**/api/**', () => undefined);
    await context.setOffline(false);
    const from = Date.now();
    await page.reload();
    await page.getByRole('heading', { name: /Row \d+, vine \d+/ }).waitFor();
    expect(Date.now() - from).toBeLessThan(5000);
    await page.goto(page.url().replace(/\/rounds\/.*/, ''));
    await page.getByRole('button', { name: 'Go on', exact: true }).tap();
    await page.getByRole('heading', { name: /Row \d+, vine \d+/ }).waitFor();
    await context.setOffline(true);
    await context.unroute('**/api/**');
  });

  it('two tabs of one phone are at the same vine, and the language changes without signal', async () => {
    const [{ page, context }] = phones as [(typeof phones)[number]];
    const tab = await context.newPage();
    await tab.goto(page.url());
    const place = (of: Page) => of.getByRole('heading', { name: /Row \d+, vine \d+/ }).textContent();
    const asked = (of: Page) => of.locator('.value span').first().textContent();
    await tab.getByRole('heading', { name: /Row \d+, vine \d+/ }).waitFor();
    await keyIn(page, usual(asksOf((await heldBy(page)).round)[(await heldBy(page)).readings.length]!.code, 9));
    await expect.poll(async () => [await place(tab), await asked(tab)]).toEqual([await place(page), await asked(page)]);
    expect((await heldBy(tab)).readings).toEqual((await heldBy(page)).readings);
    await tab.goto(page.url().replace(/\/rounds\/.*/, '/outbox'));
    await tab.getByLabel('Language').selectOption('fr');
    await tab.getByText('Hors réseau.').waitFor();
    await tab.reload();
    await tab.getByText('Hors réseau.').waitFor();
    await tab.getByLabel('Langue').selectOption('en');
    await tab.getByText('No signal.').waitFor();
    await tab.close();
  });

  it('the browser is started again in the middle, without signal, and nothing is gone', async () => {
    const [{ page }] = phones as [(typeof phones)[number]];
    await recordMany(page, 30);
    const before = await heldBy(page);
    await page.reload();
    await page.getByRole('heading', { name: /Row \d+, vine \d+/ }).waitFor();
    const after = await heldBy(page);
    expect(after.readings).toEqual(before.readings);
    expect(after.waiting).toBe(before.waiting);
    await recordMany(page, 1000);
    await page.getByText('The walk is done.').waitFor();
    ana = await heldBy(page);
    await page.goto(page.url().replace(/rounds\/.*/, 'outbox'));
    await page.getByText('You cannot sign out yet.').waitFor();
  });

  it('Ana closes a bag without signal; a wrong letter is noticed, and the same label is refused for a second bag', async () => {
    const [{ page }] = phones as [(typeof phones)[number]];
    await page.goto(page.url().replace(/\/outbox$/, `/rounds/${roundId}/bag`));
    const label = page.getByLabel('Label, six letters');
    await label.fill('BBB BCX');
    await page.getByText('these letters do not fit each other').waitFor();
    expect(await page.getByRole('button', { name: 'Close the bag' }).isDisabled()).toBe(true);
    for (const says of [/Bag BBB BCV is closed/, /Label BBB BCV is on a bag already/]) {
      await label.fill('bbb bcv');
      await page.getByRole('button', { name: 'Close the bag' }).tap();
      await page.getByText(says).waitFor();
    }
    await page.goto(page.url().replace(/rounds\/.*/, 'outbox'));
    await page.getByText('1 of them is a bag or a photo.').waitFor();
  });

  it('where the browser reads codes the camera fills the label in and is switched off; without a camera it says so', async () => {
    const context = await app.browser.newContext({ locale: 'en-GB', viewport: { width: 390, height: 844 }, hasTouch: true, storageState: await phones[0]!.context.storageState(), serviceWorkers: 'block' });
    const page = await context.newPage();
    await page.addInitScript(() => {
      // A reader of codes as some browsers have it; it finds the label once it is shown a moving picture.
      (globalThis as { BarcodeDetector?: unknown }).BarcodeDetector = class {
        detect(video: HTMLVideoElement): Promise<{ rawValue: string }[]> {
          return Promise.resolve(video.videoWidth > 0 ? [{ rawValue: 'https://elsewhere.example/NOTOURS' }, { rawValue: 'BBBBDP' }] : []);
        }
      };
    });
    await page.goto(phones[0]!.page.url().replace(/\/field.*/, `/field/rounds/${roundId}/bag`));
    await page.getByRole('button', { name: 'Scan the label' }).tap();
    await page.getByText('This phone gives no camera. Type the six letters.').waitFor();
    await page.evaluate(() => {
      navigator.mediaDevices.getUserMedia = () => {
        const canvas = document.createElement('canvas');
        const paint = canvas.getContext('2d')!;
        setInterval(() => paint.fillRect(0, 0, Math.random() * 300, 150), 40);
        const stream = canvas.captureStream(25);
        (globalThis as { camera?: MediaStream }).camera = stream;
        return Promise.resolve(stream);
      };
    });
    await page.getByRole('button', { name: 'Scan the label' }).tap();
    await page.getByText('The label reads right.').waitFor();
    expect(await page.getByLabel('Label, six letters').inputValue()).toBe('BBB BDP');
    expect(await page.evaluate(() => (globalThis as { camera?: MediaStream }).camera!.getTracks().map(({ readyState }) => readyState))).toEqual(['ended']);
    expect(await page.getByText('This phone gives no camera').count()).toBe(0);
    await context.close();
  });

  it('where the browser reads no codes the label is read all the same, also without signal', async () => {
    const { page } = phones[0]!;
    const { modules } = QRCode.create('BBBBDP', { errorCorrectionLevel: 'H' });
    const dark = Array.from({ length: modules.size }, (_, row) => Array.from({ length: modules.size }, (_, column) => modules.get(row, column) === 1));
    await page.goto(page.url().replace(/\/field.*/, `/field/rounds/${roundId}/bag`));
    await page.evaluate((dark) => {
      delete (globalThis as { BarcodeDetector?: unknown }).BarcodeDetector;
      navigator.mediaDevices.getUserMedia = () => {
        const canvas = document.createElement('canvas');
        [canvas.width, canvas.height] = [640, 480];
        const paint = canvas.getContext('2d')!;
        let turn = 0.3;
        setInterval(() => {
          paint.setTransform(1, 0, 0, 1, 0, 0);
          paint.fillStyle = '#d8d2c4';
          paint.fillRect(0, 0, 640, 480);
          paint.translate(320, 240);
          paint.rotate((turn += 0.01));
          paint.translate(-116, -116);
          paint.fillStyle = '#222';
          dark.forEach((line, row) => line.forEach((isDark, column) => isDark && paint.fillRect(column * 11, row * 11, 11.5, 11.5)));
        }, 40);
        return Promise.resolve(canvas.captureStream(25));
      };
    }, dark);
    await page.getByRole('button', { name: 'Scan the label' }).tap();
    await page.getByText('The label reads right.').waitFor();
    expect(await page.getByLabel('Label, six letters').inputValue()).toBe('BBB BDP');
    await page.goto(page.url().replace(/rounds\/.*/, 'outbox'));
    expect(await page.evaluate(() => navigator.onLine)).toBe(false);
  });

  it('Ben walks his vines and, without knowing it, three of Ana’s', async () => {
    const { page, context } = phones[1]!;
    await startWalk(page);
    await page.getByRole('heading', { name: /Row \d+, vine \d+/ }).waitFor();
    await context.setOffline(true);
    await recordMany(page, 1000);
    expect(await recordMany(page, 6, { others: true })).toBe(6);
    ben = await heldBy(page);
  });

  it('Cleo’s phone sends half of her walk and is never seen again', async () => {
    const { page, context } = phones[2]!;
    await startWalk(page);
    await page.getByRole('heading', { name: /Row \d+, vine \d+/ }).waitFor();
    // The phone takes what is typed, but has no room to note what the server said: it sends all the same, and asks again.
    await page.evaluate(() => {
      const put = IDBObjectStore.prototype.put;
      IDBObjectStore.prototype.put = () => {
        throw new DOMException('No room.', 'QuotaExceededError');
      };
      (globalThis as { makeRoom?: () => void }).makeRoom = () => void (IDBObjectStore.prototype.put = put);
    });
    await recordMany(page, 20);
    await expect.poll(async () => (await readings()).filter(({ person }) => person === names[2]).length, { timeout: 30_000 }).toBe(20);
    expect((await heldBy(page)).waiting).toBe(20);
    await page.evaluate(() => {
      (globalThis as { makeRoom?: () => void }).makeRoom!();
      window.dispatchEvent(new Event('online'));
    });
    await expect.poll(async () => (await heldBy(page)).waiting, { timeout: 30_000 }).toBe(0);
    expect((await readings()).filter(({ person }) => person === names[2])).toHaveLength(20);
    await context.setOffline(true);
    await recordMany(page, 1000);
    cleo = await heldBy(page);
    expect(cleo.waiting).toBe(cleo!.readings.length - 20);
    await context.close();
  });

  it('the network breaks while Ana sends, and one batch arrives five times more', async () => {
    const { page, context } = phones[0]!;
    const batches: string[] = [];
    let cuts = 0;
    await context.route('**/api/estates/*/readings', async (route) => {
      if (route.request().method() !== 'POST') return route.continue();
      batches.push(route.request().postData()!);
      if (cuts++ > 1) return route.continue();
      // The first two sendings arrive, but their answers are lost on the way back.
      await route.fetch();
      return route.abort('connectionreset');
    });
    await context.setOffline(false);
    for (let i = 0; i < 5; i++) {
      await page.evaluate(() => window.dispatchEvent(new Event('online')));
      if (await page.getByText('Nothing waits on this phone.').waitFor({ timeout: 2500 }).then(() => true, () => false)) break;
    }
    await page.getByText('Nothing waits on this phone.').waitFor();
    expect(cuts).toBeGreaterThan(2);
    const states = await page.evaluate(async (body) => {
      const { csrfToken } = (await (await fetch('/api/session')).json()) as { csrfToken: string };
      const address = location.pathname.replace(/^\/e\/([^/]+)\/.*/, '/api/estates/$1/readings');
      const answers = await Promise.all(Array.from({ length: 5 }, () => fetch(address, { method: 'POST', body, headers: { 'content-type': 'application/json', 'x-csrf-token': csrfToken } })));
      return Promise.all(answers.map(async (answer) => ((await answer.json()) as { outcomes: { state: string }[] }).outcomes.map(({ state }) => state)));
    }, batches[0]!);
    expect(states).toHaveLength(5);
    expect(new Set(states.flat())).toEqual(new Set(['received']));
    await context.unroute('**/api/estates/*/readings');
  });

  it('Ben’s phone sends the rest when it finds the network, and says which vines somebody else had read', async () => {
    const { page, context } = phones[1]!;
    await page.goto(page.url().replace(/rounds\/.*/, 'outbox'));
    await context.setOffline(false);
    await page.evaluate(() => window.dispatchEvent(new Event('online')));
    await page.getByText('Nothing waits on this phone.').waitFor();
    expect(await page.getByText('Somebody else read this vine too. Both are kept.').count()).toBe(6);
    await page.getByRole('link', { name: 'See what was read twice' }).tap();
    await page.getByText('6 conflicts to settle.').waitFor();
    expect(await page.getByText('The manager decides.').count()).toBe(6);
  });

  it('Cleo’s sheet is typed in the office by keyboard, one value of it otherwise than her phone had sent', async () => {
    const { page } = office;
    await page.goto(`${app.url}/e/${office.estateId}/rounds/${roundId}/paper`);
    await page.getByText(names[2]!, { exact: true }).click();
    await page.getByText(/received already/).first().waitFor();
    // Nobody's boxes stand under another's name while a sheet is fetched.
    await page.route(`**/rounds/${roundId}?person=*`, async (route) => {
      await new Promise((later) => setTimeout(later, 400));
      await route.continue();
    });
    await page.getByText(names[0]!, { exact: true }).click();
    expect(await page.locator('input[data-place]').count()).toBe(0);
    await page.getByText(names[2]!, { exact: true }).click();
    await page.locator('input[data-place]').first().waitFor();
    await page.unroute(`**/rounds/${roundId}?person=*`);
    expect(await page.getByText(/received already/).count()).toBe(20);
    const value = (targetId: string, measureCode: string) => cleo!.readings.find((reading) => reading.targetId === targetId && reading.measureCode === measureCode)!.value;
    for (const measure of ['clusterCount', 'pruningWeight']) {
      const asked = cleo!.round.stops.filter((stop) => stop.measures.includes(measure));
      await page.locator(`input[data-place$=" ${measure}"]`).first().focus();
      for (const stop of asked) {
        await page.keyboard.insertText(String(value(stop.targetId, measure) + (stop === asked[1] && measure === 'clusterCount' ? 5 : 0)));
        await page.keyboard.press('Enter');
      }
    }
    await page.getByRole('button', { name: 'Save the sheet' }).click();
    await page.getByText('1 differs: see the card').waitFor();
    // Opened anew, the sheet knows what was saved, and offers nothing to save twice.
    await page.reload();
    await page.getByText(names[2]!, { exact: true }).click();
    await page.locator(`input[aria-label$="row ${cleo!.round.stops[0]!.rowLabel}, vine ${cleo!.round.stops[0]!.vineNumber}"]`).first().waitFor();
    await page.getByText('Nothing new to save').waitFor();
    const first = cleo!.round.stops.find(({ measures }) => measures.includes('clusterCount'))!;
    expect(await page.locator('input[data-place$=" clusterCount"]').first().inputValue()).toBe(String(value(first.targetId, 'clusterCount')));
  });

  it('every reading is there exactly once, and what differs is listed', async () => {
    const all = await readings();
    const asked = [...cleo!.round.stops, ...cleo!.round.others.flatMap(({ stops }) => stops)].reduce((sum, { measures }) => sum + measures.length, 0);
    expect(asked).toBeGreaterThanOrEqual(200);
    // Six of Ben's beside Ana's, and one line of Cleo's sheet beside what her phone had sent.
    expect(all.filter(({ excludedReason }) => excludedReason === null)).toHaveLength(asked + 6 + 1);
    const key = ({ person, rowId, ordinal, measureCode, value }: ReadingView) => [person, rowId, ordinal, measureCode, value].join();
    expect(new Set(all.map(key)).size).toBe(all.length);
    expect(new Set(all.map(({ person }) => person))).toEqual(new Set(names));
    const { items: bags } = await office.get<{ items: { code: string; place: string; holder: string | null }[] }>(`/bags?round=${roundId}`);
    expect(bags).toMatchObject([{ code: 'BBBBCV', place: 'expected', holder: names[0] }]);
    const items = (await office.get<ConflictList>('/conflicts')).items.filter(({ readings: both }) => both.some(({ who }) => names.includes(who ?? '')));
    expect(items).toHaveLength(7);
    // Ana read the reserve of a vine that she found missing; Ben read what he found there.
    const onReserve = ana!.readings.filter(({ flags, targetId, measureCode }) => flags.includes('reserve') && ben!.readings.some((other) => other.targetId === targetId && other.measureCode === measureCode)).length;
    expect(items.filter(({ kind }) => kind === 'sameTarget')).toHaveLength(onReserve);
    expect(items.filter(({ kind }) => kind === 'sameVine')).toHaveLength(7 - onReserve);
    expect(items.every(({ readings: both }) => both.length === 2)).toBe(true);
  });

  it('the manager settles a card on the screen, and the choice is in the history', async () => {
    const { page } = office;
    const { open } = await office.get<ConflictList>('/conflicts');
    await page.goto(`${app.url}/e/${office.estateId}/conflicts`);
    const card = page.getByRole('article').first();
    await card.getByRole('button', { name: 'Keep this one' }).first().click();
    await page.getByText(`${open - 1} conflicts to settle.`).waitFor();
    await page.getByText('one kept, the others left out').waitFor();
    const { violations } = await new AxeBuilder({ page }).analyze();
    expect(violations.filter(({ impact }) => impact === 'serious' || impact === 'critical').map(({ id }) => id)).toEqual([]);
    const { items } = await office.get<{ items: { action: string }[] }>('/audit');
    expect(items.map(({ action }) => action)).toContain('conflicts.settle');
    await page.getByRole('button', { name: 'Take this answer back' }).first().click();
    await page.getByText(`${open} conflicts to settle.`).waitFor();
  });

  it('a phone forgets what was received weeks ago, and never what was not', async () => {
    const { page } = phones[1]!;
    await keepOld(page, [
      { id: crypto.randomUUID(), days: 20, received: 1 }, { id: 'recent', days: 3, received: 1 },
      { id: 'unsent', days: 400, received: 0 }, { id: 'openRound', days: 20, received: 1, roundId },
    ]);
    const before = await storedBy(page);
    await page.goto(page.url().replace(/\/field.*/, '/field'));
    await expect.poll(async () => (await storedBy(page)).length).toBe(before.length - 1);
    expect((await storedBy(page)).map(({ id }) => id)).toEqual(expect.arrayContaining(['recent', 'unsent', 'openRound']));
  });

  it('Ben closes his part on a line that has died: at once on the phone, in the office when there is signal', async () => {
    const { page, context } = phones[1]!;
    await context.route('**/api/**', () => undefined);
    await page.goto(page.url().replace(/\/field.*/, `/field/rounds/${roundId}`));
    await page.getByText('The walk is done.').waitFor();
    await page.getByRole('button', { name: 'Close the round' }).tap();
    await page.getByText('Closed on this phone. The office is told when there is signal.').waitFor();
    const state = async () => (await office.get<{ items: RoundSummary[] }>('/rounds')).items.find(({ id }) => id === roundId)!;
    expect((await state()).people.filter(({ finishedAt }) => finishedAt !== null)).toEqual([]);
    await context.unroute('**/api/**');
    await page.reload();
    await expect.poll(async () => (await state()).people.filter(({ finishedAt }) => finishedAt !== null).map(({ name }) => name), { timeout: 30_000 }).toEqual([names[1]]);
    expect((await state()).state).toBe('open');
    await page.getByText('No work has been sent to you.').waitFor();
  });
});
