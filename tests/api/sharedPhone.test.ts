import { randomUUID } from 'node:crypto';
import { afterAll, beforeAll, beforeEach, describe, expect, it } from 'vitest';
import { AuditEntry } from '../../server/models/AuditEntry.ts';
import { CrewPin } from '../../server/models/CrewPin.ts';
import { Membership } from '../../server/models/Membership.ts';
import type { CrewCodeState, CrewOffer, PhoneView } from '../../shared/contracts/phones.ts';
import { startTestApp, type Agent, type TestApp } from './support/testApp.ts';

let app: TestApp;
let estateId: string;
let manager: Agent;
let code: string;
let nia: string;

beforeAll(async () => {
  app = await startTestApp();
  ({ estateId } = await app.addEstate('Shared'));
  manager = await app.as((await app.addPerson(estateId, 'manager')).email);
  code = (await manager.post(`${base()}/crew-code`)).body.code as string;
  nia = (await manager.post(`${base()}/crew`, { name: 'Nia Holt', language: 'pt', pin: '4711' })).body.id as string;
});
afterAll(() => app.close());
beforeEach(async () => {
  await CrewPin.query().patch({ failures: 0, lockedUntil: null });
});

const base = () => `/api/estates/${estateId}`;
const door = async () => app.browser();

describe('a shared phone', () => {
  it('finds the names by the code, however it is typed, and lets somebody in by PIN', async () => {
    const phone = await door();
    const offer = (await phone.post('/api/crew/people', { code: code.toLowerCase().replace(' ', '-') })).body as CrewOffer;
    expect(offer).toEqual({ estate: 'Shared', people: [{ id: nia, name: 'Nia Holt' }] });
    const answer = await phone.post('/api/crew/session', { code, personId: nia, pin: '4711' });
    expect(answer.body).toMatchObject({ person: { name: 'Nia Holt', language: 'pt' }, estates: [{ roles: ['crew'] }] });
    expect((await phone.get(`${base()}/rounds`)).status).toBe(200);
    expect((await phone.get(`${base()}/people`)).status).toBe(403);
  });

  it('locks a name after five wrong PINs, even for the right one, until the manager gives a new PIN', async () => {
    const phone = await door();
    const tries = await Promise.all(Array.from({ length: 7 }, () => phone.post('/api/crew/session', { code, personId: nia, pin: '0000' })));
    expect(tries.filter(({ status }) => status === 401 || status === 429)).toHaveLength(7);
    const locked = await phone.post('/api/crew/session', { code, personId: nia, pin: '4711' });
    expect(locked.status).toBe(429);
    expect(locked.body.code).toBe('pinLocked');
    expect(((await manager.get(`${base()}/crew-code`)).body as CrewCodeState).people[0]!.lockedUntil).not.toBeNull();
    expect((await manager.put(`${base()}/crew/${nia}/pin`, { pin: '5822' })).status).toBe(204);
    expect((await phone.post('/api/crew/session', { code, personId: nia, pin: '5822' })).status).toBe(200);
    await manager.put(`${base()}/crew/${nia}/pin`, { pin: '4711' });
  });

  it('forgets wrong tries after a right one', async () => {
    const phone = await door();
    for (const pin of ['1111', '2222', '3333', '4444']) expect((await phone.post('/api/crew/session', { code, personId: nia, pin })).status).toBe(401);
    expect((await phone.post('/api/crew/session', { code, personId: nia, pin: '4711' })).status).toBe(200);
    expect((await CrewPin.query().findOne({ personId: nia }))!.failures).toBe(0);
  });

  it('opens nothing with a code that is wrong or was replaced', async () => {
    const phone = await door();
    expect((await phone.post('/api/crew/people', { code: 'BBBB BBBB' })).status).toBe(404);
    const before = code;
    code = (await manager.post(`${base()}/crew-code`)).body.code as string;
    expect((await phone.post('/api/crew/people', { code: before })).status).toBe(404);
    expect((await phone.post('/api/crew/people', { code })).status).toBe(200);
  });

  it('is never a way round a password: whoever may do more than crew gets no PIN, and loses it with a new role', async () => {
    const winemaker = await app.addPerson(estateId, 'winemaker');
    expect((await manager.put(`${base()}/crew/${winemaker.id}/pin`, { pin: '1234' })).body.code).toBe('notCrewOnly');
    const other = await app.addEstate();
    const membership = await Membership.query().insert({ estateId: other.estateId, personId: nia, role: 'owner' });
    expect((await (await door()).post('/api/crew/session', { code, personId: nia, pin: '4711' })).status).toBe(401);
    await Membership.query().deleteById(membership.id);
  });
});

describe('a lost phone', () => {
  it('is reported with what may be missing, sends what it holds first, then is told to empty itself', async () => {
    const phone = await door();
    await phone.post('/api/crew/session', { code, personId: nia, pin: '4711' });
    const crew = await app.as((await app.addPerson(estateId, 'crew')).email);
    const deviceId = randomUUID();
    const checkIn = async (waiting: number) => (await crew.post(`${base()}/phones/check-in`, { deviceId, waiting, isReady: true, deviceTime: new Date(Date.now() - 9 * 60_000).toISOString() })).body as { isLost: boolean };
    const phones = async () => ((await manager.get(`${base()}/phones`)).body as { items: PhoneView[] }).items;
    expect((await checkIn(3)).isLost).toBe(false);
    expect(await phones()).toMatchObject([{ waiting: 3, isReady: true, clockOffMin: -9, lost: null }]);
    expect((await crew.put(`${base()}/phones/${(await phones())[0]!.id}/loss`, { isLost: true })).status).toBe(403);
    expect((await manager.put(`${base()}/phones/${(await phones())[0]!.id}/loss`, { isLost: true })).status).toBe(204);
    expect((await checkIn(3)).isLost).toBe(true);
    expect((await phones())[0]).toMatchObject({ emptiedAt: null });
    expect((await checkIn(0)).isLost).toBe(true);
    expect((await phones())[0]!.emptiedAt).not.toBeNull();
    expect(await AuditEntry.query().where({ estateId, action: 'phones.lost' }).resultSize()).toBe(1);
  });
});
