import { afterAll, beforeAll, describe, expect, it } from 'vitest';
import { AuditEntry } from '../../server/models/AuditEntry.ts';
import { DayCapacity } from '../../server/models/DayCapacity.ts';
import { PickNotice } from '../../server/models/PickNotice.ts';
import { Reading } from '../../server/models/Reading.ts';
import type { CapacityView, LotsBoard, LotView } from '../../shared/contracts/lots.ts';
import type { NoticeState, NoticeView } from '../../shared/contracts/notices.ts';
import type { TodayView } from '../../shared/contracts/today.ts';
import { sugarOfBrix } from '../../shared/cellar/mustSugar.ts';
import { makeZonedBlock, type ZonedBlock } from './support/makeZonedBlock.ts';
import { startTestApp, type Agent, type TestApp } from './support/testApp.ts';

/** The pick board on an earlier day, notices whose day is over, lots with their own way to alcohol, and several people at once. */
let app: TestApp;
let estate: Awaited<ReturnType<TestApp['addEstate']>>;
let [winemaker, manager]: Agent[] = [];
let crew: { id: string; email: string };
let block: ZonedBlock;

beforeAll(async () => {
  app = await startTestApp();
  estate = await app.addEstate('Board test');
  block = await makeZonedBlock({ estateId: estate.estateId, personId: estate.ownerId }, { name: 'West Plot', variety: 'Carignan' });
  winemaker = await app.as((await app.addPerson(estate.estateId, 'winemaker')).email);
  manager = await app.as((await app.addPerson(estate.estateId, 'manager')).email);
  crew = await app.addPerson(estate.estateId, 'crew', 'Picker');
});
afterAll(() => app.close());

const base = () => `/api/estates/${estate.estateId}`;
const dayAgo = (days: number) => new Date(Date.now() - days * 86_400_000).toISOString().slice(0, 10);
const board = async () => (await winemaker!.get(`${base()}/lots`)).body as LotsBoard;
const lotNamed = async (name: string): Promise<LotView> => (await board()).lots.find((lot) => lot.name === name)!;
const make = async (name: string, facts: object = {}) => (await winemaker!.post(`${base()}/lots`, { name, ...facts })).body.id as string;
const write = (agent: Agent, { id, version }: Pick<LotView, 'id' | 'version'>, how: { method: 'put' | 'patch' | 'post'; path: string; body: object }) =>
  agent.write(how.method, `${base()}/lots/${id}${how.path}`).set('if-match', `"${version}"`).send(how.body);

describe('a notice', () => {
  const notices = async (query = '') => (await winemaker!.get(`${base()}/notices${query}`)).body.items as NoticeView[];
  const send = async (lotId: string) => (await winemaker!.post(`${base()}/lots/${lotId}/notices`, { people: [crew.id] })).body as { id: string; number: number };
  let lotId = '';

  it('whose day has gone by says so in the list and behind the code on its paper, and waits for nobody', async () => {
    lotId = await make('Past', { pickOn: dayAgo(2) });
    await write(winemaker!, await lotNamed('Past'), { method: 'put', path: '/parts', body: { parts: [{ zoneId: block.zoneIds[0] }] } });
    await write(winemaker!, await lotNamed('Past'), { method: 'post', path: '/confirm', body: {} });
    const { id } = await send(lotId);
    await PickNotice.query().findById(id).patch({ sentAt: new Date(Date.now() - 4 * 86_400_000) });
    expect(await notices()).toMatchObject([{ number: 1, voidAt: null, isOver: true }]);
    const { code } = await PickNotice.query().findById(id).throwIfNotFound();
    const state = (await (await app.browser()).get(`/api/notice-state/${code}`)).body as NoticeState;
    expect(state).toMatchObject({ isVoid: false, isOver: true, pickOn: dayAgo(2) });
    expect((await winemaker!.get(`${base()}/notices/${id}/sheet`)).headers['content-type']).toBe('application/pdf');
    const waiting = (await (await app.as(crew.email)).get(`${base()}/today`)).body as TodayView;
    expect(waiting.lines.filter(({ kind }) => kind === 'notice')).toEqual([]);
  });

  it('stands on an earlier day as it stood then: in force, unread, replaced by nothing', async () => {
    const [first] = await notices();
    await (await app.as(crew.email)).post(`${base()}/notices/${first!.id}/read`);
    await send(lotId);
    const [then, ...others] = await notices(`?known=${dayAgo(3)}`);
    expect(others).toEqual([]);
    expect(then).toMatchObject({ number: 1, voidAt: null, isOver: false, replacedBy: null, readers: [{ name: 'Picker', readAt: null }] });
    expect(await notices(`?known=${dayAgo(6)}`)).toEqual([]);
    expect((await notices()).map(({ number, replacedBy }) => [number, replacedBy])).toEqual([[2, null], [1, 2]]);
    expect((await winemaker!.get(`${base()}/notices?known=yesterday`)).status).toBe(422);
  });

  it('is not sent for a lot that somebody opened again while it was written', async () => {
    const { id, version } = await lotNamed('Past');
    const [answer] = await Promise.all([winemaker!.post(`${base()}/lots/${id}/notices`, { people: [crew.id] }), write(manager!, { id, version }, { method: 'post', path: '/reopen', body: {} }), write(winemaker!, { id, version }, { method: 'post', path: '/reopen', body: {} })]);
    expect([201, 412, 422]).toContain(answer.status);
    const isOpen = (await lotNamed('Past')).state === 'draft';
    expect(isOpen).toBe(true);
    expect((await notices()).filter(({ voidAt }) => voidAt === null)).toEqual([]);
  });
});

describe('room by day', () => {
  const room = async (known = '') => (await winemaker!.get(`${base()}/day-capacities${known && `?known=${known}`}`)).body.items as CapacityView[];
  const set = (facts: object) => winemaker!.write('put', `${base()}/day-capacities`).send(facts);

  it('is on an earlier day what it was then, through changes, new lines and lines taken out', async () => {
    const lines = [{ day: null, pickT: 10, pressT: 5, note: 'usual' }, { day: '2026-09-20', pickT: 8, pressT: null, note: '' }];
    await DayCapacity.query().insert(lines.map((line) => ({ ...line, estateId: estate.estateId })));
    await set({ day: null, pickT: 20, pressT: 5 });
    await set({ day: null, pickT: 30, pressT: 6 });
    await set({ day: '2026-09-20' });
    await set({ day: '2026-09-21', pickT: 3 });
    expect(await room()).toEqual([{ day: null, pickT: 30, pressT: 6, note: '' }, { day: '2026-09-21', pickT: 3, pressT: null, note: '' }]);
    expect(await room(dayAgo(1))).toEqual(lines);
  });
});

describe('a lot’s own way to potential alcohol', () => {
  it('holds for it alone, is kept by a copy, and gives way to the estate’s when it is taken back', async () => {
    const vines = [...block.zoneOf.keys()].filter((vine) => block.zoneOf[vine] === 2);
    const readings = [23, 24, 25].map((value, at) => {
      const vine = vines[100 + at * 37]!;
      return { id: crypto.randomUUID(), blockId: block.blockId, rowId: block.ground.stored[block.ground.vines.row[vine]!]!.id, ordinal: block.ground.vines.ordinal[vine], measureCode: 'brix', value, unit: '°Brix', takenAt: '2026-09-01T08:00:00Z' };
    });
    await winemaker!.post(`${base()}/readings`, { readings });
    await make('Own way', { alcoholMethod: 'sugarTable' });
    await write(winemaker!, await lotNamed('Own way'), { method: 'put', path: '/parts', body: { parts: [{ zoneId: block.zoneIds[1] }] } });
    const { alcoholMethod, summary: { alcohol, brix } } = await lotNamed('Own way');
    expect([alcoholMethod, alcohol!.method]).toEqual(['sugarTable', 'sugarTable']);
    expect(alcohol!.middle).toBeCloseTo(sugarOfBrix(brix!.value) / 16.83, 9);
    const { scenarioId, alcoholMethod: estates } = await board();
    expect(estates).toBe('brixFactor');
    const copy = (await winemaker!.post(`${base()}/scenarios`, { name: 'Copy', copyOf: scenarioId })).body as { id: string };
    const copied = (await winemaker!.get(`${base()}/lots?scenario=${copy.id}`)).body as LotsBoard;
    expect(copied.lots.find(({ name }) => name === 'Own way')!.summary.alcohol).toEqual(alcohol);
    expect((await write(winemaker!, await lotNamed('Own way'), { method: 'patch', path: '', body: { alcoholMethod: 'guess' } })).status).toBe(422);
    await write(winemaker!, await lotNamed('Own way'), { method: 'patch', path: '', body: { alcoholMethod: null } });
    expect((await lotNamed('Own way')).summary.alcohol!.method).toBe('brixFactor');
  });
});

describe('what the history says of the time before', () => {
  const beforeOf = async (action: string, subjectName: string) => (await AuditEntry.query().where({ estateId: estate.estateId, action, subjectName }).orderBy('id', 'desc').first())!.before;

  it('is what stood before the change, not what it was changed to', async () => {
    await make('Told', { pickOn: '2026-09-20', crew: 'north gang' });
    await write(winemaker!, await lotNamed('Told'), { method: 'patch', path: '', body: { name: 'Told anew', pickOn: '2026-09-22', crew: '' } });
    expect(await beforeOf('lots.change', 'Told')).toMatchObject({ name: 'Told', pickOn: '2026-09-20', crew: 'north gang' });
    const { id } = (await winemaker!.post(`${base()}/tanks`, { name: 'T1', litres: 9000 })).body as { id: string };
    await winemaker!.write('patch', `${base()}/tanks/${id}`).send({ litres: 7000 });
    expect(await beforeOf('tanks.change', 'T1')).toMatchObject({ name: 'T1', litres: 9000 });
  });

  it('lets a reading that was left out since count on an earlier day', async () => {
    await app.knex.raw(`update zonings set published_at = now() - interval '9 days'; update readings set received_at = now() - interval '3 days'`);
    const [reading] = await Reading.query().where({ estateId: estate.estateId, measureCode: 'brix' });
    expect((await winemaker!.write('put', `${base()}/readings/${reading!.id}/exclusion`).send({ reason: 'mould' })).status).toBe(204);
    const n = async (known = '') => ((await winemaker!.get(`${base()}/lots${known && `?known=${known}`}`)).body as LotsBoard).zones.find(({ number }) => number === 2)!.latest.brix!.n;
    expect([await n(), await n(dayAgo(1))]).toEqual([2, 3]);
  });
});

describe('several people at once', () => {
  const vineTwice = async () => (await app.knex.raw('select count(*)::int as n from lot_row_runs a join lot_row_runs b on a.scenario_id = b.scenario_id and a.row_id = b.row_id and a.vines && b.vines and a.id < b.id')).rows[0].n as number;

  it('put the same zone into two lots: one has it, the other is told', async () => {
    await write(winemaker!, await lotNamed('Past'), { method: 'put', path: '/parts', body: { parts: [] } });
    for (let turn = 0; turn < 4; turn++) {
      const [a, b] = [await make(`Race a${turn}`), await make(`Race b${turn}`)];
      const body = { parts: [{ zoneId: block.zoneIds[0] }] };
      const answers = await Promise.all([write(winemaker!, { id: a, version: 1 }, { method: 'put', path: '/parts', body }), write(manager!, { id: b, version: 1 }, { method: 'put', path: '/parts', body })]);
      expect(answers.map(({ status }) => status).sort()).toEqual(turn === 0 ? [204, 409] : [409, 409]);
      expect(await vineTwice()).toBe(0);
    }
  });

  it('move zones against each other and change one lot: one does, the other reads it again', async () => {
    const [a, b] = (await board()).lots.filter(({ name }) => /^Race a0|^Race b0/.test(name));
    const move = (agent: Agent, from: LotView, to: LotView) => agent.post(`${base()}/lot-moves`, { zoneId: block.zoneIds[0], fromLotId: from.id, fromVersion: from.version, toLotId: to.id, toVersion: to.version });
    const answers = await Promise.all([move(winemaker!, a!, b!), move(manager!, b!, a!), write(manager!, a!, { method: 'patch', path: '', body: { crew: 'south gang' } })]);
    expect(answers.filter(({ status }) => status === 204)).toHaveLength(1);
    for (const { status } of answers) expect([204, 412, 422]).toContain(status);
    expect(await vineTwice()).toBe(0);
  });

  it('read in the same table of tickets: it is entered once', async () => {
    const lot = (await lotNamed('Own way')).name;
    const text = `ticket;lot;gross kg;tare kg;date\nR-1;${lot};9000;3000;20/09/2026\nR-2;${lot};8000;3000;21/09/2026\n`;
    const enter = (agent: Agent) => agent.post(`${base()}/tickets/import`, { text, dateOrder: 'dmy', apply: true });
    const answers = await Promise.all([enter(winemaker!), enter(manager!), enter(winemaker!)]);
    expect(answers.map(({ status }) => status).sort()).toEqual([200, 422, 422]);
    expect((await winemaker!.get(`${base()}/tickets`)).body.items).toHaveLength(2);
  });
});
