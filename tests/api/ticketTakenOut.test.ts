import { afterAll, beforeAll, describe, expect, it } from 'vitest';
import type { LotsBoard } from '../../shared/contracts/lots.ts';
import type { ReviewView, TicketView } from '../../shared/contracts/tickets.ts';
import { startTestApp, type Agent, type TestApp } from './support/testApp.ts';

let app: TestApp;
let winemaker: Agent;
let base: string;
let [wrong, right] = ['', ''];

beforeAll(async () => {
  app = await startTestApp();
  const { estateId } = await app.addEstate('Tickets taken out');
  winemaker = await app.as((await app.addPerson(estateId, 'winemaker')).email);
  base = `/api/estates/${estateId}`;
  wrong = (await winemaker.post(`${base}/lots`, { name: 'Wrong' })).body.id as string;
  right = (await winemaker.post(`${base}/lots`, { name: 'Right' })).body.id as string;
});
afterAll(() => app.close());

const lotOf = async (id: string) => ((await winemaker.get(`${base}/lots`)).body as LotsBoard).lots.find((lot) => lot.id === id)!;
const actualOf = async (id: string) => ((await winemaker.get(`${base}/review`)).body as ReviewView).lots.find(({ lotId }) => lotId === id)!.actualT;
const newest = async () => ((await winemaker.get(`${base}/tickets`)).body.items as TicketView[]).find(({ correctedBy }) => correctedBy === null)!;
const enter = (over: object) => winemaker.post(`${base}/tickets`, { lotId: wrong, ticketNo: 'T-1', gross: 9000, tare: 3000, weighedAt: '2026-09-26T09:00:00Z', ...over });

describe('a load entered for another lot', () => {
  it('counts for the right one once corrected, and the other is a draft again that can be changed', async () => {
    expect((await enter({})).status).toBe(201);
    expect((await lotOf(wrong)).state).toBe('picked');
    expect((await enter({ lotId: right, ticketNo: 'T-1 c', corrects: (await newest()).id, note: 'Other lot' })).status).toBe(201);
    expect([(await lotOf(wrong)).state, (await lotOf(right)).state]).toEqual(['draft', 'picked']);
    expect([await actualOf(wrong), await actualOf(right)]).toEqual([null, 6]);
    const { version } = await lotOf(wrong);
    expect((await winemaker.write('patch', `${base}/lots/${wrong}`).set('if-match', `"${version}"`).send({ name: 'Wrong no more' })).status).toBe(204);
  });

  it('keeps its tickets: the lot that they name is not deleted, by hand or by a what-if put in force', async () => {
    const { version } = await lotOf(wrong);
    const refused = await winemaker.write('delete', `${base}/lots/${wrong}`).set('if-match', `"${version}"`).send();
    expect([refused.status, refused.body.code]).toEqual([422, 'lotHasTickets']);
    const { scenarioId } = (await winemaker.get(`${base}/lots`)).body as LotsBoard;
    const whatIf = (await winemaker.post(`${base}/scenarios`, { name: 'Other', copyOf: scenarioId })).body.id as string;
    expect((await winemaker.post(`${base}/scenarios/${whatIf}/apply`, {})).status).toBe(200);
    expect((await winemaker.get(`${base}/tickets`)).body.items).toHaveLength(2);
  });
});

describe('a load that never was', () => {
  it('is taken out by a correction of 0 kg with its reason, and both tickets stay to be read', async () => {
    const equal = { lotId: right, gross: 9000, tare: 9000 };
    expect((await enter({ ...equal, ticketNo: 'T-2' })).status).toBe(422);
    expect((await enter({ ...equal, ticketNo: 'T-1 d', corrects: (await newest()).id })).status).toBe(422);
    expect((await enter({ ...equal, ticketNo: 'T-1 d', corrects: (await newest()).id, note: 'Entered twice' })).status).toBe(201);
    expect((await lotOf(right)).state).toBe('draft');
    expect(await actualOf(right)).toBeNull();
    expect((await winemaker.get(`${base}/tickets`)).body.items).toHaveLength(3);
  });
});
