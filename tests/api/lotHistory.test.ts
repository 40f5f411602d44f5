import { randomUUID } from 'node:crypto';
import { afterAll, beforeAll, describe, expect, it } from 'vitest';
import { EntryRestriction } from '../../server/models/EntryRestriction.ts';
import { AuditEntry } from '../../server/models/AuditEntry.ts';
import { Reading } from '../../server/models/Reading.ts';
import { noticeTexts } from '../../server/mail/noticeTexts.ts';
import { MailMessage } from '../../server/models/MailMessage.ts';
import { PickNotice } from '../../server/models/PickNotice.ts';
import { pickStops } from '../../server/services/lots/pickStops.ts';
import type { RestrictionView } from '../../shared/contracts/restrictions.ts';
import type { FactorView } from '../../shared/contracts/factors.ts';
import type { LotsBoard } from '../../shared/contracts/lots.ts';
import type { NoticeState, NoticeView } from '../../shared/contracts/notices.ts';
import type { RipeningView } from '../../shared/contracts/results.ts';
import { makeZonedBlock, type ZonedBlock } from './support/makeZonedBlock.ts';
import { startTestApp, type Agent, type TestApp } from './support/testApp.ts';

let app: TestApp;
let estate: Awaited<ReturnType<TestApp['addEstate']>>;
let winemaker: Agent;
let crew: { id: string; email: string };
let block: ZonedBlock;

beforeAll(async () => {
  app = await startTestApp();
  estate = await app.addEstate('History test');
  block = await makeZonedBlock({ estateId: estate.estateId, personId: estate.ownerId }, { name: 'West Plot', variety: 'Carignan' });
  winemaker = await app.as((await app.addPerson(estate.estateId, 'winemaker')).email);
  crew = await app.addPerson(estate.estateId, 'crew', 'Picker');
});
afterAll(() => app.close());

const base = () => `/api/estates/${estate.estateId}`;
const board = async (known?: string) => (await winemaker.get(`${base()}/lots${known ? `?known=${known}` : ''}`)).body as LotsBoard;
const lotOf = async (id: string) => (await board()).lots.find((lot) => lot.id === id)!;
const dayAgo = (days: number) => new Date(Date.now() - days * 86_400_000).toISOString().slice(0, 10);
const newLot = async (name: string, facts: object = {}) => (await winemaker.post(`${base()}/lots`, { name, ...facts })).body.id as string;
/** A write on the version of the lot that stands now. */
async function on(lotId: string, method: 'put' | 'patch' | 'post' | 'delete', { path = '', body = {} }: { path?: string; body?: object } = {}) {
  const { version } = await lotOf(lotId);
  return await winemaker.write(method, `${base()}/lots/${lotId}${path}`).set('if-match', `"${version}"`).send(body);
}
const setParts = (lotId: string, parts: object[]) => on(lotId, 'put', { path: '/parts', body: { parts } });

function rowsIn(zone: number): string[] {
  const rows = [...block.zoneOf.keys()].filter((vine) => block.zoneOf[vine] === zone).map((vine) => block.ground.vines.row[vine]!);
  return [...new Set(rows)].sort((a, b) => a - b).map((row) => block.ground.stored[row]!.id);
}

async function read(zone: number, values: number[], facts: { source?: 'field' | 'lab'; from?: number; measureCode?: string; unit?: string; day?: string } = {}): Promise<string[]> {
  const { source = 'field', from = 0, measureCode = 'brix', unit = '°Brix', day = '2026-09-01' } = facts;
  const vines = [...block.zoneOf.keys()].filter((vine) => block.zoneOf[vine] === zone);
  const readings = values.map((value, index) => {
    const vine = vines[100 + from + index * 37]!;
    return { id: randomUUID(), blockId: block.blockId, rowId: block.ground.stored[block.ground.vines.row[vine]!]!.id, ordinal: block.ground.vines.ordinal[vine], measureCode, value, unit, takenAt: `${day}T08:00:00Z`, source };
  });
  const answer = await winemaker.post(`${base()}/readings`, { readings });
  expect(answer.body.outcomes.map((outcome: { state: string }) => outcome.state)).toEqual(values.map(() => 'received'));
  return readings.map(({ id }) => id);
}

describe('figures of the lab that nobody has checked', () => {
  it('stay out of forecasts and lots until they are checked, and are counted beside them', async () => {
    await read(1, [22.0, 22.4, 22.2]);
    const open = await read(1, [25.0, 25.4, 25.2], { source: 'lab', from: 11, day: '2026-09-08' });
    const ripening = async (query = '') => (await winemaker.get(`${base()}/blocks/${block.blockId}/ripening${query}`)).body as RipeningView;
    const visits = (view: RipeningView) => view.series.find(({ zone, measure }) => zone === 1 && measure === 'brix')!.points.map(({ visit, provisional }) => [visit, provisional]);
    expect(visits(await ripening())).toEqual([['2026-09-01', 0]]);
    expect((await ripening()).unchecked).toEqual({ basis: 'out', n: 3 });
    expect(visits(await ripening('?unchecked=in'))).toEqual([['2026-09-01', 0], ['2026-09-08', 3]]);
    const zone = async () => (await board()).zones.find(({ number }) => number === 1)!;
    expect(await zone()).toMatchObject({ unchecked: 3, latest: { on: '2026-09-01' } });
    const lab = await app.as((await app.addPerson(estate.estateId, 'lab')).email);
    expect((await lab.write('put', `${base()}/lab/results/state`).send({ resultIds: open, state: 'checked' })).status).toBeLessThan(300);
    expect(await zone()).toMatchObject({ unchecked: 0, latest: { on: '2026-09-08' } });
    expect(visits(await ripening())).toEqual([['2026-09-01', 0], ['2026-09-08', 0]]);
  });
});

describe('the lots as known on an earlier day', () => {
  it('are those of that day, with their zones, tank and figures', async () => {
    const tank = (await winemaker.post(`${base()}/tanks`, { name: 'T1', litres: 20_000 })).body.id as string;
    const lotId = await newLot('Shelf red', { pickOn: '2026-09-20', tankId: tank });
    await setParts(lotId, [{ zoneId: block.zoneIds[0] }]);
    const gone = await newLot('Given up');
    // What was done so far is put back by three days.
    await app.knex.raw("update lot_history set at = at - interval '3 days'");
    await app.knex.raw("update zonings set published_at = now() - interval '9 days' where state = 'live'");
    await Reading.query().patch({ receivedAt: new Date(Date.now() - 4 * 86_400_000) });
    await app.knex.raw("alter table audit_entries disable trigger user; update audit_entries set at = at - interval '3 days'; alter table audit_entries enable trigger user");
    const before = (await board()).lots.find(({ id }) => id === lotId)!;
    await setParts(lotId, [{ zoneId: block.zoneIds[1] }]);
    await on(lotId, 'patch', { body: { name: 'Valley red', pickOn: '2026-09-25', tankId: null } });
    await on(gone, 'delete');
    await winemaker.delete(`${base()}/tanks/${tank}`);
    await read(1, [27.0, 27.2, 26.8], { from: 5, day: '2026-09-09' });
    const then = await board(dayAgo(2));
    expect(then.knownOn).toBe(dayAgo(2));
    expect(then.lots.map(({ name }) => name)).toEqual(['Shelf red', 'Given up']);
    expect(then.tanks.map(({ name }) => name)).toEqual(['T1']);
    expect(then.lots[0]!.lines.map(({ number }) => number)).toEqual([1]);
    expect(then.lots[0]!.summary).toEqual(before.summary);
    expect(then.zones.find(({ number }) => number === 1)!.latest.on).toBe('2026-09-08');
    const now = await board();
    expect(now.lots.map(({ name }) => name)).toEqual(['Valley red']);
    expect(now.lots[0]!.lines.map(({ number }) => number)).toEqual([2]);
    expect((await board(dayAgo(6))).lots).toEqual([]);
  });
});

describe('the way to potential alcohol', () => {
  it('is the estate’s, shown with every figure, kept with who changed it, and as it was on an earlier day', async () => {
    const lotId = await newLot('Strength');
    await setParts(lotId, [{ zoneId: block.zoneIds[0] }]);
    const { brix, alcohol } = (await lotOf(lotId)).summary;
    expect(alcohol!.method).toBe('brixFactor');
    expect(alcohol!.low).toBeCloseTo(0.55 * (brix!.value - brix!.halfWidth!), 9);
    const choose = (agent: Agent, method: string) => agent.write('put', `${base()}/alcohol-method`).send({ method });
    expect((await choose(await app.as(crew.email), 'solidsLessAllowance')).status).toBe(403);
    expect((await choose(winemaker, 'guess')).status).toBe(422);
    expect((await choose(winemaker, 'solidsLessAllowance')).status).toBe(204);
    // For everybody, and not by the door of the estate's other settings.
    const owner = await app.as(estate.ownerEmail);
    await owner.write('patch', base()).send({ settings: { alcoholMethod: 'brixFactor', dayHours: 7 } });
    const after = (await owner.get(`${base()}/lots`)).body as LotsBoard;
    expect(after.alcoholMethod).toBe('solidsLessAllowance');
    expect(after.lots.find(({ id }) => id === lotId)!.summary.alcohol!.method).toBe('solidsLessAllowance');
    expect((await board(dayAgo(2))).alcoholMethod).toBe('brixFactor');
    const [entry] = await AuditEntry.query().where({ estateId: estate.estateId, action: 'lots.alcoholMethod' });
    expect(entry).toMatchObject({ before: { method: 'brixFactor' }, after: { method: 'solidsLessAllowance' } });
    await choose(winemaker, 'brixFactor');
    await on(lotId, 'delete');
  });
});

describe('the vine census on an earlier day', () => {
  const mark = (state: string, count: number) => {
    const rowId = rowsIn(1)[0]!;
    const row = block.ground.rowIndexOf.get(rowId)!;
    const ordinals = [...block.zoneOf.keys()].filter((vine) => block.zoneOf[vine] === 1 && block.ground.vines.row[vine] === row).slice(0, count).map((vine) => block.ground.vines.ordinal[vine]!);
    return ordinals.map((ordinal) => ({ rowId, ordinal, state }));
  };
  const census = async (marks: object[], complete = false) => expect((await (await app.as(estate.ownerEmail)).write('put', `${base()}/blocks/${block.blockId}/vines`).send({ marks, complete })).status).toBeLessThan(300);
  const bearing = async (known?: string) => (await board(known)).zones.find(({ number }) => number === 1)!.bearing;
  const putBack = (days: number) => app.knex.raw(`update vine_history set at = at - interval '${days} days'; update blocks set census_at = census_at - interval '${days} days'`);

  it('is that of the day, vine by vine, with the tonnes that rest on it', async () => {
    const all = await bearing();
    await census(mark('missing', 12));
    await putBack(2);
    await census(mark('living', 5));
    expect(await bearing()).toBe(all - 7);
    expect(await bearing(dayAgo(1))).toBe(all - 12);
    const tonnes = async (known?: string) => (await board(known)).zones.find(({ number }) => number === 1)!.tonnes.value;
    expect((await tonnes(dayAgo(1))) / (await tonnes())).toBeCloseTo((all - 12) / (all - 7), 9);
    expect((await board(dayAgo(1))).censusFrom).toBeNull();
    await census(mark('living', 12));
    expect(await bearing()).toBe(all);
  });

  it('says from which day on it is known, where marks are older than its history', async () => {
    await app.knex('blocks').where({ id: block.blockId }).update({ census_kept_since: new Date() });
    expect((await board(dayAgo(1))).censusFrom).toBe(dayAgo(0));
    expect((await board()).censusFrom).toBeNull();
    await app.knex('blocks').where({ id: block.blockId }).update({ census_kept_since: null });
  });
});

describe('a stop on a pick date', () => {
  const stopped = (lotId: string, pickOn: string) => on(lotId, 'patch', { body: { pickOn } });

  it('names what was entered, who entered it and who may lift it', async () => {
    const lotId = (await board()).lots[0]!.id;
    await EntryRestriction.query().insert({ estateId: estate.estateId, blockId: block.blockId, startsAt: new Date('2026-09-01'), endsAt: new Date('2026-09-02'), product: 'Copper', labelInterval: '21 days', noPickBefore: '2026-10-02', setBy: crew.id });
    const answer = await stopped(lotId, '2026-09-28');
    expect(answer.status).toBe(409);
    const owner = (await app.knex('people').where({ id: estate.ownerId }).first()) as { name: string };
    expect(answer.body.detail).toBe(`West Plot: Copper (interval as typed: 21 days) rules out picking before 2026-10-02. Entered by Picker. Choose a later day; only ${owner.name} may put that day right, where it was typed wrong, nothing was applied, or the label allows an earlier one.`);
    // The day it had stands, and the board shows what stands against it.
    const { lots, mayLift } = await board();
    expect(lots[0]!.stops).toMatchObject([{ kind: 'pick', product: 'Copper', labelInterval: '21 days', until: '2026-10-02', setBy: 'Picker' }]);
    expect(mayLift).toEqual([owner.name]);
  });

  it('by a pre-harvest interval outlasts a lift of entry, and is put right only on stated grounds by somebody who may', async () => {
    const lotId = (await board()).lots[0]!.id;
    const restriction = await EntryRestriction.query().findOne({ estateId: estate.estateId, product: 'Copper' }).throwIfNotFound();
    const ahead = new Date(Date.now() + 20 * 86_400_000).toISOString().slice(0, 10);
    await restriction.$query().patch({ noPickBefore: ahead, endsAt: new Date(Date.now() + 3_600_000) });
    const owner = await app.as(estate.ownerEmail);
    expect((await owner.post(`${base()}/restrictions/${restriction.id}/lift`, { reason: 'Entry needed for the drip line' })).status).toBe(204);
    expect((await board()).lots[0]!.stops).toMatchObject([{ kind: 'pick', until: ahead }]);
    expect((await MailMessage.query().where({ kind: 'restrictionLiftedNoPick' })).every(({ bodyText }) => bodyText.includes('The pre-harvest interval stays: no picking before'))).toBe(true);
    expect(await MailMessage.query().where({ kind: 'restrictionLiftedNoPick' }).resultSize()).toBeGreaterThan(0);
    expect((await stopped(lotId, '2026-09-28')).status).toBe(409);
    const change = (agent: Agent, facts: object) => agent.post(`${base()}/restrictions/${restriction.id}/pick-interval`, { noPickBefore: '2026-09-20', basis: 'mistyped', reason: 'The spray record says 20 September', ...facts });
    expect((await change(winemaker, {})).status).toBe(403);
    expect((await change(owner, { reason: 'wanted' })).status).toBe(422);
    expect((await change(owner, { basis: 'notApplied' })).body.detail).toMatch(/leave the day empty/);
    expect((await change(owner, { basis: 'labelAllows', noPickBefore: null })).status).toBe(422);
    expect((await change(owner, { basis: 'labelAllows', noPickBefore: '2099-01-01' })).body.detail).toMatch(/earlier day only/);
    expect((await change(owner, {})).status).toBe(204);
    expect((await change(owner, {})).status).toBe(409);
    expect((await board()).lots[0]!.stops).toEqual([]);
    const { items } = (await owner.get(`${base()}/restrictions`)).body as { items: RestrictionView[] };
    const view = items.find(({ id }) => id === restriction.id)!;
    expect(view).toMatchObject({ noPickBefore: '2026-09-20', lifted: { reason: 'Entry needed for the drip line' }, pickChanges: [{ basis: 'mistyped', before: ahead, after: '2026-09-20', reason: 'The spray record says 20 September' }] });
    const audit = await AuditEntry.query().where({ estateId: estate.estateId }).whereIn('action', ['restrictions.lift', 'restrictions.pickInterval']).orderBy('id');
    expect(audit.map(({ action, before, after, reason }) => ({ action, before, after, reason }))).toMatchObject([
      { action: 'restrictions.lift', after: { noPickBefore: ahead } },
      { action: 'restrictions.pickInterval', before: { noPickBefore: ahead }, after: { noPickBefore: '2026-09-20', basis: 'mistyped' } },
    ]);
    // On an earlier day the earlier day still stood.
    await app.knex.raw("update pick_interval_changes set changed_at = now() + interval '1 minute'");
    await restriction.$query().patch({ createdAt: new Date(Date.now() - 86_400_000) });
    expect((await pickStops(estate.estateId, [{ lotId, pickOn: '2026-09-28' }], { at: new Date() })).get(lotId)).toMatchObject([{ kind: 'pick', until: ahead }]);
    expect((await pickStops(estate.estateId, [{ lotId, pickOn: '2026-09-28' }])).get(lotId)).toEqual([]);
  });

  it('of some rows holds only lots with vines in them, on days that it touches in the estate’s own time', async () => {
    const lotId = (await board()).lots[0]!.id;
    const rows = rowsIn(2);
    await setParts(lotId, [{ zoneId: block.zoneIds[1], rowIds: rows.slice(-5) }]);
    const restriction = await EntryRestriction.query().insertAndFetch({ estateId: estate.estateId, blockId: block.blockId, rowIds: rows.slice(-3) as never, startsAt: new Date('2026-10-10T06:00:00Z'), endsAt: new Date('2026-10-11T12:00:00Z'), product: 'Sulphur', labelInterval: '30 h', setBy: estate.ownerId });
    expect((await stopped(lotId, '2026-10-11')).status).toBe(409);
    expect((await stopped(lotId, '2026-10-11')).body.detail).toMatch(/closes the block until Sun, 11 Oct 2026, 12:00/);
    expect((await stopped(lotId, '2026-10-09')).status).toBe(204);
    expect((await stopped(lotId, '2026-10-12')).status).toBe(204);
    await setParts(lotId, [{ zoneId: block.zoneIds[1], rowIds: rows.slice(-5, -3) }]);
    expect((await stopped(lotId, '2026-10-11')).status).toBe(204);
    await restriction.$query().delete();
  });
});

describe('a confirmed lot', () => {
  it('stands as it is until it is opened again; then its notice is void everywhere and its readers are told', async () => {
    const lotId = (await board()).lots[0]!.id;
    await on(lotId, 'post', { path: '/confirm' });
    const first = (await winemaker.post(`${base()}/lots/${lotId}/notices`, { people: [crew.id] })).body as { id: string; number: number };
    expect((await setParts(lotId, [{ zoneId: block.zoneIds[0] }])).body.detail).toMatch(/confirmed, so it stands as it is. Open it again first/);
    expect((await on(lotId, 'delete')).status).toBe(422);
    expect((await on(lotId, 'post', { path: '/reopen' })).status).toBe(204);
    const { code } = await PickNotice.query().findById(first.id).throwIfNotFound();
    const state = async () => (await (await app.browser()).get(`/api/notice-state/${code}`)).body as NoticeState;
    expect(await state()).toMatchObject({ isVoid: true, replacedBy: null, pickOn: null });
    const mails = (await (await app.as(estate.ownerEmail)).get(`${base()}/mail`)).body.items as { to: string; text: string; kind: string }[];
    expect(mails.filter(({ kind, to }) => kind === 'pickNotice' && to === crew.email).map(({ text }) => text).join()).toContain(`Notice ${first.number} for “Valley red” was withdrawn and no longer holds.`);
    await setParts(lotId, [{ zoneId: block.zoneIds[0] }]);
    await on(lotId, 'post', { path: '/confirm' });
    const second = (await winemaker.post(`${base()}/lots/${lotId}/notices`, { people: [crew.id] })).body as { number: number };
    expect(await state()).toMatchObject({ isVoid: true, replacedBy: second.number });
    const newest = ((await winemaker.get(`${base()}/notices`)).body.items as NoticeView[])[0]!;
    expect(newest).toMatchObject({ number: second.number, replacesNumber: first.number });
    expect(newest.differences.map(({ what }) => what)).toContain('zones');
  });

  it('that was opened and deleted leaves an answer behind the code on its paper', async () => {
    const lotId = (await board()).lots[0]!.id;
    const notice = await PickNotice.query().where({ lotId }).orderBy('number', 'desc').first().throwIfNotFound();
    await on(lotId, 'post', { path: '/reopen' });
    expect((await on(lotId, 'delete')).status).toBe(204);
    const answer = await (await app.browser()).get(`/api/notice-state/${notice.code}`);
    expect(answer.body).toMatchObject({ number: notice.number, isVoid: true, replacedBy: null });
  });

  it('has its words in every language', () => {
    const places = (texts: Record<string, string>) => Object.entries(texts).map(([key, text]) => `${key}: ${[...text.matchAll(/\{\w+\}/g)].map(([place]) => place).sort().join()}`).sort();
    for (const texts of Object.values(noticeTexts)) expect(places(texts)).toEqual(places(noticeTexts.en));
  });
});

describe('a learned factor', () => {
  const factors = async () => (await winemaker.get(`${base()}/factors`)).body.items as FactorView[];

  it('changes the lots only once it is switched on, and says on how many lots it rests', async () => {
    const rows = rowsIn(2);
    const lots = await Promise.all([0, 1, 2].map((at) => newLot(`Row lot ${at}`)));
    const litres = [700, 760, 820];
    for (const [at, lotId] of lots.entries()) {
      await setParts(lotId, [{ zoneId: block.zoneIds[1], rowIds: rows.slice(at * 3, at * 3 + 3) }]);
      await winemaker.post(`${base()}/tickets`, { lotId, ticketNo: `L-${at}`, gross: 8000, tare: 3000, weighedAt: '2026-09-26T09:00:00Z' });
      await winemaker.post(`${base()}/lots/${lotId}/cellar-results`, { mustL: litres[at]! * 5 });
    }
    const next = await newLot('Next red');
    await setParts(next, [{ zoneId: block.zoneIds[0] }]);
    const before = (await lotOf(next)).summary;
    expect(before.litreSource.must).toBeNull();
    expect(before.mustL!.value / before.tonnes!.value).toBeCloseTo(900, 9);
    // Mean 760, sd 60: three lots; t(0.975, 2) = 4.30265 from R 4.2.2.
    const learned = (await factors()).find(({ kind, about }) => kind === 'mustL' && about === 'red')!;
    expect(learned).toMatchObject({ n: 3, few: false, isOn: false });
    expect(learned.mean).toBeCloseTo(760, 9);
    expect(learned.sd).toBeCloseTo(60, 9);
    expect(learned.low).toBeCloseTo(760 - (4.302653 * 60) / Math.sqrt(3), 3);
    expect((await winemaker.write('put', `${base()}/factors`).send({ kind: 'mustL', about: 'red', isOn: true })).status).toBeLessThan(300);
    const after = (await lotOf(next)).summary;
    expect(after.litreSource.must).toBe(3);
    expect(after.mustL!.value / after.tonnes!.value).toBeCloseTo(760, 9);
    // Relative errors add in squares: those of the tonnes and √(60²·(1 + 1/3))/760 of one more lot.
    const relative = Math.hypot(before.tonnes!.standardError! / before.tonnes!.value, (60 * Math.sqrt(4 / 3)) / 760);
    expect(after.mustL!.standardError! / after.mustL!.value).toBeCloseTo(relative, 9);
    expect(after.tonnes).toEqual(before.tonnes);
    await winemaker.write('put', `${base()}/factors`).send({ kind: 'mustL', about: 'red', isOn: false });
    expect((await lotOf(next)).summary.mustL).toEqual(before.mustL);
  });
});
