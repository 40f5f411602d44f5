import { randomUUID } from 'node:crypto';
import { afterAll, beforeAll, describe, expect, it } from 'vitest';
import type { FeatureCollection } from 'geojson';
import type { BlockLine } from '../../shared/contracts/blocks.ts';
import type { PlanBasis } from '../../shared/contracts/planBasis.ts';
import type { PlanList } from '../../shared/contracts/plans.ts';
import { Reading } from '../../server/models/Reading.ts';
import { Season } from '../../server/models/Season.ts';
import { Zoning } from '../../server/models/Zoning.ts';
import { closeComputePool, openComputePool } from '../../server/workers/computePool.ts';
import { makeZonedBlock, type ZonedBlock } from './support/makeZonedBlock.ts';
import { startTestApp, type Agent, type TestApp } from './support/testApp.ts';

let app: TestApp;
let estate: Awaited<ReturnType<TestApp['addEstate']>>;
let manager: Agent;
let place: ZonedBlock;
let fresh: ZonedBlock;
let withOneSeason: PlanBasis;

const base = () => `/api/estates/${estate.estateId}`;
const basis = async () => (await manager.get(`${base()}/zonings/${fresh.zoningId}/plan-basis`)).body as PlanBasis;

beforeAll(async () => {
  app = await startTestApp();
  openComputePool(1);
  estate = await app.addEstate('Two seasons');
  const owner = { estateId: estate.estateId, personId: estate.ownerId };
  place = await makeZonedBlock(owner);
  fresh = await makeZonedBlock(owner, { west: 2.41, name: 'Never read' });
  manager = await app.as((await app.addPerson(estate.estateId, 'manager')).email);
  const { seasonId } = await Zoning.query().findById(place.zoningId).throwIfNotFound();
  const rowIds = place.ground.stored.map(({ id }) => id);
  await Reading.query().insert(Array.from({ length: 16 }, (_, i) => ({
    id: randomUUID(), estateId: estate.estateId, seasonId, blockId: place.blockId, rowId: rowIds[i * 3 + 1]!, ordinal: 20, measureCode: 'clusterCount', value: 20 + (i % 5) * 3, unit: 'clusters', takenAt: new Date('2026-07-08T09:00:00Z'), source: 'field' as const,
  })));
  withOneSeason = await basis();
  await zonedBefore();
});
afterAll(async () => {
  await closeComputePool();
  await app.close();
});

/** Zones of the season before, which stay in force for that season; published late, so that the day alone does not tell. */
async function zonedBefore(): Promise<void> {
  const { id: _id, ...kept } = await Zoning.query().findById(place.zoningId).throwIfNotFound();
  const season = await Season.query().insert({ estateId: estate.estateId, name: 'The one before', startsOn: '2024-11-01', endsOn: '2025-10-31', phases: {} });
  const before = await Zoning.query().insert({ ...kept, seasonId: season.id, number: 2, publishedAt: new Date('2026-07-01') });
  await Zoning.query().findById(place.zoningId).patch({ publishedAt: new Date('2026-06-01') });
  await app.knex.raw(`insert into zones (estate_id, zoning_id, number, name, geometry, area_m2) select estate_id, ?, number, 'Last year ' || number, geometry, area_m2 from zones where zoning_id = ?`, [before.id, place.zoningId]);
}

describe('a block that has zones of two seasons', () => {
  it('is offered once for a plan, with the zones of now', async () => {
    const { zonings } = (await manager.get(`${base()}/plans`)).body as PlanList;
    expect(zonings.map(({ id }) => id).sort()).toEqual([place.zoningId, fresh.zoningId].sort());
  });

  it('is found by the zones of now only', async () => {
    const names = async (q: string) => ((await manager.get(`${base()}/search`).query({ q })).body.items as { kind: string; name: string; about: string }[]).filter(({ kind, about }) => kind === 'zone' && about === 'Plot').map(({ name }) => name);
    expect((await names('zone')).sort()).toEqual(['Zone 1', 'Zone 2']);
    expect(await names('last year')).toEqual([]);
  });

  it('stands on the list and on the map with the zones of now', async () => {
    const blocks = (await manager.get(`${base()}/blocks`)).body.items as BlockLine[];
    expect(blocks.find(({ id }) => id === place.blockId)?.zoning?.id).toBe(place.zoningId);
    const map = (await manager.get(`${base()}/zones`)).body as FeatureCollection;
    expect(new Set(map.features.filter(({ properties }) => properties!.blockId === place.blockId).map(({ properties }) => properties!.zoningId))).toEqual(new Set([place.zoningId]));
  });

  it('gives another block the spread of its readings once', async () => {
    const count = ({ measures }: PlanBasis) => measures.find(({ code }) => code === 'clusterCount')!.spreads;
    expect(count(withOneSeason).map(({ source }) => source)).toContain('estate');
    expect(count(await basis())).toEqual(count(withOneSeason));
  });
});
