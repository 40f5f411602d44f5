import { afterAll, beforeAll, expect, it } from 'vitest';
import type { PhoneView } from '../../shared/contracts/phones.ts';
import type { PlanList } from '../../shared/contracts/plans.ts';
import type { ReadingView } from '../../shared/contracts/readings.ts';
import { startApplication, type Application } from './support/application.ts';
import { enterAs, keyIn, openOffice, openPhone, startWalk, storedBy, type Office } from './support/fieldPhones.ts';

const pin = '4711';
const [luca, rita, otto] = ['Luca Serra', 'Rita Melo', 'Otto Lund'];

let app: Application;
let office: Office;
let code: string;
let [shared, apart] = ['', ''];

beforeAll(async () => {
  app = await startApplication();
  office = await openOffice(app, 'manager');
  code = (await office.post<{ code: string }>('/crew-code')).code;
  const people: string[] = [];
  for (const name of [luca, rita, otto]) people.push((await office.post<{ id: string }>('/crew', { name, pin })).id);
  const { zonings } = await office.get<PlanList>('/plans');
  const plan = await office.post<{ id: string }>(`/zonings/${zonings[0]!.id}/plans`, { name: 'One phone', measures: [{ code: 'clusterCount', margin: 0.15, marginKind: 'relative', confidence: 0.95 }], seed: 4 });
  await office.post(`/plans/${plan.id}/lock`);
  const send = async (ids: readonly string[]) => (await office.post<{ id: string }>(`/plans/${plan.id}/rounds`, { onDate: new Date().toISOString().slice(0, 10), people: ids })).id;
  [shared, apart] = [await send(people.slice(0, 2)), await send(people.slice(2))];
}, 600_000);
afterAll(() => app?.close());

const taken = async (roundId: string) => (await office.get<{ items: ReadingView[] }>(`/readings?round=${roundId}`)).items.map(({ person, value }) => `${person} ${value}`).sort();

it('a lost phone sends what can be sent under the right names, keeps what nobody else may send, and says so', async () => {
  const { page, context } = await openPhone(app, { code, name: otto, pin });
  const read = async (...values: number[]) => {
    await context.setOffline(true);
    // The card is read once a day by each; whether to show the place is asked once a phone.
    if (values[0] === 31) await startWalk(page);
    else {
      await page.getByRole('button', { name: 'Start the walk' }).click();
      await page.getByRole('button', { name: 'I have read this' }).click();
    }
    for (const value of values) await keyIn(page, value);
    await expect.poll(async () => (await storedBy(page)).filter(({ received }) => received === 0).length).toBeGreaterThanOrEqual(values.length);
  };
  /** The session ends, as when the office ends it: the readings stay on the phone, and the door says how many. */
  const next = async (name: string, waiting: number) => {
    await context.clearCookies();
    await context.setOffline(false);
    await page.goto(`${app.url}/crew`);
    await page.getByText(`${waiting} readings on this phone have not been sent.`).waitFor();
    await enterAs(page, { name, pin });
  };
  await read(31, 32);
  await next(luca, 2);
  await read(41, 42, 43);
  await next(rita, 5);
  await read(51, 52);
  const { items: phones } = await office.get<{ items: PhoneView[] }>('/phones');
  const phone = phones.find(({ person }) => person === rita)!;
  await office.put(`/phones/${phone.id}/loss`, { isLost: true });
  await context.setOffline(false);
  // A check-in that was less than a minute ago is not repeated; a page that is opened asks at once.
  await page.reload();

  await page.getByText('This phone was reported lost').waitFor();
  await page.getByText(/2 readings, bags or photos that the office has not taken stay on it/).waitFor();
  expect(await taken(shared)).toEqual([`${luca} 41`, `${luca} 42`, `${luca} 43`, `${rita} 51`, `${rita} 52`]);
  // Otto's round is his alone: nobody of the other may send for him, and his readings are nowhere else.
  expect(await taken(apart)).toEqual([]);
  expect((await storedBy(page)).filter(({ received }) => received === 0)).toHaveLength(2);

  await office.put(`/phones/${phone.id}/loss`, { isLost: false });
  await page.goto(`${app.url}/crew`);
  await page.getByLabel('Crew code').fill(code);
  await page.getByRole('button', { name: 'Go on' }).click();
  await enterAs(page, { name: otto, pin });
  await expect.poll(() => taken(apart), { timeout: 30_000 }).toEqual([`${otto} 31`, `${otto} 32`]);
  await context.close();
});
