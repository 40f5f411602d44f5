import { randomUUID } from 'node:crypto';
import { afterAll, beforeAll, describe, expect, it } from 'vitest';
import { Reading } from '../../server/models/Reading.ts';
import { Season } from '../../server/models/Season.ts';
import { Zoning } from '../../server/models/Zoning.ts';
import type { RipeningView } from '../../shared/contracts/results.ts';
import { makeZonedBlock, type ZonedBlock } from './support/makeZonedBlock.ts';
import { startTestApp, type Agent, type TestApp } from './support/testApp.ts';

let app: TestApp;
let estate: Awaited<ReturnType<TestApp['addEstate']>>;
let winemaker: Agent;
let block: ZonedBlock;
let [before, empty]: Season[] = [];
let now: Season;

beforeAll(async () => {
  app = await startTestApp();
  estate = await app.addEstate('Seasons test');
  block = await makeZonedBlock({ estateId: estate.estateId, personId: estate.ownerId }, { name: 'South Plot' });
  winemaker = await app.as((await app.addPerson(estate.estateId, 'winemaker')).email);
  now = await Season.query().findOne({ estateId: estate.estateId }).throwIfNotFound();
  // South of the equator a season crosses New Year.
  before = await Season.query().insertAndFetch({ estateId: estate.estateId, name: '2023/24', startsOn: '2023-07-01', endsOn: '2024-06-30', phases: {}, closedAt: new Date('2024-07-01') });
  empty = await Season.query().insertAndFetch({ estateId: estate.estateId, name: '2022/23', startsOn: '2022-07-01', endsOn: '2023-06-30', phases: {}, closedAt: new Date('2023-07-01') });
  for (const [day, values] of [['2023-12-29', [21, 21.4, 21.2]], ['2024-01-05', [22.1, 22.5, 22.3]], ['2024-01-12', [23.4, 23.6, 23.5]]] as const) await store(before, day, values);
});
afterAll(() => app.close());

async function store(season: Season, day: string, values: readonly number[], zone = 1): Promise<void> {
  const vines = [...block.zoneOf.keys()].filter((vine) => block.zoneOf[vine] === zone);
  await Reading.query().insert(values.map((value, index) => {
    const vine = vines[100 + index * 37]!;
    return { id: randomUUID(), estateId: estate.estateId, blockId: block.blockId, seasonId: season.id, rowId: block.ground.stored[block.ground.vines.row[vine]!]!.id, ordinal: block.ground.vines.ordinal[vine]!, measureCode: 'brix', value, unit: '°Brix', takenAt: new Date(`${day}T12:00:00Z`), source: 'field', personId: estate.ownerId } as never;
  }));
}
const ripening = async (query = '') => (await winemaker.get(`/api/estates/${estate.estateId}/blocks/${block.blockId}/ripening${query}`)).body as RipeningView;

describe('ripeness of another season', () => {
  it('is read by the zones of now where it had none, on one course over New Year, and forecasts nothing', async () => {
    const view = await ripening(`?season=${before!.id}`);
    expect(view.season).toMatchObject({ name: '2023/24', isOver: true, zonesFrom: now.name });
    const [series] = view.series;
    expect(series!.points.map(({ visit }) => visit)).toEqual(['2023-12-29', '2024-01-05', '2024-01-12']);
    // Means 21.2, 22.3, 23.5 a week apart: the slope is (23.5 − 21.2)/14.
    expect(series!.trend).toMatchObject({ kind: 'trend' });
    if (series!.trend.kind === 'trend') expect(series!.trend.slope).toBeCloseTo(2.3 / 14, 10);
    expect(series!.forecast).toEqual([]);
    expect(view.zones).toHaveLength(2);
  });

  it('is read by its own last zones where it had some', async () => {
    const { id: _id, ...facts } = await Zoning.query().findById(block.zoningId).throwIfNotFound();
    const own = await Zoning.query().insertAndFetch({ ...facts, seasonId: before!.id, state: 'retired', number: 7, publishedAt: new Date('2023-09-01') } as never);
    expect(await ripening(`?season=${before!.id}`)).toMatchObject({ zoningId: own.id, season: { zonesFrom: null } });
    expect(await ripening()).toMatchObject({ zoningId: block.zoningId });
  });

  it('is empty without a word too many where nothing was read, and lists what each season holds', async () => {
    const view = await ripening(`?season=${empty!.id}`);
    expect(view.series).toEqual([]);
    expect(view.values).toEqual([]);
    expect(view.seasons.map(({ name, readings }) => [name, readings])).toEqual([[now.name, 0], ['2023/24', 9], ['2022/23', 0]]);
    expect(JSON.stringify(view)).not.toContain('NaN');
  });

  it('is of this estate only', async () => {
    const other = await app.addEstate('Elsewhere');
    const theirs = await Season.query().findOne({ estateId: other.estateId }).throwIfNotFound();
    expect((await winemaker.get(`/api/estates/${estate.estateId}/blocks/${block.blockId}/ripening?season=${theirs.id}`)).status).toBe(404);
  });
});
