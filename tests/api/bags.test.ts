import { randomUUID } from 'node:crypto';
import { afterAll, beforeAll, beforeEach, describe, expect, it } from 'vitest';
import { AuditEntry } from '../../server/models/AuditEntry.ts';
import { Bag } from '../../server/models/Bag.ts';
import { BlockRow } from '../../server/models/BlockRow.ts';
import { MailMessage } from '../../server/models/MailMessage.ts';
import { Reading } from '../../server/models/Reading.ts';
import type { ConflictList } from '../../shared/contracts/conflicts.ts';
import { labelCode, spellLabelCode } from '../../shared/field/labelCode.ts';
import { makeStripBlock, type StripBlock } from './support/makeStripBlock.ts';
import { startTestApp, type Agent, type TestApp } from './support/testApp.ts';

let app: TestApp;
let estate: Awaited<ReturnType<TestApp['addEstate']>>;
let block: StripBlock;
let manager: Agent;
let agronomist: Agent;
let crew: Agent;
let lab: Agent;

beforeAll(async () => {
  app = await startTestApp();
  estate = await app.addEstate('Bags test');
  block = await makeStripBlock(estate);
  manager = await app.as((await app.addPerson(estate.estateId, 'manager', 'Mara Holt')).email);
  agronomist = await app.as((await app.addPerson(estate.estateId, 'agronomist', 'Ada Birch')).email);
  crew = await app.as((await app.addPerson(estate.estateId, 'crew')).email);
  lab = await app.as((await app.addPerson(estate.estateId, 'lab', 'Wim Roe')).email);
});
afterAll(() => app.close());
beforeEach(async () => {
  await app.knex.raw('truncate readings, bags, mail_messages cascade');
});

const base = () => `/api/estates/${estate.estateId}`;
const vinesOf = (row: number, ...ordinals: number[]) => ordinals.map((ordinal) => ({ rowId: block.rows[row]!.id, ordinal }));
const bag = (over: Record<string, unknown> = {}) => ({ id: randomUUID(), code: labelCode(1000), blockId: block.blockId, vines: vinesOf(2, 4, 5), berries: 100, wet: false, closedAt: '2026-09-01T07:41:00Z', ...over });
const close = async (agent: Agent, ...bags: object[]) => (await agent.post(`${base()}/bags`, { bags })).body.outcomes as { state: string; reason: string | null; usedBy: unknown }[];
const list = async (agent: Agent = lab) => (await agent.get(`${base()}/bags?days=400`)).body.items as { id: string; code: string; place: string; zone: number | null; holder: string | null; results: number; rowLabel: string | null }[];
const brix = (bagId: string, value: number) =>
  Reading.query().insert({ id: randomUUID(), estateId: estate.estateId, seasonId: block.seasonId, blockId: block.blockId, bagId, measureCode: 'brix', value, unit: '°Brix', takenAt: new Date('2026-09-01T07:41:00Z'), source: 'lab', state: 'provisional' });

describe('bags closed in the row', () => {
  it('may be sent five times and are stored once', async () => {
    const batch = [bag(), bag({ code: labelCode(1001) })];
    for (let i = 0; i < 5; i++) expect((await close(agronomist, ...batch)).map(({ state }) => state)).toEqual(['received', 'received']);
    expect(await Bag.query().resultSize()).toBe(2);
    expect(await AuditEntry.query().where({ estateId: estate.estateId, action: 'bags.close' }).resultSize()).toBe(1);
  });

  it('take a label however it is written, and refuse one whose letters do not fit', async () => {
    const code = labelCode(1000);
    const [good, bad] = await close(agronomist, bag({ code: ` ${code.slice(0, 3).toLowerCase()} ${code.slice(3)}` }), bag({ code: `${code.slice(0, 5)}${code.endsWith('B') ? 'C' : 'B'}` }));
    expect(good!.state).toBe('received');
    expect(bad).toMatchObject({ state: 'refused', reason: expect.stringMatching(/^code: .*Read the label again/) });
  });

  it('keep both bags when a label is used twice, and say where it was used first', async () => {
    await close(agronomist, bag());
    const second = bag({ vines: vinesOf(30, 2) });
    const [outcome] = await close(manager, second);
    expect(outcome).toMatchObject({ state: 'conflict', usedBy: { person: 'Ada Birch', rowLabel: block.rows[2]!.label } });
    expect(outcome!.reason).toMatch(/in row .* at \d\d:\d\d by Ada Birch/);
    expect((await close(manager, second))[0]!.state).toBe('conflict');
    expect((await list()).map(({ place }) => place).sort()).toEqual(['clash', 'expected']);
  });

  it('are refused outside a round of the crew, outside any season, and with rows of another block', async () => {
    const other = await makeStripBlock(estate, { name: 'Elsewhere', x: 400 });
    expect((await close(crew, bag()))[0]!.reason).toMatch(/round/);
    const [late, wrong] = await close(agronomist, bag({ closedAt: '1999-09-01T07:41:00Z' }), bag({ vines: [{ rowId: other.rows[0]!.id, ordinal: 1 }] }));
    expect(late!.reason).toMatch(/1999-09-01/);
    expect(wrong!.reason).toMatch(/row/);
  });

  it('are refused with a vine that its row does not have, by row and last vine, and the rest of the batch is kept', async () => {
    const { label, pieces, vineCount } = await BlockRow.query().findById(block.rows[2]!.id).throwIfNotFound();
    const last = pieces[0]!.firstVine + vineCount - 1;
    const [none, there] = await close(agronomist, bag({ vines: vinesOf(2, last, last + 1) }), bag({ code: labelCode(1001), vines: vinesOf(2, last) }));
    expect(none).toMatchObject({ state: 'refused', code: 'noSuchVine', facts: { row: label, first: 1, last: vineCount } });
    expect(there!.state).toBe('received');
    expect(await Bag.query().resultSize()).toBe(1);
  });

  it('of another estate are not found', async () => {
    const stranger = await app.as((await app.addEstate()).ownerEmail);
    expect((await stranger.post(`${base()}/bags`, { bags: [bag()] })).status).toBe(404);
  });
});

describe('the receiving list', () => {
  it('tells expected, here, missing with the last holder, and extra', async () => {
    const [one, two, three] = [bag(), bag({ code: labelCode(1001), vines: vinesOf(40, 2) }), bag({ code: labelCode(1002) })];
    await close(agronomist, one, two, three);
    const answer = await lab.post(`${base()}/bags/received`, { codes: [one.code, labelCode(5000)] });
    expect(answer.body.outcomes).toEqual([{ code: one.code, state: 'here' }, { code: labelCode(5000), state: 'extra' }]);
    await lab.post(`${base()}/bags/missing`, { bagIds: [two.id] });
    const lines = await list();
    expect(Object.fromEntries(lines.map(({ code, place }) => [code, place]))).toEqual({ [one.code]: 'here', [two.code]: 'missing', [three.code]: 'expected', [labelCode(5000)]: 'extra' });
    expect(lines.find(({ id }) => id === two.id)).toMatchObject({ holder: 'Ada Birch', zone: 3 });
    expect((await lab.post(`${base()}/bags/received`, { codes: [one.code] })).body.outcomes[0].state).toBe('hereBefore');
  });

  it('calls the rest missing but for one that somebody took in meanwhile, and takes that back', async () => {
    const [one, two, three] = [bag(), bag({ code: labelCode(1001) }), bag({ code: labelCode(1002) })];
    await close(agronomist, one, two, three);
    await lab.post(`${base()}/bags/received`, { codes: [two.code] });
    const all = [one, two, three].map(({ id }) => id);
    const called = (await lab.post(`${base()}/bags/missing`, { bagIds: all, ifExpected: true })).body.bagIds as string[];
    expect([...called].sort()).toEqual([one.id, three.id].sort());
    expect(Object.fromEntries((await list()).map(({ id, place }) => [id, place]))).toEqual({ [one.id]: 'missing', [two.id]: 'here', [three.id]: 'missing' });
    // One was found before the mistake was seen.
    await lab.post(`${base()}/bags/received`, { codes: [three.code] });
    expect((await lab.post(`${base()}/bags/expected`, { bagIds: called })).body.bagIds).toEqual([one.id]);
    expect(Object.fromEntries((await list()).map(({ id, place }) => [id, place]))).toEqual({ [one.id]: 'expected', [two.id]: 'here', [three.id]: 'here' });
    expect(await AuditEntry.query().where({ estateId: estate.estateId, action: 'bags.expect' }).resultSize()).toBe(1);
    expect((await manager.post(`${base()}/bags/expected`, { bagIds: called })).status).toBe(403);
    expect((await lab.post(`${base()}/bags/expected`, { bagIds: [randomUUID()] })).status).toBe(404);
  });

  it('is seen by the manager, who may put labels right but takes nothing in', async () => {
    const [west, east] = [bag(), bag({ code: labelCode(1001), vines: vinesOf(44, 2) })];
    await close(agronomist, west, east);
    expect((await manager.get(`${base()}/lab`)).status).toBe(200);
    expect((await list(manager)).map(({ holder }) => holder)).toEqual(['Ada Birch', 'Ada Birch']);
    expect((await manager.post(`${base()}/bags/received`, { codes: [west.code] })).status).toBe(403);
    expect((await manager.post(`${base()}/bags/swap`, { codes: [west.code, east.code], reason: 'Labels mixed at the cart.' })).status).toBe(204);
    expect((await list()).find(({ id }) => id === west.id)!.code).toBe(east.code);
    expect((await crew.get(`${base()}/lab`)).status).toBe(403);
  });

  it('gives an extra bag its origin with its figures when the phone is heard of at last', async () => {
    await lab.post(`${base()}/bags/received`, { codes: [labelCode(1000)] });
    const [extra] = await list();
    await Reading.query().insert({ id: randomUUID(), estateId: estate.estateId, seasonId: block.seasonId, bagId: extra!.id, measureCode: 'brix', value: 22.1, unit: '°Brix', takenAt: new Date(), source: 'lab' });
    const sent = bag();
    expect((await close(agronomist, sent))[0]!.state).toBe('received');
    expect((await list()).find(({ place }) => place === 'here')).toMatchObject({ id: sent.id, results: 1, zone: 1 });
    expect(await Reading.query().first()).toMatchObject({ bagId: sent.id, blockId: block.blockId, takenAt: new Date('2026-09-01T07:41:00Z') });
  });
});

describe('two labels exchanged', () => {
  it('change places in one step: figures and receipt follow the label, vines stay', async () => {
    const [west, east] = [bag(), bag({ code: labelCode(1001), vines: vinesOf(44, 2) })];
    await close(agronomist, west, east);
    await lab.post(`${base()}/bags/received`, { codes: [west.code, east.code] });
    await brix(west.id, 20);
    await brix(east.id, 25);
    expect((await lab.post(`${base()}/bags/swap`, { codes: [west.code, east.code], reason: 'Labels mixed up in the box' })).status).toBe(204);
    const lines = await list();
    expect(lines.find(({ code }) => code === west.code)).toMatchObject({ id: east.id, zone: 3 });
    expect(await Reading.query().findOne({ bagId: east.id })).toMatchObject({ value: 20 });
    expect(await Reading.query().findOne({ bagId: west.id })).toMatchObject({ value: 25 });
    expect(await AuditEntry.query().findOne({ estateId: estate.estateId, action: 'bags.swap' })).toMatchObject({ reason: 'Labels mixed up in the box' });
    expect((await close(agronomist, west))[0]!.state).toBe('received');
  });

  it('are told to those who closed, sent and measured them, and not to who exchanged them', async () => {
    const [west, east] = [bag({ code: labelCode(1003) }), bag({ code: labelCode(1004), vines: vinesOf(44, 2) })];
    await close(agronomist, west);
    await close(manager, east);
    await lab.post(`${base()}/bags/received`, { codes: [west.code, east.code] });
    await brix(west.id, 20);
    await lab.post(`${base()}/bags/swap`, { codes: [west.code, east.code], reason: 'Labels mixed up in the box' });
    const mails = await MailMessage.query().where({ kind: 'bagSwap' }).orderBy('toName');
    expect(mails.map(({ toName }) => toName)).toEqual(['Ada Birch', 'Mara Holt']);
    expect(mails[0]!.subject).toContain(spellLabelCode(west.code));
    for (const words of ['Wim Roe', 'Labels mixed up in the box', 'changed places: 1']) expect(mails[0]!.bodyText).toContain(words);
  });

  it('give a missing bag the label that lies on the bench', async () => {
    const lost = bag();
    await close(agronomist, lost);
    await lab.post(`${base()}/bags/received`, { codes: [labelCode(5000)] });
    await lab.post(`${base()}/bags/missing`, { bagIds: [lost.id] });
    await lab.post(`${base()}/bags/swap`, { codes: [lost.code, labelCode(5000)], reason: 'Label fell off, a new one was tied on' });
    expect((await list()).filter(({ place }) => place !== 'void')).toMatchObject([{ id: lost.id, code: labelCode(5000), place: 'here' }]);
  });
});

describe('a label on two bags', () => {
  const twice = async () => {
    const [first, later] = [bag(), bag({ vines: vinesOf(30, 2) })];
    await close(agronomist, first);
    await close(manager, later);
    return { first, later };
  };

  it('is one bag: the first takes in the vines of the later', async () => {
    const { first, later } = await twice();
    expect((await lab.post(`${base()}/bags/${later.id}/settle`, { choice: 'same', reason: 'Both closed the same bag' })).status).toBe(204);
    expect((await Bag.query().findById(first.id))!.vines).toHaveLength(3);
    expect((await lab.post(`${base()}/bags/${later.id}/settle`, { choice: 'same', reason: 'again' })).status).toBe(409);
  });

  it('is two bags: the later takes a free label, not one that is taken', async () => {
    const { later } = await twice();
    await close(agronomist, bag({ code: labelCode(1001) }));
    expect((await lab.post(`${base()}/bags/${later.id}/settle`, { choice: 'relabel', newCode: labelCode(1001), reason: 'Tied on anew' })).status).toBe(409);
    expect((await lab.post(`${base()}/bags/${later.id}/settle`, { choice: 'relabel', newCode: labelCode(1002), reason: 'Tied on anew' })).status).toBe(204);
    expect((await list()).find(({ code }) => code === labelCode(1002))).toMatchObject({ id: later.id, place: 'expected' });
  });
});

describe('figures of bags', () => {
  it('count for the zone that most vines of the bag are in, one place a bag, repeats averaged', async () => {
    const [one, two] = [bag({ vines: [...vinesOf(2, 1, 2), ...vinesOf(44, 1)] }), bag({ code: labelCode(1001), vines: vinesOf(3, 8) })];
    await close(agronomist, one, two);
    for (const [id, value] of [[one.id, 22], [one.id, 23], [two.id, 20.5]] as const) await brix(id, value);
    const { body } = await agronomist.get(`${base()}/zonings/${block.zoningId}/results?season=${block.seasonId}`);
    expect(body.values).toMatchObject([{ zone: 1, measure: 'brix', n: 2, mean: 21.5, provisional: 3, visit: '2026-09-01' }]);
  });
});

describe('a label on two bags, for whoever judges conflicts', () => {
  const conflicts = async (agent: Agent) => (await agent.get(`${base()}/conflicts`)).body as ConflictList;

  it('is a card with both closings, which the manager settles and crew of neither bag do not see', async () => {
    const [first, later] = [bag(), bag({ vines: vinesOf(30, 2) })];
    await close(agronomist, first);
    await close(manager, later);
    const { bags, open } = await conflicts(manager);
    expect(open).toBe(1);
    expect(bags).toMatchObject([{ maySettle: true, first: { id: first.id, holder: 'Ada Birch', rowLabel: block.rows[2]!.label }, later: { id: later.id, holder: 'Mara Holt' } }]);
    expect((await conflicts(crew)).bags).toEqual([]);
    expect((await manager.get(`${base()}/today`)).body.lines).toContainEqual({ kind: 'labelTwice', total: 1 });
    expect((await manager.post(`${base()}/bags/${later.id}/settle`, { choice: 'keepFirst', reason: 'Typed by mistake' })).status).toBe(204);
    expect(await conflicts(manager)).toMatchObject({ bags: [], open: 0 });
  });

  it('may stay with the later bag, which takes receipt and figures of the label; a third bag clashes with it then', async () => {
    const [first, later, third] = [bag(), bag({ vines: vinesOf(30, 2) }), bag({ vines: vinesOf(44, 2) })];
    await close(agronomist, first, later, third);
    await lab.post(`${base()}/bags/received`, { codes: [first.code] });
    await brix(first.id, 21);
    expect((await lab.post(`${base()}/bags/${later.id}/settle`, { choice: 'keepLater', reason: 'The first was thrown away' })).status).toBe(204);
    expect(await Bag.query().findById(first.id)).toMatchObject({ state: 'void' });
    expect(await Bag.query().findById(later.id)).toMatchObject({ state: 'received', clashesWith: null });
    expect(await Reading.query().first()).toMatchObject({ bagId: later.id, value: 21, excludedReason: null });
    expect((await conflicts(lab)).bags).toMatchObject([{ first: { id: later.id }, later: { id: third.id } }]);
  });

  it.each(['same', 'keepFirst', 'keepLater', 'relabel'] as const)('%s is taken back: label, receipt, figures, vines and readings are as before, and both deeds stand in the history', async (choice) => {
    const [first, later, third] = [bag(), bag({ vines: vinesOf(30, 2) }), bag({ vines: vinesOf(44, 2) })];
    await close(agronomist, first, later, third);
    await lab.post(`${base()}/bags/received`, { codes: [first.code, labelCode(1002)] });
    await brix(first.id, 21);
    await Reading.query().insert({ id: randomUUID(), estateId: estate.estateId, seasonId: block.seasonId, blockId: block.blockId, bagId: later.id, measureCode: 'rot', value: 3, unit: '%', takenAt: new Date('2026-09-01T07:41:00Z'), source: 'field', state: 'checked' });
    const all = async () => [(await Bag.query().orderBy('id')).map(({ createdAt: _, ...rest }) => rest), (await Reading.query().orderBy('value')).map(({ bagId, takenAt, excludedReason }) => ({ bagId, takenAt, excludedReason }))];
    const before = await all();
    expect((await manager.post(`${base()}/bags/${later.id}/reopen`)).status).toBe(409);
    expect((await lab.post(`${base()}/bags/${later.id}/settle`, { choice, newCode: choice === 'relabel' ? labelCode(1002) : null, reason: 'Looked at it' })).status).toBe(204);
    expect(await all()).not.toEqual(before);
    const settled = async () => (await conflicts(manager)).settledBags.filter(({ bagId }) => bagId === later.id);
    expect(await settled()).toMatchObject([{ bagId: later.id, code: first.code, choice, settledBy: 'Wim Roe', reason: 'Looked at it', mayReopen: true }]);
    expect((await conflicts(crew)).settledBags).toEqual([]);
    expect((await crew.post(`${base()}/bags/${later.id}/reopen`)).status).toBe(403);
    expect((await manager.post(`${base()}/bags/${later.id}/reopen`)).status).toBe(204);
    expect(await all()).toEqual(before);
    expect(await settled()).toEqual([]);
    expect((await AuditEntry.query().where({ estateId: estate.estateId, subjectId: later.id }).whereIn('action', ['bags.settle', 'bags.reopen']).orderBy('id')).map(({ action }) => action)).toEqual(['bags.settle', 'bags.reopen']);
  });

  it('is not taken back over a label that was exchanged since, nor over figures under a new one', async () => {
    const [first, later, other] = [bag(), bag({ vines: vinesOf(30, 2) }), bag({ code: labelCode(1001), vines: vinesOf(3, 1) })];
    await close(agronomist, first, later, other);
    await lab.post(`${base()}/bags/${later.id}/settle`, { choice: 'relabel', newCode: labelCode(1003), reason: 'Tied on anew' });
    await brix(later.id, 20);
    expect((await manager.post(`${base()}/bags/${later.id}/reopen`)).body.detail).toMatch(/changed since.*exchanging/);
    await Reading.query().delete();
    await lab.post(`${base()}/bags/swap`, { codes: [first.code, other.code], reason: 'Changed places' });
    expect((await manager.post(`${base()}/bags/${later.id}/reopen`)).status).toBe(409);
  });
});
