import { afterAll, beforeAll, describe, expect, it } from 'vitest';
import type { TodayView } from '../../shared/contracts/today.ts';
import { roles, type Role } from '../../shared/catalog/roles.ts';
import { layOneOfEach } from './support/strangers.ts';
import { startTestApp, type Agent, type TestApp } from './support/testApp.ts';

let app: TestApp;
let estateId: string;
let ids: Map<string, string>;
const agents = new Map<Role, Agent>();
const people = new Map<Role, string>();

const day = (offset: number) => new Date(Date.now() + offset * 86_400_000).toISOString().slice(0, 10);

beforeAll(async () => {
  app = await startTestApp();
  const estate = await app.addEstate('Marl test');
  ({ estateId } = estate);
  for (const role of roles) {
    const person = await app.addPerson(estateId, role);
    people.set(role, person.id);
    agents.set(role, await app.as(person.email));
  }
  ids = await layOneOfEach(app.knex, estateId, estate.ownerId);
  await layWork();
});
afterAll(() => app.close());

/** A round that is late, a plan of which two vines of five are read, a question, a notice, and a lot for Friday. */
async function layWork(): Promise<void> {
  const { knex } = app;
  const of = (table: string) => ids.get(table)!;
  await knex('rounds').where({ id: of('rounds') }).update({ onDate: day(-2), state: 'open' });
  await knex('round_people').insert({ estateId, roundId: of('rounds'), personId: people.get('crew') });
  await knex('plans').where({ id: of('plans') }).update({ state: 'locked', lockedAt: new Date() });
  const outline = knex.raw("(select boundary from blocks where id = ?)", [of('blocks')]);
  const [zone] = (await knex('zones').insert({ estateId, zoningId: of('zonings'), number: 1, name: 'Over', geometry: outline, areaM2: 100 }).returning('id')) as { id: string }[];
  const [row] = (await knex('block_rows').insert({ estateId, blockId: of('blocks'), ordinal: 0, label: '1', pieces: '[]', line: knex.raw("'SRID=4326;MULTILINESTRING((-7.51 38.61,-7.5 38.61))'::geometry"), vineCount: 40 }).returning('id')) as { id: string }[];
  await knex('quotas').insert({ estateId, planId: of('plans'), zoneId: zone!.id, measureCode: 'brix', samples: 5, spread: '{}' });
  const targets = (await knex('targets').insert([1, 2, 3, 4, 5].map((ordinal) => ({ estateId, planId: of('plans'), zoneId: zone!.id, rowId: row!.id, ordinal, position: knex.raw("'SRID=4326;POINT(-7.5 38.61)'::geometry"), drawOrder: ordinal, measureCodes: ['brix'] }))).returning('id')) as { id: string }[];
  const reading = await knex('readings').where({ id: of('readings') }).first();
  for (const [at, target] of targets.slice(0, 2).entries()) {
    await knex('readings').insert({ estateId, id: `00000000-0000-4000-8000-00000000000${at}`, seasonId: reading.seasonId, blockId: of('blocks'), roundId: of('rounds'), targetId: target.id, measureCode: 'brix', value: 22, unit: '°Brix', takenAt: new Date(), source: 'field' });
  }
  await knex('imports').where({ id: of('imports') }).update({ state: 'asks' });
  await knex('lots').where({ id: of('lots') }).update({ pickOn: day(4) });
  await knex('pick_notices').where({ id: of('pick_notices') }).update({ body: JSON.stringify({ lotName: 'Wall', pickOn: day(4) }) });
  await knex('notice_readers').insert({ noticeId: of('pick_notices'), personId: people.get('crew') });
}

const todayOf = async (role: Role) => (await agents.get(role)!.get(`/api/estates/${estateId}/today`)).body as TodayView;
const kinds = (view: TodayView) => view.lines.map(({ kind }) => kind);

describe('what waits today', () => {
  it('tells each role of what it can do something about, and nobody of what they may not see', async () => {
    expect(kinds(await todayOf('guest'))).toEqual(['restriction']);
    expect(kinds(await todayOf('crew'))).toEqual(['restriction', 'notice', 'round']);
    expect(kinds(await todayOf('lab'))).toEqual(['restriction']);
    expect(kinds(await todayOf('winemaker'))).toEqual(['restriction', 'round', 'draft', 'lacking', 'lot']);
    expect(kinds(await todayOf('agronomist'))).toEqual(['restriction', 'round', 'conflict', 'question', 'draft', 'lacking', 'lot']);
    expect(kinds(await todayOf('owner'))).toEqual(['restriction', 'round', 'conflict', 'question', 'draft', 'lacking', 'lot', 'backup']);
  });

  it('says how far a round is and that it is late', async () => {
    const round = (await todayOf('manager')).lines.find(({ kind }) => kind === 'round');
    expect(round).toMatchObject({ blockName: 'Over the Wall', done: 2, vines: 5, state: 'late', isMine: false });
    expect((await todayOf('crew')).lines.find(({ kind }) => kind === 'round')).toMatchObject({ isMine: true, seen: false });
  });

  it('counts the vines that the plan of a zone still wants', async () => {
    expect((await todayOf('manager')).lines.find(({ kind }) => kind === 'lacking')).toMatchObject({ id: ids.get('plans'), blockId: ids.get('blocks'), blockName: 'Over the Wall', zones: [{ number: 1, name: 'Over', read: 2, wanted: 5 }] });
  });

  it('leaves a lot out once it is picked, and a notice once it is read or void', async () => {
    expect((await todayOf('winemaker')).lines.find(({ kind }) => kind === 'lot')).toMatchObject({ name: 'Wall', inDays: 4 });
    await app.knex('lots').where({ id: ids.get('lots')! }).update({ state: 'picked' });
    await agents.get('crew')!.post(`/api/estates/${estateId}/notices/${ids.get('pick_notices')}/read`);
    expect(kinds(await todayOf('winemaker'))).not.toContain('lot');
    expect(kinds(await todayOf('crew'))).not.toContain('notice');
  });

  it('says of a restriction whether it comes, holds, or ends within a day', async () => {
    const state = async (startsIn: number, endsIn: number) => {
      const at = (hours: number) => new Date(Date.now() + hours * 3_600_000);
      await app.knex('entry_restrictions').where({ id: ids.get('entry_restrictions')! }).update({ startsAt: at(startsIn), endsAt: at(endsIn) });
      const line = (await todayOf('crew')).lines.find(({ kind }) => kind === 'restriction');
      return line?.kind === 'restriction' ? line.state : null;
    };
    expect(await state(-5, 60)).toBe('inForce');
    expect(await state(-5, 5)).toBe('endsSoon');
    expect(await state(5, 60)).toBe('comes');
    expect(await state(40, 60)).toBeNull();
    expect(await state(-60, -5)).toBeNull();
    await state(-5, 60);
    const lift = (hoursAgo: number) => app.knex('entry_restrictions').where({ id: ids.get('entry_restrictions')! }).update({ liftedAt: new Date(Date.now() - hoursAgo * 3_600_000), liftedBy: people.get('manager'), liftedReason: 'Typed for the wrong block' });
    await lift(2);
    expect((await todayOf('crew')).lines.find(({ kind }) => kind === 'restriction')).toMatchObject({ state: 'lifted', lifted: { reason: 'Typed for the wrong block' } });
    await lift(25);
    expect(kinds(await todayOf('crew'))).not.toContain('restriction');
    await app.knex('entry_restrictions').where({ id: ids.get('entry_restrictions')! }).update({ liftedAt: null, liftedBy: null, liftedReason: null });
  });

  it('starts a new estate with nothing waiting and nothing set up', async () => {
    const fresh = await app.addEstate('Quiet Bank');
    const view = (await (await app.as(fresh.ownerEmail)).get(`/api/estates/${fresh.estateId}/today`)).body as TodayView;
    expect(view.setUp).toEqual({ blocks: 0, layers: 0, zonings: 0, zoned: 0, plans: 0, people: 1 });
    expect(kinds(view)).toEqual(['backup']);
  });
});

describe('finding things', () => {
  const find = async (role: Role, q: string) => ((await agents.get(role)!.get(`/api/estates/${estateId}/search`).query({ q })).body.items as { kind: string; name: string }[]).map(({ kind, name }) => `${kind} ${name}`);

  it('finds blocks whatever the accents and one slip, and things by where they belong', async () => {
    expect(await find('crew', 'óver')).toContain('block Over the Wall');
    expect(await find('agronomist', 'ovre')).toContain('block Over the Wall');
    expect(await find('manager', 'over wall')).toContain('round Over the Wall');
  });

  it('shows people and lots only to those who may see them', async () => {
    expect((await find('owner', 'wall')).some((one) => one.startsWith('lot'))).toBe(true);
    expect((await find('crew', 'wall')).some((one) => one.startsWith('lot'))).toBe(false);
    expect((await find('owner', 'winemaker')).some((one) => one.startsWith('person'))).toBe(true);
    expect((await find('winemaker', 'winemaker')).some((one) => one.startsWith('person'))).toBe(false);
  });

  it('finds nothing of another estate, and asks for at least a letter', async () => {
    const other = await app.addEstate('Far Bank');
    const strange = await app.as(other.ownerEmail);
    expect((await strange.get(`/api/estates/${other.estateId}/search`).query({ q: 'wall' })).body.items).toEqual([]);
    expect((await strange.get(`/api/estates/${other.estateId}/search`).query({ q: ' ' })).status).toBe(422);
  });
});
