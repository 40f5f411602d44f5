import { randomUUID } from 'node:crypto';
import { afterAll, beforeAll, describe, expect, it } from 'vitest';
import { EntryRestriction } from '../../server/models/EntryRestriction.ts';
import type { LotsBoard } from '../../shared/contracts/lots.ts';
import type { ResultsView } from '../../shared/contracts/results.ts';
import { makeZonedBlock, type ZonedBlock } from './support/makeZonedBlock.ts';
import { startTestApp, type Agent, type TestApp } from './support/testApp.ts';

let app: TestApp;
let estate: Awaited<ReturnType<TestApp['addEstate']>>;
let winemaker: Agent;
let one: ZonedBlock;
let two: ZonedBlock;

beforeAll(async () => {
  app = await startTestApp();
  estate = await app.addEstate('Lots test');
  const owner = { estateId: estate.estateId, personId: estate.ownerId };
  one = await makeZonedBlock(owner, { name: 'West Plot' });
  two = await makeZonedBlock(owner, { name: 'East Plot', west: 2.41 });
  winemaker = await app.as((await app.addPerson(estate.estateId, 'winemaker')).email);
  // Bag values of one zone, with mean 22.62 and sd 0.673; printed as a worked interval in most statistics texts.
  await read(one, 1, [22.1, 23.4, 21.8, 22.9, 23.0, 22.4, 21.6, 23.7, 22.5, 22.8]);
  await read(two, 2, [24.0, 24.4, 23.8]);
});
afterAll(() => app.close());

const base = () => `/api/estates/${estate.estateId}`;

async function read(block: ZonedBlock, zone: number, values: number[], measureCode = 'brix', unit = '°Brix'): Promise<void> {
  const vines = [...block.zoneOf.keys()].filter((vine) => block.zoneOf[vine] === zone);
  const readings = values.map((value, index) => {
    const vine = vines[100 + index * 37]!;
    return { id: randomUUID(), blockId: block.blockId, rowId: block.ground.stored[block.ground.vines.row[vine]!]!.id, ordinal: block.ground.vines.ordinal[vine], measureCode, value, unit, takenAt: '2026-09-01T08:00:00Z' };
  });
  const answer = await winemaker.post(`${base()}/readings`, { readings });
  expect(answer.body.outcomes.map((outcome: { state: string }) => outcome.state)).toEqual(values.map(() => 'received'));
}

const board = async (): Promise<LotsBoard> => (await winemaker.get(`${base()}/lots`)).body as LotsBoard;
const results = async (zoningId: string): Promise<ResultsView> => (await winemaker.get(`${base()}/zonings/${zoningId}/results`)).body as ResultsView;
const newLot = async (name: string): Promise<string> => (await winemaker.post(`${base()}/lots`, { name })).body.id as string;
const setParts = (lotId: string, version: number, parts: object[]) => winemaker.write('put', `${base()}/lots/${lotId}/parts`).set('if-match', `"${version}"`).send({ parts });

describe('results by zone', () => {
  it('prints mean, interval and n of a zone, with the finite population correction', async () => {
    const { values, zones } = await results(one.zoningId);
    const value = values.find((entry) => entry.zone === 1 && entry.measure === 'brix')!;
    // R 4.2.2: mean 22.62, sd 0.672970199, t(9) 2.262157163; the correction with N vines is sqrt(1 - 10/N).
    const correction = Math.sqrt(1 - 10 / zones[0]!.bearing);
    expect(value).toMatchObject({ n: 10, confidence: 0.95, margin: 0.5, enough: true, more: 0 });
    expect(value.mean).toBeCloseTo(22.62, 10);
    expect(value.sd).toBeCloseTo(0.672970199, 8);
    expect(value.halfWidth).toBeCloseTo(2.262157163 * 0.212811863 * correction, 6);
  });

  it('says how many more the margin needs, and that one zone has not been sampled', async () => {
    await read(one, 2, [20.1, 23.9, 22.0, 24.4]);
    const view = await results(one.zoningId);
    const value = view.values.find((entry) => entry.zone === 2)!;
    expect(value.enough).toBe(false);
    expect(value.more).toBeGreaterThan(10);
    expect((await results(two.zoningId)).block[0]!.zonesWithout).toEqual([1]);
  });
});

describe('a pick lot', () => {
  it('ties zones of two blocks and adds up area, tonnes and sugar', async () => {
    const lotId = await newLot('Shelf red');
    expect((await setParts(lotId, 1, [{ zoneId: one.zoneIds[0] }, { zoneId: two.zoneIds[1] }])).status).toBe(204);
    const { lots, zones } = await board();
    const lot = lots.find((entry) => entry.id === lotId)!;
    const [a, b] = [zones.find((zone) => zone.zoneId === one.zoneIds[0])!, zones.find((zone) => zone.zoneId === two.zoneIds[1])!];
    expect(lot.lines.map((line) => line.share)).toEqual([1, 1]);
    expect(lot.summary.areaHa).toBeCloseTo(a.areaHa + b.areaHa, 6);
    expect(lot.summary.tonnes!.value).toBeCloseTo(a.tonnes.value + b.tonnes.value, 6);
    // Nobody has counted or weighed clusters: tonnes are assumed, so zones weigh by their area, and that is said.
    expect(lot.summary.weighting).toBe('area');
    expect(lot.summary.brix!.value).toBeCloseTo((22.62 * a.areaHa + (72.2 / 3) * b.areaHa) / (a.areaHa + b.areaHa), 6);
    expect(lot.summary.unknown.map((entry) => entry.measure)).toEqual(['ph', 'ta']);
    expect(a.freeShare).toBe(0);
  });

  it('weighs its zones by tonnes once clusters are counted in all of them', async () => {
    const lotOf = async () => (await board()).lots.find(({ name }) => name === 'Shelf red')!;
    await read(one, 1, [30, 34, 26, 31], 'clusterCount', 'clusters');
    expect((await lotOf()).summary.weighting).toBe('area');
    await read(two, 2, [12, 15, 11, 14], 'clusterCount', 'clusters');
    const lot = await lotOf();
    const { zones } = await board();
    const [a, b] = [zones.find((zone) => zone.zoneId === one.zoneIds[0])!, zones.find((zone) => zone.zoneId === two.zoneIds[1])!];
    const weighted = (22.62 * a.tonnes.value + (72.2 / 3) * b.tonnes.value) / (a.tonnes.value + b.tonnes.value);
    expect(lot.summary.brix!.value).toBeCloseTo(weighted, 6);
    expect(lot.summary.weighting).toBe('tonnes');
    expect(lot.summary.alcohol!.middle).toBeCloseTo(0.59 * weighted, 6);
    expect(lot.summary.alcohol!.low).toBeLessThan(lot.summary.alcohol!.middle);
  });

  it('takes no vine that another lot has, and names that lot', async () => {
    const other = await newLot('Rosé');
    const answer = await setParts(other, 1, [{ zoneId: one.zoneIds[0] }]);
    expect(answer.status).toBe(409);
    expect(answer.body.detail).toMatch(/Shelf red/);
    expect((await board()).lots.find((lot) => lot.id === other)!.lines).toEqual([]);
    const twice = await setParts(other, 1, [{ zoneId: two.zoneIds[0] }, { zoneId: two.zoneIds[0] }]);
    expect([twice.status, twice.body.detail]).toEqual([422, expect.stringMatching(/A zone stands there twice/)]);
  });

  it('is kept from a vine twice by the database itself', async () => {
    const [run] = (await app.knex.raw('select * from lot_row_runs limit 1')).rows as Record<string, unknown>[];
    await expect(app.knex.raw('insert into lot_row_runs (estate_id, scenario_id, lot_part_id, row_id, vines) values (?, ?, ?, ?, ?)', [run!.estate_id, run!.scenario_id, run!.lot_part_id, run!.row_id, run!.vines] as string[])).rejects.toThrow(/lot_row_runs_no_vine_twice/);
  });

  it('takes part of a zone by rows, and the rest stays free', async () => {
    const lotId = await newLot('By rows');
    const rows = one.ground.stored.slice(0, 20).map((row) => row.id);
    expect((await setParts(lotId, 1, [{ zoneId: one.zoneIds[1], rowIds: rows }])).status).toBe(422);
    const eastern = one.ground.stored.slice(-20).map((row) => row.id);
    expect((await setParts(lotId, 1, [{ zoneId: one.zoneIds[1], rowIds: eastern }])).status).toBe(204);
    const { lots, zones } = await board();
    const share = lots.find((lot) => lot.id === lotId)!.lines[0]!.share;
    expect(share).toBeGreaterThan(0.3);
    expect(share).toBeLessThan(1);
    expect(zones.find((zone) => zone.zoneId === one.zoneIds[1])!.freeShare).toBeCloseTo(1 - share, 9);
  });

  it('refuses a change made on an old version', async () => {
    const lotId = await newLot('Old news');
    await setParts(lotId, 1, []);
    expect((await setParts(lotId, 1, [])).status).toBe(412);
    expect((await winemaker.put(`${base()}/lots/${lotId}/parts`, { parts: [] })).status).toBeGreaterThanOrEqual(412);
  });

  it('cannot be dated inside a pre-harvest interval', async () => {
    const lotId = (await board()).lots.find((lot) => lot.name === 'Shelf red')!.id;
    const version = () => board().then(({ lots }) => lots.find((lot) => lot.id === lotId)!.version);
    await EntryRestriction.query().insert({ estateId: estate.estateId, blockId: one.blockId, startsAt: new Date('2026-09-01'), endsAt: new Date('2026-09-02'), product: 'Copper', labelInterval: '21 days', noPickBefore: '2026-09-22', setBy: estate.ownerId });
    const change = async (pickOn: string) => winemaker.write('patch', `${base()}/lots/${lotId}`).set('if-match', `"${await version()}"`).send({ pickOn });
    const stopped = await change('2026-09-20');
    expect(stopped.status).toBe(409);
    expect(stopped.body.detail).toMatch(/Copper.*21 days.*2026-09-22/);
    expect((await change('2026-09-23')).status).toBe(204);
    expect((await winemaker.write('post', `${base()}/lots/${lotId}/confirm`).set('if-match', `"${await version()}"`)).status).toBe(204);
  });

  it('is copied into a what-if that changes nothing live', async () => {
    const live = await board();
    const made = await winemaker.post(`${base()}/scenarios`, { name: 'What if', copyOf: live.scenarioId });
    expect(made.status).toBe(201);
    const copy = (await winemaker.get(`${base()}/lots?scenario=${made.body.id}`)).body as LotsBoard;
    expect(copy.lots.map((lot) => lot.name)).toEqual(live.lots.map((lot) => lot.name));
    const red = copy.lots.find((lot) => lot.name === 'Shelf red')!;
    expect(red.summary.tonnes!.value).toBeCloseTo(live.lots.find((lot) => lot.name === 'Shelf red')!.summary.tonnes!.value, 9);
    await winemaker.write('put', `${base()}/lots/${red.id}/parts`).set('if-match', '"1"').send({ parts: [] });
    expect((await board()).lots.find((lot) => lot.name === 'Shelf red')!.lines).toHaveLength(2);
  });

  it('says the chance that it fits its tank', async () => {
    const tank = await winemaker.post(`${base()}/tanks`, { name: 'T1', litres: 3000 });
    const lot = (await board()).lots.find((entry) => entry.name === 'By rows')!;
    await winemaker.write('patch', `${base()}/lots/${lot.id}`).set('if-match', `"${lot.version}"`).send({ tankId: tank.body.id });
    const fit = (await board()).lots.find((entry) => entry.id === lot.id)!.summary.tank!;
    expect(fit.workingL).toBeCloseTo(2400, 9);
    expect(fit.chanceOfFit).toBeGreaterThan(0);
    expect(fit.chanceOfFit).toBeLessThan(1);
  });
});
