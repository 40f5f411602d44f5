import type { BrowserContext, Page } from 'playwright-core';
import type { FieldRound } from '../../../shared/contracts/rounds.ts';
import type { Application } from './application.ts';

/** Somebody in the office who asks the API as their browser would. */
export interface Office {
  page: Page;
  context: BrowserContext;
  estateId: string;
  get: <T>(path: string) => Promise<T>;
  post: <T>(path: string, body?: object) => Promise<T>;
  put: <T>(path: string, body?: object) => Promise<T>;
}

export async function openOffice(app: Application, role: string): Promise<Office> {
  const { page, context, estateId } = await app.signIn(role);
  const base = `${app.url}/api/estates/${estateId}`;
  const token = ((await (await page.request.get(`${app.url}/api/session`)).json()) as { csrfToken: string }).csrfToken;
  const write = async <T>(method: string, path: string, body: object = {}): Promise<T> => {
    const answer = await page.request.fetch(base + path, { method, data: body, headers: { 'x-csrf-token': token } });
    if (!answer.ok()) throw new Error(`${path}: ${await answer.text()}`);
    return (answer.status() === 204 ? undefined : await answer.json()) as T;
  };
  return {
    page, context, estateId,
    get: async <T>(path: string) => (await (await page.request.get(base + path)).json()) as T,
    post: (path, body) => write('POST', path, body),
    put: (path, body) => write('PUT', path, body),
  };
}

/** A phone of its own: signs in with crew code, name and PIN, and waits until it is ready for the row. */
export async function openPhone(app: Application, crew: { code: string; name: string; pin: string }): Promise<{ page: Page; context: BrowserContext }> {
  const context = await app.browser.newContext({ locale: 'en-GB', viewport: { width: 390, height: 844 }, hasTouch: true });
  const page = await context.newPage();
  page.setDefaultTimeout(45_000);
  await page.goto(`${app.url}/crew`);
  await page.getByLabel('Crew code').fill(crew.code);
  await page.getByRole('button', { name: 'Go on' }).click();
  await enterAs(page, crew);
  return { page, context };
}

/** Signs in at the door of a phone that knows its crew, and waits until it is ready for the row. */
export async function enterAs(page: Page, { name, pin }: { name: string; pin: string }): Promise<void> {
  await page.getByRole('button', { name }).click();
  await page.getByLabel('PIN').fill(pin);
  await page.getByRole('button', { name: 'Sign in' }).click();
  await page.getByText('Ready for the row').waitFor();
}

/** Begins the walk, puts the day's safety card away and keeps the phone's place to oneself. */
export async function startWalk(page: Page): Promise<void> {
  await page.getByRole('button', { name: /Start the walk|Go on/ }).click();
  await page.getByRole('button', { name: 'I have read this' }).click();
  await page.getByRole('button', { name: 'No, leave it off' }).click();
}

/** Presses the keys of a value and saves it, as a thumb would. */
export async function keyIn(page: Page, value: number | string): Promise<void> {
  for (const key of String(value)) await page.getByRole('button', { name: key === '.' ? 'Decimal point' : key, exact: true }).tap();
  await page.getByRole('button', { name: 'Save and next' }).tap();
}

/** Values typed and saved one after another with no pause between the taps, as no thumb could. */
export function tapFast(page: Page, values: readonly string[]): Promise<void> {
  return page.evaluate(async (values) => {
    const tap = async (name: string): Promise<void> => {
      const button = [...document.querySelectorAll<HTMLButtonElement>('button')].find((one) => (one.ariaLabel ?? one.textContent).trim() === name);
      button!.click();
      await new Promise((next) => setTimeout(next, 0));
    };
    for (const value of values) {
      for (const key of value) await tap(key === '.' ? 'Decimal point' : key);
      await tap('Save and next');
    }
  }, values);
}

/** What lies in the phone's own store, read without the program. */
export function storedBy(page: Page): Promise<{ id: string; kind: string; received: number }[]> {
  return page.evaluate(() => new Promise((resolve, reject) => {
    const opening = indexedDB.open('patchrow-field');
    opening.onerror = () => reject(new Error('no store'));
    opening.onsuccess = () => {
      const reading = opening.result.transaction('entries').objectStore('entries').getAll();
      reading.onsuccess = () => {
        opening.result.close();
        resolve(reading.result as { id: string; kind: string; received: number }[]);
      };
    };
  }));
}

interface OldEntry {
  id: string;
  days: number;
  received: 0 | 1;
  roundId?: string;
}

/** Lays copies of an entry, so many days old, into the phone's own store; of a round that is gone, unless told. */
export function keepOld(page: Page, old: readonly OldEntry[]): Promise<void> {
  return page.evaluate((old) => new Promise<void>((resolve, reject) => {
    const opening = indexedDB.open('patchrow-field');
    opening.onerror = () => reject(new Error('no store'));
    opening.onsuccess = () => {
      const transaction = opening.result.transaction('entries', 'readwrite');
      const entries = transaction.objectStore('entries');
      const reading = entries.getAll();
      reading.onsuccess = () => {
        const model = reading.result.find(({ kind }: { kind: string }) => kind === 'reading') as { reading: object };
        for (const { id, days, received, roundId } of old) entries.add({ ...model, id, reading: { ...model.reading, id }, roundId: roundId ?? 'gone', received, at: new Date(Date.now() - days * 86_400_000).toISOString() });
      };
      transaction.oncomplete = () => {
        opening.result.close();
        resolve();
      };
    };
  }), old);
}

export interface HeldReading {
  targetId: string;
  measureCode: string;
  value: number;
  flags: readonly string[];
}

/** What is to be read on a walk, vine by vine, as its keypad asks. */
export function asksOf({ stops, measures }: FieldRound): { targetId: string; code: string }[] {
  return stops.flatMap((stop) => measures.filter(({ code }) => stop.measures.includes(code)).map(({ code }) => ({ targetId: stop.targetId, code })));
}

interface FieldStore {
  round: FieldRound;
  waiting: number;
  entries: readonly { id: string; kind: string; reading: HeldReading | null }[];
  record: (stop: object, vine: object, typed: object) => Promise<void>;
  send: () => Promise<void>;
}
type WithStore = HTMLElement & { __vue_app__: { config: { globalProperties: { $pinia: { _s: Map<string, unknown> } } } } };

/** Types so many further values of the phone's own walk through the page's own store; the value follows from the vine and the measure. */
export function recordMany(page: Page, most: number, options: { others?: boolean } = {}): Promise<number> {
  return page.evaluate(async ({ most, others }) => {
    const field = (document.querySelector('#app') as WithStore).__vue_app__.config.globalProperties.$pinia._s.get('field') as FieldStore;
    let done = 0;
    for (const stop of others ? field.round.others[0]!.stops : field.round.stops) {
      for (const measure of field.round.measures) {
        const isRead = field.entries.some(({ reading }) => reading?.targetId === stop.targetId && reading.measureCode === measure.code) || field.round.received.some((one) => one.targetId === stop.targetId && one.measureCode === measure.code);
        if (isRead || done === most || !stop.measures.includes(measure.code)) continue;
        const value = measure.code === 'clusterCount' ? 20 + (stop.number % 30) + (others ? 40 : 0) : 0.5 + (stop.number % 20) / 100 + (others ? 1 : 0);
        await field.record(stop, { rowId: stop.rowId, rowLabel: stop.rowLabel, ordinal: stop.ordinal, vineNumber: stop.vineNumber, isReserve: false }, { measure, text: String(value), value, isOdd: false, supersedes: null, readBy: null });
        done++;
      }
    }
    return done;
  }, { most, others: options.others ?? false });
}

/** What the phone holds of the open round. */
export function heldBy(page: Page): Promise<{ waiting: number; readings: HeldReading[]; round: FieldRound }> {
  return page.evaluate(() => {
    const field = (document.querySelector('#app') as WithStore).__vue_app__.config.globalProperties.$pinia._s.get('field') as FieldStore;
    return { waiting: field.waiting, readings: field.entries.flatMap(({ reading }) => (reading ? [{ targetId: reading.targetId, measureCode: reading.measureCode, value: reading.value, flags: [...reading.flags] }] : [])), round: JSON.parse(JSON.stringify(field.round)) as FieldRound };
  });
}
