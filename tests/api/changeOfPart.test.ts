import { afterAll, beforeAll, describe, expect, it } from 'vitest';
import { Estate } from '../../server/models/Estate.ts';
import type { TankView } from '../../shared/contracts/lots.ts';
import { startTestApp, type Agent, type TestApp } from './support/testApp.ts';

let app: TestApp;
let owner: Agent;
let estateId: string;
const base = () => `/api/estates/${estateId}`;

beforeAll(async () => {
  app = await startTestApp();
  const estate = await app.addEstate('Change of a part');
  estateId = estate.estateId;
  owner = await app.as((await app.addPerson(estateId, 'owner')).email);
});
afterAll(() => app.close());

describe('a change that sends some fields', () => {
  it('leaves the rest of a tank as it was', async () => {
    const { id } = (await owner.post(`${base()}/tanks`, { name: 'T1', litres: 9000, workingFill: 0.95, minimumFill: 0.3 })).body as { id: string };
    await owner.write('patch', `${base()}/tanks/${id}`).send({ name: 'T1 north' });
    expect(((await owner.get(`${base()}/tanks`)).body.items as TankView[])[0]).toEqual({ id, name: 'T1 north', litres: 9000, workingFill: 0.95, minimumFill: 0.3 });
  });

  it('leaves the rest of an estate and of its settings as they were', async () => {
    const before = { timeZone: 'Europe/Lisbon', units: 'us', languages: ['pt', 'en'], seasonStartMonth: 3 };
    await owner.write('patch', base()).send({ ...before, settings: { dayHours: 6, costPerHour: 31, meetingPoint: 'At the press' } });
    const answer = await owner.write('patch', base()).send({ name: 'Named anew', settings: { dayHours: 7 } });
    expect(answer.status).toBe(204);
    const stored = await Estate.query().findById(estateId).throwIfNotFound();
    expect(stored).toMatchObject({ ...before, name: 'Named anew', settings: { dayHours: 7, costPerHour: 31, meetingPoint: 'At the press' } });
  });
});

describe('a tank', () => {
  it('has its least fill below the fill allowed', async () => {
    const wrong = await owner.post(`${base()}/tanks`, { name: 'T2', litres: 9000, workingFill: 0.5, minimumFill: 0.6 });
    expect([wrong.status, wrong.body.errors[0].path]).toEqual([422, 'minimumFill']);
    const { id } = (await owner.post(`${base()}/tanks`, { name: 'T2', litres: 9000, workingFill: 0.8, minimumFill: 0.6 })).body as { id: string };
    const lowered = await owner.write('patch', `${base()}/tanks/${id}`).send({ workingFill: 0.55 });
    expect([lowered.status, lowered.body.code]).toEqual([422, 'tankFill']);
    expect((await owner.delete(`${base()}/tanks/${id}`)).status).toBe(204);
  });

  it('that has a name already is told by the name, not by how names are kept', async () => {
    const twice = await owner.post(`${base()}/tanks`, { name: 't1 NORTH', litres: 9000 });
    expect([twice.status, twice.body.detail]).toEqual([409, 'This is taken already: name. Choose another.']);
  });
});

describe('a day that no fruit of the season comes in', () => {
  it('is refused for a lot, a ticket, a table of tickets and a proposal, with the days that can be', async () => {
    const lotId = (await owner.post(`${base()}/lots`, { name: 'Late' })).body.id as string;
    const answers = [
      await owner.post(`${base()}/lots`, { name: 'Wrong year', pickOn: '1999-09-20' }),
      await owner.write('patch', `${base()}/lots/${lotId}`).set('if-match', '"1"').send({ pickOn: '2062-09-20' }),
      await owner.post(`${base()}/tickets`, { lotId, ticketNo: 'Y', gross: 9000, tare: 3000, weighedAt: '1926-09-20T09:00:00Z' }),
      await owner.post(`${base()}/lot-suggestions`, { name: 'Old', firstDay: '1999-09-20' }),
    ];
    for (const { status, body } of answers) {
      expect([status, body.code]).toEqual([422, 'notOfSeason']);
      expect(body.detail).toMatch(/lies outside season .+ from \d{4}-\d\d-\d\d to \d{4}-\d\d-\d\d/);
    }
    const table = await owner.post(`${base()}/tickets/import`, { text: 'ticket;lot;gross kg;tare kg;date\nY;Late;9000;3000;2062-09-20', apply: true });
    expect([table.status, table.body.code]).toEqual([422, 'tableProblems']);
    expect((await owner.get(`${base()}/tickets`)).body.items).toEqual([]);
  });

  it('no load of more than 200 t is taken for one, nor a time of day that there is not', async () => {
    const lots = (await owner.get(`${base()}/lots`)).body.lots as { id: string }[];
    const heavy = await owner.post(`${base()}/tickets`, { lotId: lots[0]!.id, ticketNo: 'H', gross: 9200, tare: 3100, unit: 't', weighedAt: '2026-09-20T09:00:00Z' });
    expect([heavy.status, heavy.body.errors[0].path]).toEqual([422, 'gross']);
    const odd = await owner.post(`${base()}/tickets/import`, { text: 'ticket;lot;gross kg;tare kg;date;time\nY;Late;9000;3000;2026-09-20;27:99', apply: true });
    expect([odd.status, odd.body.code]).toEqual([422, 'tableProblems']);
  });
});
