import { randomUUID } from 'node:crypto';
import { afterAll, beforeAll, beforeEach, describe, expect, it } from 'vitest';
import { loadBlockVines, zonesOfVines } from '../../server/ground/blockVines.ts';
import { zonedReadings } from '../../server/ground/zonedReadings.ts';
import { AuditEntry } from '../../server/models/AuditEntry.ts';
import { BlockRow } from '../../server/models/BlockRow.ts';
import { Estate } from '../../server/models/Estate.ts';
import { Membership } from '../../server/models/Membership.ts';
import { relabelBlockRows } from '../../server/models/BlockRow.ts';
import { Reading } from '../../server/models/Reading.ts';
import { Season } from '../../server/models/Season.ts';
import { Vine } from '../../server/models/Vine.ts';
import { VineFindingRecord } from '../../server/models/VineFindingRecord.ts';
import { Zoning } from '../../server/models/Zoning.ts';
import type { ConflictList } from '../../shared/contracts/conflicts.ts';
import type { BatchAnswer } from '../../shared/contracts/readings.ts';
import type { FieldRound } from '../../shared/contracts/rounds.ts';
import { makeFieldRound, type FieldRoundMade } from './support/makeFieldRound.ts';
import { startTestApp, type TestApp } from './support/testApp.ts';

let app: TestApp;
let made: FieldRoundMade;

beforeAll(async () => {
  app = await startTestApp();
  made = await makeFieldRound(app, { vines: 12, crew: 2 });
}, 60_000);
afterAll(() => app.close());
beforeEach(async () => {
  await app.knex.raw('truncate readings, reading_conflicts, vine_findings, vines cascade');
  await Zoning.query().where({ id: made.zoningId }).patch({ state: 'live' });
});

const base = () => `/api/estates/${made.estateId}`;
const [ana, ben] = [0, 1];
const send = async (who: number | 'manager', body: object) => (await (who === 'manager' ? made.manager : made.crew[who]!.agent).post(`${base()}/readings`, body)).body as BatchAnswer;
const conflicts = async (who: number | 'manager' = 'manager') => (await (who === 'manager' ? made.manager : made.crew[who]!.agent).get(`${base()}/conflicts`)).body as ConflictList;
const settle = (who: number | 'manager', id: string, body: object) => (who === 'manager' ? made.manager : made.crew[who]!.agent).post(`${base()}/conflicts/${id}/settle`, body);
const counted = async () => {
  const ground = await loadBlockVines(made.estateId, made.blockId);
  const zoning = await Zoning.query().findById(made.zoningId).throwIfNotFound();
  return (await zonedReadings(made.estateId, { ground, zoneOf: zonesOfVines(ground, zoning) })).filter(({ excludedReason }) => excludedReason === null);
};

describe('two records of one thing', () => {
  it('of one vine show who, when and what, and the manager keeps one', async () => {
    const [a, b] = [made.reading(0, { value: 21 }), made.reading(0, { value: 26 })];
    await send(ana, { readings: [a] });
    expect((await send(ben, { readings: [b] })).outcomes[0]!.state).toBe('conflict');
    const { items: [card] } = await conflicts();
    expect(card).toMatchObject({ kind: 'sameVine', state: 'open', blockName: made.blockName, maySettle: true });
    expect(card!.readings.map(({ who, value }) => [who, value])).toEqual([[made.crew[ana]!.name, 21], [made.crew[ben]!.name, 26]]);
    expect((await settle('manager', card!.id, { choice: 'keepOne', keptReadingId: b.id })).status).toBe(204);
    expect((await counted()).map(({ id }) => id)).toEqual([b.id]);
    expect(await Reading.query().resultSize()).toBe(2);
    expect(await AuditEntry.query().where({ action: 'conflicts.settle', subjectId: card!.id }).resultSize()).toBe(1);
    expect((await settle('manager', card!.id, { choice: 'repeat' })).status).toBe(409);
  });

  it('of one person, where one corrects the other, reach the phone as the correction alone', async () => {
    const first = made.reading(0, { value: 12 });
    await send(ana, { readings: [first] });
    await send(ana, { readings: [made.reading(0, { value: 21, supersedes: first.id })] });
    const round = (await made.crew[ana]!.agent.get(`${base()}/rounds/${made.roundId}`)).body as FieldRound;
    expect(round.received.map(({ targetId, value }) => [targetId, value])).toEqual([[made.targets[0]!.id, 21]]);
    expect(round.readAsks).toEqual([{ targetId: made.targets[0]!.id, measureCode: 'clusterCount' }]);
  });

  it('count as one vine when they are repeats, and as two when both are real', async () => {
    for (const choice of ['repeat', 'bothReal']) {
      await app.knex.raw('truncate readings, reading_conflicts cascade');
      await send(ana, { readings: [made.reading(0)] });
      await send(ben, { readings: [made.reading(0, { value: 30 })] });
      const { items: [card] } = await conflicts();
      expect((await settle('manager', card!.id, { choice })).status).toBe(204);
      expect(new Set((await counted()).map(({ vineKey }) => vineKey)).size).toBe(choice === 'repeat' ? 1 : 2);
    }
  });

  it('of a target and its reserve are one card, which one vine read twice cannot settle', async () => {
    await send(ana, { readings: [made.reading(3)] });
    await send(ben, { readings: [made.reading(3, { rowId: made.targets[3]!.reserve.rowId, ordinal: made.targets[3]!.reserve.ordinal, flags: ['reserve'] })] });
    const { items } = await conflicts();
    expect(items.map(({ kind }) => kind)).toEqual(['sameTarget']);
    expect((await settle('manager', items[0]!.id, { choice: 'repeat' })).body.code).toBe('noSuchAnswer');
    expect((await settle('manager', items[0]!.id, { choice: 'bothReal' })).status).toBe(204);
    expect(await counted()).toHaveLength(2);
  });

  it('are found when two phones send in the same moment', async () => {
    const pairs = Array.from({ length: 6 }, (_, vine) => [made.reading(vine), made.reading(vine, { value: 40 })] as const);
    await Promise.all(pairs.flatMap(([a, b]) => [send(ana, { readings: [a] }), send(ben, { readings: [b] })]));
    expect(await Reading.query().resultSize()).toBe(12);
    expect((await conflicts()).open).toBe(6);
  });

  it('are shown to crew where a reading of theirs is in it, and settled by them only where all are', async () => {
    await send(ana, { readings: [made.reading(0)] });
    await send(ben, { readings: [made.reading(0, { value: 9 })] });
    await send(ana, { readings: [made.reading(1), made.reading(1, { value: 11 })] });
    const own = await conflicts(ana);
    expect(own.items.map(({ maySettle }) => maySettle).sort()).toEqual([false, true]);
    expect((await conflicts(ben)).items.map(({ maySettle }) => maySettle)).toEqual([false]);
    const [theirs, mine] = [own.items.find(({ maySettle }) => !maySettle)!, own.items.find(({ maySettle }) => maySettle)!];
    expect((await settle(ana, theirs.id, { choice: 'bothReal' })).status).toBe(403);
    expect((await settle(ana, mine.id, { choice: 'keepOne', keptReadingId: mine.readingIds[0] })).status).toBe(204);
  });
});

describe('what changed while the phone was away', () => {
  it('zones that were replaced make one card a round, and the readings can be left out', async () => {
    await Zoning.query().where({ id: made.zoningId }).patch({ state: 'retired' });
    await send(ana, { readings: [made.reading(0), made.reading(1)] });
    await send(ana, { readings: [made.reading(2)] });
    const { items } = await conflicts();
    expect(items.map(({ kind, readingIds }) => [kind, readingIds.length])).toEqual([['oldZones', 3]]);
    await settle('manager', items[0]!.id, { choice: 'leaveOut' });
    expect(await counted()).toEqual([]);
    expect(await Reading.query().resultSize()).toBe(3);
  });

  it('a row that got another number shows both names, and the readings can move to the vines of that name', async () => {
    const [one, other] = [made.targets[0]!, made.targets.find(({ rowId }) => rowId !== made.targets[0]!.rowId)!];
    const reading = made.reading(0, { seenAs: { row: one.rowLabel, vine: one.vineNumber } });
    const swap = (a: string, b: string) => relabelBlockRows(app.knex, made.estateId, [{ rowId: one.rowId, label: a, labelWas: b }, { rowId: other.rowId, label: b, labelWas: a }]);
    await swap(other.rowLabel, one.rowLabel);
    await send(ana, { readings: [reading] });
    const { items: [card] } = await conflicts();
    expect(card).toMatchObject({ kind: 'renumbered', readings: [{ seenAs: { row: one.rowLabel }, rowLabel: other.rowLabel }] });
    expect((await settle('manager', card!.id, { choice: 'moved' })).status).toBe(204);
    const [counter] = await Reading.query().where({ supersedes: reading.id });
    expect(counter!.rowId).toBe(other.rowId);
    expect((await counted()).map(({ id }) => id)).toEqual([counter!.id]);
    await swap(one.rowLabel, other.rowLabel);
  });
});

describe('a paper sheet', () => {
  const paper = (vine: number, over: object = {}) => made.reading(vine, { source: 'paper', readBy: made.crew[ana]!.id, ...over });

  it('is typed in the name of who walked, with the typist beside; crew type for those of their round', async () => {
    await send('manager', { readings: [paper(0)], findings: [{ ...made.finding(1), readBy: made.crew[ana]!.id }] });
    const managerId = (await Reading.query().first().throwIfNotFound()).typedBy;
    expect(await Reading.query().first()).toMatchObject({ personId: made.crew[ana]!.id, source: 'paper' });
    expect(await VineFindingRecord.query().first()).toMatchObject({ personId: made.crew[ana]!.id, typedBy: managerId });
    expect((await send(ben, { readings: [paper(2)] })).outcomes[0]!.state).toBe('received');
    expect((await send(ben, { readings: [paper(3, { readBy: made.managerId })] })).outcomes[0]!.state).toBe('refused');
  });

  it('of somebody whose access has ended, or what their phone still held, is brought by those of the round and the office', async () => {
    const { id } = made.crew[ana]!;
    const access = Membership.query().where({ estateId: made.estateId, personId: id });
    await access.clone().patch({ endedAt: new Date() });
    try {
      expect((await made.crew[ana]!.agent.post(`${base()}/readings`, { readings: [made.reading(4)] })).status).toBeGreaterThanOrEqual(401);
      const held = made.reading(4, { readBy: id, value: 28 });
      for (const who of [ben, 'manager', ben] as const) expect((await send(who, { readings: [held] })).outcomes[0]!.state).toBe('received');
      expect(await Reading.query()).toMatchObject([{ personId: id, typedBy: made.crew[ben]!.id, value: 28 }]);
      expect((await send('manager', { readings: [made.reading(5, { readBy: id })] })).outcomes[0]!.state).toBe('received');
    } finally {
      await access.clone().patch({ endedAt: null });
    }
  });

  it('shows the walk of who walked with what their phone had sent, to those who may type it', async () => {
    await send(ana, { readings: [made.reading(0, { value: 21 })] });
    const walk = await made.manager.get(`${base()}/rounds/${made.roundId}?person=${made.crew[ana]!.id}`);
    expect(walk.body).toMatchObject({ received: [{ targetId: made.targets[0]!.id, value: 21 }], others: [{ name: made.crew[ben]!.name }] });
    // Whoever takes over learns what was read, and not the value.
    const { body: seen } = await made.crew[ben]!.agent.get(`${base()}/rounds/${made.roundId}`);
    expect(seen.readAsks).toEqual([{ targetId: made.targets[0]!.id, measureCode: 'clusterCount' }]);
    expect(seen.received).toEqual([]);
    expect((await made.crew[ben]!.agent.get(`${base()}/rounds/${made.roundId}?person=${made.crew[ana]!.id}`)).status).toBe(403);
  });

  it('does not double what the phone had sent, and says where it differs', async () => {
    await send(ana, { readings: [made.reading(0, { value: 21 }), made.reading(1, { value: 22 })] });
    const typed = { readings: [paper(0, { value: 21 }), paper(1, { value: 27 }), paper(2, { value: 24 })] };
    expect((await send('manager', typed)).outcomes.map(({ state }) => state)).toEqual(['received', 'conflict', 'received']);
    expect((await send('manager', typed)).outcomes.map(({ state }) => state)).toEqual(['received', 'conflict', 'received']);
    expect(await Reading.query().resultSize()).toBe(4);
    expect((await conflicts()).open).toBe(1);
  });

  it('gives way to the phone that is found later, without a card where both say the same', async () => {
    await send('manager', { readings: [paper(0, { value: 21 }), paper(1, { value: 22 })] });
    const late = { readings: [made.reading(0, { value: 21 }), made.reading(1, { value: 25 })] };
    for (let i = 0; i < 3; i++) expect((await send(ana, late)).outcomes.map(({ state }) => state)).toEqual(['received', 'conflict']);
    expect((await counted()).map(({ value }) => value).sort()).toEqual([21, 22, 25]);
    expect((await conflicts()).open).toBe(1);
  });
});

describe('a finding', () => {
  it('is stored once however often it is sent, and does not come back after the manager decided', async () => {
    const finding = made.finding(4, 'missing');
    for (let i = 0; i < 3; i++) expect((await send(ana, { findings: [finding] })).findings[0]!.state).toBe('received');
    expect(await VineFindingRecord.query().resultSize()).toBe(1);
    expect(await Vine.query().first()).toMatchObject({ state: 'missing', proposed: true, notedBy: made.crew[ana]!.id });
    await Vine.query().delete();
    await send(ana, { findings: [finding] });
    expect(await Vine.query().resultSize()).toBe(0);
  });

  it('is taken back when the same person reads the vine afterwards, and by nobody else', async () => {
    await send(ana, { findings: [made.finding(2), made.finding(3)] });
    await send(ben, { readings: [made.reading(2, { takenAt: '2026-09-01T09:00:00Z' })] });
    expect(await Vine.query().resultSize()).toBe(2);
    await send(ana, { readings: [made.reading(3, { takenAt: '2026-09-01T09:00:00Z' })] });
    expect((await Vine.query()).map(({ ordinal }) => ordinal)).toEqual([made.targets[2]!.ordinal]);
    expect(await VineFindingRecord.query().resultSize()).toBe(2);
  });

  it('that cannot be read holds nothing back', async () => {
    const answer = await send(ana, { readings: [made.reading(0)], findings: [{ id: randomUUID(), state: 'gone' }, made.finding(1)] });
    expect([...answer.outcomes, ...answer.findings].map(({ state }) => state)).toEqual(['received', 'refused', 'received']);
  });
});

describe('a phone with a wrong clock', () => {
  it('is believed with a flag, even in a year that no season holds', async () => {
    await Season.query().insert({ estateId: made.estateId, name: 'To come', startsOn: '2026-12-01', endsOn: '2199-11-30', phases: {} });
    const reading = made.reading(0, { takenAt: '2019-01-01T10:00:00Z', deviceTime: '2019-01-01T10:30:00Z' });
    expect((await send(ana, { readings: [reading] })).outcomes[0]).toMatchObject({ state: 'received' });
    const stored = await Reading.query().first().throwIfNotFound();
    expect(stored.flags).toContain('clock');
    expect(stored.deviceTime!.toISOString()).toBe('2019-01-01T10:30:00.000Z');
    expect(stored.takenAt.toISOString()).toBe('2019-01-01T10:00:00.000Z');
  });
});

describe('a vine that its row does not have', () => {
  const row = () => BlockRow.query().findById(made.targets[0]!.rowId).throwIfNotFound();
  const beyond = async (by: number) => (await row()).pieces[0]!.firstVine + (await row()).vineCount - 1 + by;

  it('is refused by its row and last vine, whoever sends it, while one of the row that is no target is taken', async () => {
    const { vineCount, label } = await row();
    const [none, last] = [made.reading(0, { targetId: null, ordinal: await beyond(1) }), made.reading(0, { targetId: null, ordinal: await beyond(0) })];
    for (const [who, source] of [[ana, 'field'], ['manager', 'paper']] as const) {
      const { outcomes: [strange] } = await send(who, { readings: [{ ...none, source }] });
      expect(strange).toMatchObject({ state: 'refused', code: 'noSuchVine', facts: { row: label, last: vineCount } });
      expect(strange!.reason).toContain(`Row ${label} has vines 1 to ${vineCount}`);
    }
    const { findings, outcomes } = await send(ana, { readings: [last], findings: [{ ...made.finding(0), ordinal: await beyond(3) }] });
    expect(outcomes[0]!.state).toBe('received');
    expect(findings[0]).toMatchObject({ state: 'refused', code: 'noSuchVine' });
    expect(await Reading.query().resultSize()).toBe(1);
    expect(await Vine.query().resultSize()).toBe(0);
  });

  it('is kept where the round was sent for it: the row was shortened meanwhile', async () => {
    const { vineCount } = await row();
    const place = made.targets[0]!.ordinal - (await row()).pieces[0]!.firstVine;
    await BlockRow.query().findById(made.targets[0]!.rowId).patch({ vineCount: place });
    try {
      expect((await send(ana, { readings: [made.reading(0)] })).outcomes[0]!.state).toBe('received');
      expect((await send(ana, { readings: [made.reading(0, { targetId: null, ordinal: made.targets[0]!.ordinal + 2 })] })).outcomes[0]!.state).toBe('refused');
    } finally {
      await BlockRow.query().findById(made.targets[0]!.rowId).patch({ vineCount });
    }
  });
});

describe('midnight', () => {
  afterAll(() => Estate.query().findById(made.estateId).patch({ timeZone: 'Europe/Paris' }));

  it('is that of the estate: a reading belongs to the season of its own day, and one day has one reading of a vine', async () => {
    await Estate.query().findById(made.estateId).patch({ timeZone: 'Pacific/Auckland' });
    await Season.query().insert({ estateId: made.estateId, name: 'Far', startsOn: '2013-07-01', endsOn: '2014-06-30', phases: {} });
    // 30 June at Greenwich, 1 July at the estate.
    const first = made.reading(0, { takenAt: '2013-06-30T20:00:00Z', roundId: null, targetId: null });
    expect((await send('manager', { readings: [first] })).outcomes[0]!.state).toBe('received');
    const early = made.reading(1, { takenAt: '2013-06-30T11:00:00Z', roundId: null, targetId: null });
    expect((await send('manager', { readings: [early] })).outcomes[0]).toMatchObject({ state: 'refused', code: 'noSeason' });
    // The same day at the estate, the next at Greenwich.
    expect((await send('manager', { readings: [{ ...first, id: randomUUID(), value: 33, takenAt: '2013-07-01T09:00:00Z' }] })).outcomes[0]!.state).toBe('conflict');
    // The next day at the estate, the same at Greenwich.
    expect((await send('manager', { readings: [{ ...first, id: randomUUID(), value: 34, takenAt: '2013-07-01T13:00:00Z' }] })).outcomes[0]!.state).toBe('received');
  });
});
