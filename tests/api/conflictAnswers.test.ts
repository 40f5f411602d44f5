import { afterAll, beforeAll, beforeEach, describe, expect, it } from 'vitest';
import { loadBlockVines, zonesOfVines } from '../../server/ground/blockVines.ts';
import { zonedReadings } from '../../server/ground/zonedReadings.ts';
import { AuditEntry } from '../../server/models/AuditEntry.ts';
import { relabelBlockRows } from '../../server/models/BlockRow.ts';
import { Reading } from '../../server/models/Reading.ts';
import { Zoning } from '../../server/models/Zoning.ts';
import type { ConflictList } from '../../shared/contracts/conflicts.ts';
import type { BatchAnswer } from '../../shared/contracts/readings.ts';
import { makeFieldRound, type FieldRoundMade } from './support/makeFieldRound.ts';
import { startTestApp, type TestApp } from './support/testApp.ts';

let app: TestApp;
let made: FieldRoundMade;

beforeAll(async () => {
  app = await startTestApp();
  made = await makeFieldRound(app, { vines: 12, crew: 2 });
}, 60_000);
afterAll(() => app.close());
beforeEach(() => app.knex.raw('truncate readings, reading_conflicts cascade'));

type Who = number | 'manager';
const [ana, ben] = [0, 1];
const base = () => `/api/estates/${made.estateId}`;
const agentOf = (who: Who) => (who === 'manager' ? made.manager : made.crew[who]!.agent);
const send = async (who: Who, readings: object[]) => ((await agentOf(who).post(`${base()}/readings`, { readings })).body as BatchAnswer).outcomes.map(({ state }) => state);
const cards = async (who: Who = 'manager') => (await agentOf(who).get(`${base()}/conflicts`)).body as ConflictList;
const settle = async (id: string, body: object, who: Who = 'manager') => (await agentOf(who).post(`${base()}/conflicts/${id}/settle`, body)).status;
const reopen = async (id: string, who: Who = 'manager') => (await agentOf(who).post(`${base()}/conflicts/${id}/reopen`, {})).status;
/** What counts, as "vine value", by the vine that it counts for. */
const counted = async (until?: Date) => {
  const ground = await loadBlockVines(made.estateId, made.blockId);
  const zoneOf = zonesOfVines(ground, await Zoning.query().findById(made.zoningId).throwIfNotFound());
  const read = await zonedReadings(made.estateId, { ground, zoneOf, ...(until ? { until } : {}) });
  return read.filter(({ excludedReason }) => excludedReason === null).map(({ vineKey, value }) => `${vineKey} ${value}`).sort();
};

describe('a reading that was corrected', () => {
  it('stands on its card as it is now, and is left out with its correction', async () => {
    const [a, b] = [made.reading(0, { value: 21 }), made.reading(0, { value: 26 })];
    await send(ana, [a]);
    await send(ben, [b]);
    const better = made.reading(0, { value: 23, supersedes: b.id });
    await send(ben, [better]);
    const [card] = (await cards()).items;
    expect(card!.readings.map(({ value, isCorrected }) => [value, isCorrected])).toEqual([[21, false], [23, true]]);
    expect(await settle(card!.id, { choice: 'keepOne', keptReadingId: a.id })).toBe(204);
    expect((await counted()).map((each) => each.split(' ')[1])).toEqual(['21']);
    expect(await Reading.query().resultSize()).toBe(3);
  });

  it('after it was left out opens a card again, and counts beside nothing silently', async () => {
    const [a, b] = [made.reading(0, { value: 21 }), made.reading(0, { value: 26 })];
    await send(ana, [a]);
    await send(ben, [b]);
    await settle((await cards()).items[0]!.id, { choice: 'keepOne', keptReadingId: a.id });
    expect(await send(ben, [made.reading(0, { value: 22, supersedes: b.id })])).toEqual(['conflict']);
    const { items, open } = await cards();
    expect(open).toBe(1);
    expect(items[0]!.readings.map(({ value }) => value).sort()).toEqual([21, 22]);
  });
});

describe('an answer given by mistake', () => {
  it.each(['keepOne', 'repeat', 'bothReal'])('%s is taken back, with both deeds in the history', async (choice) => {
    const [a, b] = [made.reading(0, { value: 21 }), made.reading(0, { value: 26 })];
    await send(ana, [a]);
    await send(ben, [b]);
    const before = await counted();
    const [card] = (await cards()).items;
    expect(await reopen(card!.id)).toBe(409);
    expect(await settle(card!.id, { choice, keptReadingId: choice === 'keepOne' ? b.id : null })).toBe(204);
    expect((await cards()).items[0]).toMatchObject({ state: 'settled', mayReopen: true });
    expect((await cards(ana)).items[0]).toMatchObject({ mayReopen: false });
    expect(await reopen(card!.id, ana)).toBe(403);
    expect(await reopen(card!.id)).toBe(204);
    expect(await counted()).toEqual(before);
    expect((await Reading.query()).flatMap(({ flags }) => flags)).toEqual([]);
    expect((await cards()).items[0]).toMatchObject({ state: 'open', choice: null, maySettle: true });
    const vine = { row: made.targets[0]!.rowLabel, vine: made.targets[0]!.vineNumber };
    const history = await AuditEntry.query().where({ subjectId: card!.id }).orderBy('id');
    expect(history).toMatchObject([{ action: 'conflicts.settle', subjectName: card!.blockName, after: { at: vine } }, { action: 'conflicts.reopen', subjectName: card!.blockName, after: { at: vine } }]);
    expect(await settle(card!.id, { choice: 'repeat' })).toBe(204);
  });

  it('leaves alone what somebody left out for a reason of their own', async () => {
    const [a, b] = [made.reading(0, { value: 21 }), made.reading(0, { value: 26 })];
    await send(ana, [a]);
    await send(ben, [b]);
    await Reading.query().findById(b.id).patch({ excludedReason: 'Wrong vine' });
    const [card] = (await cards()).items;
    await settle(card!.id, { choice: 'keepOne', keptReadingId: a.id });
    await reopen(card!.id);
    expect(await Reading.query().findById(b.id)).toMatchObject({ excludedReason: 'Wrong vine' });
  });

  it('gives moved readings back to the vines on which they were sent', async () => {
    const [one, other] = [made.targets[0]!, made.targets.find(({ rowId }) => rowId !== made.targets[0]!.rowId)!];
    const swap = (a: string, b: string) => relabelBlockRows(app.knex, made.estateId, [{ rowId: one.rowId, label: a, labelWas: b }, { rowId: other.rowId, label: b, labelWas: a }]);
    await swap(other.rowLabel, one.rowLabel);
    try {
      await send(ana, [made.reading(0, { seenAs: { row: one.rowLabel, vine: one.vineNumber } })]);
      const before = await counted();
      const [card] = (await cards()).items;
      await settle(card!.id, { choice: 'moved' });
      expect(await counted()).not.toEqual(before);
      expect(await reopen(card!.id)).toBe(204);
      expect(await counted()).toEqual(before);
      expect(await Reading.query().resultSize()).toBe(3);
    } finally {
      await swap(one.rowLabel, other.rowLabel);
    }
  });
});

it('a day before the answer counts what counted then', async () => {
  const [a, b] = [made.reading(0, { value: 21 }), made.reading(0, { value: 26 })];
  await send(ana, [a]);
  await send(ben, [b]);
  const open = new Date();
  const [card] = (await cards()).items;
  await settle(card!.id, { choice: 'keepOne', keptReadingId: b.id });
  const settled = new Date();
  await reopen(card!.id);
  expect(await counted(open)).toHaveLength(2);
  expect(await counted(settled)).toHaveLength(1);
  expect(await counted()).toHaveLength(2);
});
