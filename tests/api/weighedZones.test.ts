import { afterAll, beforeAll, describe, expect, it } from 'vitest';
import { decodeLabels, encodeCells } from '../../shared/analysis/cellBytes.ts';
import type { LotsBoard } from '../../shared/contracts/lots.ts';
import type { ReviewView, TicketView } from '../../shared/contracts/tickets.ts';
import { gridOf } from '../../server/ground/blockVines.ts';
import { Zone } from '../../server/models/Zone.ts';
import { Zoning } from '../../server/models/Zoning.ts';
import { makeZonedBlock, type ZonedBlock } from './support/makeZonedBlock.ts';
import { startTestApp, type Agent, type TestApp } from './support/testApp.ts';

let app: TestApp;
let winemaker: Agent;
let block: ZonedBlock;
let base: string;
let lotId: string;

beforeAll(async () => {
  app = await startTestApp();
  const estate = await app.addEstate('Weighed zones');
  block = await makeZonedBlock({ estateId: estate.estateId, personId: estate.ownerId }, { name: 'South Shelf' });
  winemaker = await app.as((await app.addPerson(estate.estateId, 'winemaker')).email);
  base = `/api/estates/${estate.estateId}`;
  lotId = (await winemaker.post(`${base}/lots`, { name: 'Both', pickOn: '2026-09-25' })).body.id as string;
  await winemaker.write('put', `${base}/lots/${lotId}/parts`).set('if-match', '"1"').send({ parts: block.zoneIds.map((zoneId) => ({ zoneId })) });
});
afterAll(() => app.close());

const answer = async () => ((await winemaker.get(`${base}/review`)).body as ReviewView).blocks[0]!;
const tickets = async () => (await winemaker.get(`${base}/tickets`)).body.items as TicketView[];

/** A load of 8 t in place of the one that counts now. */
async function weigh(split: readonly object[]): Promise<void> {
  const before = (await tickets()).find(({ correctedBy }) => correctedBy === null);
  const sent = await winemaker.post(`${base}/tickets`, { lotId, ticketNo: `T${(await tickets()).length + 1}`, gross: 11_000, tare: 3000, weighedAt: '2026-09-26T09:00:00Z', corrects: before?.id ?? null, note: before ? 'Split looked up' : '', split });
  expect(sent.status).toBe(201);
}
const part = (zoneNumber: number | null, kg: number, over: object = {}) => ({ blockId: block.blockId, zoneNumber, kg, how: 'measured', by: 'scale', ...over });

describe('whether zones mattered, by the scale', () => {
  it('learns nothing of zones from a load that was shared out', async () => {
    for (const split of [[], [part(null, 8000)], [part(1, 6000, { how: 'shared', by: 'rows', count: 30 }), part(2, 2000, { how: 'shared', by: 'rows', count: 10 })]]) {
      await weigh(split);
      const { measures, verdict } = await answer();
      expect(measures.map(({ measure, basis, differ, halfWidth }) => ({ measure, basis, differ, halfWidth }))).toEqual([{ measure: 'yield', basis: 'shared', differ: null, halfWidth: null }]);
      expect(verdict).toBe('notRead');
    }
  });

  it('tells zones apart by what each weighed', async () => {
    await weigh([part(1, 6000), part(2, 2000)]);
    const { measures, verdict } = await answer();
    const [found] = measures;
    expect(measures).toHaveLength(1);
    expect(found).toMatchObject({ basis: 'weighed', lowest: 2, highest: 1, differ: true });
    const { zones } = (await winemaker.get(`${base}/lots`)).body as LotsBoard;
    const ha = zones[0]!.areaHa;
    expect(found!.least).toBeCloseTo(2 / ha, 6);
    expect(found!.most).toBeCloseTo(6 / ha, 6);
    // One pair, four measures asked: normal quantile at 1 − 0.05/4/2 is 2.497705 (R, qnorm(0.99375)).
    const error = Math.hypot(...[[6, zones[0]!], [2, zones[1]!]].map(([t, zone]) => ((t as number) / ha) * Math.sqrt(0.16 / (zone as { bearing: number }).bearing + 0.005 ** 2)));
    expect(found!.halfWidth).toBeCloseTo(2.497705 * error, 4);
    expect(verdict).toBe('keep');
  });

  it('takes counted bins as wider than a scale', async () => {
    const apart = (await answer()).measures[0]!.halfWidth!;
    await weigh([part(1, 6000, { how: 'shared', by: 'bins', count: 15 }), part(2, 2000, { how: 'shared', by: 'bins', count: 5 })]);
    const [found] = (await answer()).measures;
    expect(found).toMatchObject({ basis: 'bins', differ: true });
    expect(found!.halfWidth!).toBeGreaterThan(apart * 1.5);
  });

  it('calls no difference where the weights lie within chance', async () => {
    await weigh([part(1, 4040), part(2, 3960)]);
    const { measures, verdict } = await answer();
    expect(measures[0]).toMatchObject({ basis: 'weighed', differ: false });
    expect(verdict).toBe('merge');
  });

  it('adds up to the scale over the zones, however it was split', async () => {
    const { zones } = (await winemaker.get(`${base}/lots`)).body as LotsBoard;
    for (const split of [[], [part(null, 8000)], [part(1, 5000), part(2, 3000)]]) {
      await weigh(split);
      const found = (await answer()).measures[0]!;
      const tonnes = found.least * zones[found.lowest - 1]!.areaHa + found.most * zones[found.highest - 1]!.areaHa;
      expect(tonnes).toBeCloseTo(8, 6);
    }
  });
});

describe('a split that names ground outside its lot', () => {
  it('is refused with the zones of the lot, and nothing is kept', async () => {
    const { estateId, ownerId } = await app.addEstate('Outside the lot');
    const shelf = await makeZonedBlock({ estateId, personId: ownerId }, { name: 'Shelf' });
    const other = await makeZonedBlock({ estateId, personId: ownerId }, { name: 'Ridge' });
    const maker = await app.as((await app.addPerson(estateId, 'winemaker')).email);
    const own = `/api/estates/${estateId}`;
    const lot = (await maker.post(`${own}/lots`, { name: 'First only' })).body.id as string;
    await maker.write('put', `${own}/lots/${lot}/parts`).set('if-match', '"1"').send({ parts: [{ zoneId: shelf.zoneIds[0] }] });
    const enter = (split: readonly object[]) => maker.post(`${own}/tickets`, { lotId: lot, ticketNo: 'T', gross: 11_000, tare: 3000, weighedAt: '2026-09-26T09:00:00Z', split });
    const line = (blockId: string, zoneNumber: number | null) => ({ blockId, zoneNumber, kg: 8000, how: 'measured', by: 'scale' });
    for (const [split, named] of [[[line(shelf.blockId, 2)], 'Shelf 2'], [[line(other.blockId, 1)], 'Ridge 1'], [[line(other.blockId, null)], 'Ridge']] as const) {
      const refused = await enter(split);
      expect([refused.status, refused.body.code]).toEqual([422, 'notOfLot']);
      expect(refused.body.detail).toContain(`names ${named},`);
      expect(refused.body.detail).toContain('In this lot today: Shelf 1.');
    }
    expect((await maker.get(`${own}/tickets`)).body.items).toEqual([]);
    expect((await enter([line(shelf.blockId, null)])).status).toBe(201);
  });
});

describe('a load whose zones were published anew after it was weighed', () => {
  it('stays with the vines it came from, and is shared out where their zone was divided', async () => {
    const { estateId, ownerId } = await app.addEstate('Published anew');
    const bench = await makeZonedBlock({ estateId, personId: ownerId }, { name: 'Bench' });
    const maker = await app.as((await app.addPerson(estateId, 'winemaker')).email);
    const own = `/api/estates/${estateId}`;
    const lot = (await maker.post(`${own}/lots`, { name: 'All of it' })).body.id as string;
    await maker.write('put', `${own}/lots/${lot}/parts`).set('if-match', '"1"').send({ parts: bench.zoneIds.map((zoneId) => ({ zoneId })) });
    const line = (zoneNumber: number, kg: number) => ({ blockId: bench.blockId, zoneNumber, kg, how: 'measured', by: 'scale' });
    const sent = await maker.post(`${own}/tickets`, { lotId: lot, ticketNo: 'T', gross: 11_000, tare: 3000, weighedAt: '2026-09-26T09:00:00Z', split: [line(1, 6000), line(2, 2000)] });
    expect(sent.status, sent.text).toBe(201);
    const first = await Zoning.query().patchAndFetchById(bench.zoningId, { publishedAt: new Date('2026-06-02') });
    const rows = await Zone.query().where({ zoningId: first.id }).orderBy('number').select('geometry', 'areaM2', 'name');
    let version = 1;
    /** Puts other zones in force: `zoneOf` by the number that a cell had in the first and its place in the block. */
    const publish = async (zoneOf: (zone: number, cell: number) => number): Promise<void> => {
      await Zoning.query().where({ estateId, state: 'live' }).patch({ state: 'retired' });
      const { id: _id, createdAt: _at, ...same } = first;
      const labels = decodeLabels(first.labels!).map((zone, cell) => (zone === 0 ? 0 : zoneOf(zone, cell)));
      const next = await Zoning.query().insert({ ...same, number: ++version, state: 'live', publishedAt: new Date(), labels: Buffer.from(encodeCells(labels)) } as never);
      const numbers = [...new Set(labels)].filter((zone) => zone > 0);
      await Zone.query().insert(numbers.map((number) => ({ ...rows[(number - 1) % 2]!, estateId, zoningId: next.id, number, vineCount: 0 })) as never);
    };
    const tonnes = async () => ((await maker.get(`${own}/review`)).body as ReviewView).blocks[0]!.measures.find(({ measure }) => measure === 'yield')!;
    const { areaHa } = ((await maker.get(`${own}/lots`)).body as LotsBoard).zones[0]!;
    expect(await tonnes()).toMatchObject({ basis: 'weighed', highest: 1, lowest: 2 });
    await publish((zone) => 3 - zone);
    const swapped = await tonnes();
    expect(swapped).toMatchObject({ basis: 'weighed', highest: 2, lowest: 1 });
    expect([swapped.most * areaHa, swapped.least * areaHa].map((t) => Math.round(t * 1000))).toEqual([6000, 2000]);
    // Numbers that the ticket does not know: nothing of the load is lost.
    await publish((zone) => zone + 2);
    expect(await tonnes()).toMatchObject({ basis: 'weighed', highest: 3, lowest: 4 });
    // The first zone is divided row by row: what each half weighed nobody knows.
    const { cols } = gridOf(bench.ground);
    await publish((zone, cell) => (zone === 1 && Math.floor(cell / cols) % 2 === 0 ? 3 : zone));
    expect(await tonnes()).toMatchObject({ basis: 'shared', differ: null });
  });
});
