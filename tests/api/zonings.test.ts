import { readFileSync, readdirSync, readlinkSync } from 'node:fs';
import { randomUUID } from 'node:crypto';
import { join } from 'node:path';
import { afterAll, beforeAll, describe, expect, it } from 'vitest';
import { seededRandom, randomIndex } from '../../shared/analysis/random.ts';
import { smallestPatchFor } from '../../shared/analysis/smallestPatch.ts';
import { newZoning, type PublishEffects, type ZoneOperation, type ZoningDoubt, type ZoningLine, type ZoningPresence, type ZoningSeasons, type ZoningView } from '../../shared/contracts/zonings.ts';
import { AuditEntry } from '../../server/models/AuditEntry.ts';
import { BlockLayer } from '../../server/models/BlockLayer.ts';
import { Job } from '../../server/models/Job.ts';
import { Layer } from '../../server/models/Layer.ts';
import { Reading } from '../../server/models/Reading.ts';
import { Season } from '../../server/models/Season.ts';
import { Zoning } from '../../server/models/Zoning.ts';
import { ZoningCandidate } from '../../server/models/ZoningCandidate.ts';
import { ZoningEditor } from '../../server/models/ZoningEditor.ts';
import { gridOf, zonesOfVines } from '../../server/ground/blockVines.ts';
import { JobCancelled, startRunner } from '../../server/jobs/runner.ts';
import { editZones, keepAsDraft } from '../../server/services/zonings/editZones.ts';
import { requestZoning } from '../../server/services/zonings/request.ts';
import { zoningJob } from '../../server/services/zonings/runZoning.ts';
import { closeComputePool, openComputePool } from '../../server/workers/computePool.ts';
import { makePlateauBlock, workOnZoning, type PlateauBlock } from './support/makePlateauBlock.ts';
import { randomOperation } from './support/randomOperation.ts';
import { lonLatAt } from './support/shapes.ts';
import { startTestApp, type Agent, type TestApp } from './support/testApp.ts';
import { jobEnd } from './support/withFiles.ts';

let app: TestApp;
let estate: Awaited<ReturnType<TestApp['addEstate']>>;
let owner: { estateId: string; personId: string; roles: ['owner'] };
let agronomist: Agent;
let manager: Agent;
let managerName: string;
let plot: PlateauBlock;

beforeAll(async () => {
  app = await startTestApp();
  openComputePool(1);
  estate = await app.addEstate('Zones test');
  owner = { estateId: estate.estateId, personId: estate.ownerId, roles: ['owner'] };
  plot = await makePlateauBlock(owner);
  agronomist = await app.as((await app.addPerson(estate.estateId, 'agronomist')).email);
  managerName = 'Inès Quillard';
  manager = await app.as((await app.addPerson(estate.estateId, 'manager', managerName)).email);
});
afterAll(async () => {
  await closeComputePool();
  await app.close();
});

const base = () => `/api/estates/${estate.estateId}`;
const recipe = (over: object = {}) => ({ layers: [{ layerId: plot.layerId }], smallestPatchHa: 0.05, ...over });
const view = async (zoningId: string, zones?: number): Promise<ZoningView> => (await manager.get(`${base()}/zonings/${zoningId}${zones ? `?zones=${zones}` : ''}`)).body as ZoningView;
const labelsOf = async (zoningId: string, zones: number) => (await manager.get(`${base()}/zonings/${zoningId}/labels?zones=${zones}`)).body as Buffer;

async function zoned(over: object = {}): Promise<string> {
  const asked = await agronomist.post(`${base()}/blocks/${plot.blockId}/zonings`, recipe(over));
  expect(asked.status, asked.text).toBe(202);
  await workOnZoning(asked.body.jobId as string);
  return asked.body.zoningId as string;
}

async function draft(zones: number): Promise<string> {
  const zoningId = await zoned();
  expect((await manager.patch(`${base()}/zonings/${zoningId}`, { chosenZones: zones })).status).toBe(200);
  return zoningId;
}

async function edit(zoningId: string, operation: ZoneOperation): Promise<ZoningView> {
  const { revision } = await view(zoningId);
  const answer = await manager.post(`${base()}/zonings/${zoningId}/edits`, { operation, revision });
  expect(answer.status, answer.text).toBe(201);
  return answer.body as ZoningView;
}

/** What PostGIS says of the zones as kept: all sound, together the block, none over another. Square metres. */
async function ground(zoningId: string) {
  const { rows } = await app.knex.raw(
    `with z as (select number, ST_Transform(geometry, 32630) as g, ST_IsValid(geometry) as ok from zones where zoning_id = ?),
          b as (select ST_Transform(boundary, 32630) as g from blocks where id = ?)
     select (select bool_and(ok) from z) as valid,
            (select ST_Area(g) from b) as block,
            (select ST_Area(ST_SymDifference((select ST_Union(g) from z), g)) from b) as astray,
            (select coalesce(sum(ST_Area(ST_Intersection(p.g, q.g))), 0) from z p join z q on p.number < q.number) as twice`,
    [zoningId, plot.blockId],
  );
  return rows[0] as { valid: boolean; block: number; astray: number; twice: number };
}

async function expectWhole(zoningId: string): Promise<void> {
  const { valid, block, astray, twice } = await ground(zoningId);
  expect(valid).toBe(true);
  expect(astray).toBeLessThan(block * 1e-5);
  expect(twice).toBeLessThan(block * 1e-5);
}

describe('a zoning', () => {
  it('is proposed with candidates of one to six zones, and sees two plateaus as two zones', async () => {
    const zoningId = await zoned({ name: 'June' });
    const seen = await view(zoningId);
    expect(seen).toMatchObject({ state: 'proposed', number: 1, name: 'June', blockName: 'Côte à l’Éperon', verdict: 'several', advisedZones: 2 });
    expect(seen.evidence.map((row) => row.k)).toEqual([1, 2, 3, 4, 5, 6]);
    expect(await ZoningCandidate.query().where({ zoningId }).resultSize()).toBe(6);
    const two = await view(zoningId, 2);
    expect(two.zones.map((zone) => zone.number)).toEqual([1, 2]);
    expect(two.zones[0]!.layers[0]!.mean).toBeCloseTo(0.4, 1);
    expect(two.zones[1]!.layers[0]!.mean).toBeCloseTo(0.7, 1);
    expect(two.zones.reduce((sum, zone) => sum + zone.vines, 0)).toBe(plot.ground.vines.count);
  });

  it('gives the same labels, byte for byte, for the same recipe and seed', async () => {
    const [one, again] = [await zoned({ seed: 11 }), await zoned({ seed: 11 })];
    for (let k = 1; k <= 6; k++) expect((await labelsOf(one, k)).equals(await labelsOf(again, k))).toBe(true);
    expect((await labelsOf(one, 2)).some((label) => label === 2)).toBe(true);
  });

  it('is repeated to the byte from the options and the seed that are stored', async () => {
    const first = await view(await zoned({ zones: 3, smoothingM: 4, smallestPatchHa: 0.02, narrowestRows: 2, standardise: 'robust', seed: 12, name: 'Once' }));
    const asked = await agronomist.post(`${base()}/blocks/${plot.blockId}/zonings`, { ...first.options, seed: first.seed });
    await workOnZoning(asked.body.jobId as string);
    const again = await view(asked.body.zoningId as string);
    expect(again.options).toEqual(first.options);
    for (const part of ['verdict', 'reasons', 'advisedZones', 'alsoOffer', 'evidence', 'layers', 'differences', 'warnings', 'engineVersion'] as const) expect(again[part], part).toEqual(first[part]);
    const stored = await Promise.all([first, again].map(({ id }) => ZoningCandidate.query().where({ zoningId: id }).orderBy('zoneCount')));
    expect(stored[0]).toHaveLength(6);
    stored[0]!.forEach((candidate, i) => {
      const other = stored[1]![i]!;
      expect([candidate.labels.equals(other.labels), candidate.doubt!.equals(other.doubt!)]).toEqual([true, true]);
      expect(JSON.stringify(other.zones)).toBe(JSON.stringify(candidate.zones));
    });
  });

  it('refuses a recipe that cannot be used and says what is wrong with it', async () => {
    const ask = (body: object) => agronomist.post(`${base()}/blocks/${plot.blockId}/zonings`, body);
    for (const [body, words] of [
      [{ layers: [] }, /at least one layer/],
      [{ layers: [{ layerId: plot.layerId }, { layerId: plot.layerId }] }, /chosen twice/],
      [{ layers: [{ layerId: plot.blockId }] }, /do not lie on/],
      [{ layers: [{ layerId: plot.layerId, weight: 0 }] }, /^layers: Every layer has weight 0; give at least one/],
      [recipe({ zones: 7 }), /zones/],
      [recipe({ smoothingM: -1 }), /smoothingM/],
      [recipe({ seed: 1.5 }), /seed/],
    ] as const) {
      const answer = await ask(body);
      expect([answer.status, answer.body.detail]).toEqual([422, expect.stringMatching(words)]);
    }
  });

  it('is not begun where advice leaves out all that a person did not', async () => {
    const { id } = await Layer.query().insert({ ...(await Layer.query().findById(plot.layerId).throwIfNotFound()), id: randomUUID(), name: 'Hill', type: 'elevation' });
    const placed = await BlockLayer.query().findOne({ layerId: plot.layerId, blockId: plot.blockId }).throwIfNotFound();
    await BlockLayer.query().insert({ ...placed, id: randomUUID(), layerId: id });
    const ask = (...weights: (number | null)[]) => agronomist.post(`${base()}/blocks/${plot.blockId}/zonings`, { layers: [plot.layerId, id].map((layerId, at) => ({ layerId, weight: weights[at]! })) });
    const before = await Zoning.query().where({ blockId: plot.blockId }).resultSize();
    const refused = await ask(0, null);
    expect([refused.status, refused.body.code, refused.body.detail]).toEqual([422, 'noWeight', expect.stringMatching(/Give at least one a weight above 0/)]);
    expect(await Zoning.query().where({ blockId: plot.blockId }).resultSize()).toBe(before);
    expect((await ask(0, 1)).status).toBe(202);
    expect((await ask(null, null)).status).toBe(202);
    await Layer.query().findById(id).patch({ retiredAt: new Date() });
  });

  it('may be repeated by the manager as it was, and not with other weights', async () => {
    await zoned();
    const ask = (body: object) => manager.post(`${base()}/blocks/${plot.blockId}/zonings`, body);
    expect((await ask(recipe({ seed: 99 }))).status).toBe(202);
    const other = await ask(recipe({ layers: [{ layerId: plot.layerId, weight: 3 }] }));
    expect(other.status).toBe(403);
    expect(other.body.detail).toMatch(/agronomist/);
  });

  it('is made of several blocks at once, a run for each, with the same kinds under the same numbers', async () => {
    const second = await makePlateauBlock(owner, { name: 'Clos du Lavoir', x: 300 });
    await BlockLayer.query().where({ blockId: second.blockId, layerId: second.layerId }).patch({ layerId: plot.layerId });
    const asked = await agronomist.post(`${base()}/blocks/${plot.blockId}/zonings`, recipe({ zones: 2, withBlocks: [second.blockId] }));
    expect(asked.status, asked.text).toBe(202);
    const { zoningId, jobId, together } = asked.body as { zoningId: string; jobId: string; together: { blockId: string; zoningId: string; jobId: string }[] };
    expect(together.map(({ blockId }) => blockId)).toEqual([second.blockId]);
    for (const job of [jobId, together[0]!.jobId]) await workOnZoning(job);
    const [here, there] = [await view(zoningId, 2), await view(together[0]!.zoningId, 2)];
    expect([here.withBlockNames, there.withBlockNames]).toEqual([['Clos du Lavoir'], ['Côte à l’Éperon']]);
    expect(there.evidence.map(({ stability }) => stability)).toEqual(here.evidence.map(({ stability }) => stability));
    for (const at of [0, 1]) expect(Math.abs(here.zones[at]!.layers[0]!.mean! - there.zones[at]!.layers[0]!.mean!)).toBeLessThan(0.05);
    expect((await agronomist.post(`${base()}/blocks/${plot.blockId}/zonings`, recipe({ withBlocks: [randomUUID()] }))).status).toBe(404);
  });

  it('is made of blocks whose cells differ on the coarser ones, and each keeps its own', async () => {
    const second = await makePlateauBlock(owner, { name: 'Clos du Puits', x: 600, cellSizeM: 3 });
    await BlockLayer.query().where({ blockId: second.blockId, layerId: second.layerId }).patch({ layerId: plot.layerId });
    const asked = await agronomist.post(`${base()}/blocks/${plot.blockId}/zonings`, recipe({ zones: 2, withBlocks: [second.blockId] }));
    expect(asked.status, asked.text).toBe(202);
    const { zoningId, jobId, together } = asked.body as { zoningId: string; jobId: string; together: { zoningId: string; jobId: string }[] };
    for (const job of [jobId, together[0]!.jobId]) await workOnZoning(job);
    const [here, there] = [await view(zoningId, 2), await view(together[0]!.zoningId, 2)];
    expect(plot.ground.block.cellSizeM).toBeLessThan(3);
    expect([here.cellSizeM, there.cellSizeM]).toEqual([3, 3]);
    expect(there.evidence.map(({ stability }) => stability)).toEqual(here.evidence.map(({ stability }) => stability));
    expect((await labelsOf(zoningId, 2)).length).toBe(gridOf(plot.ground).inside.length);
    expect((await labelsOf(together[0]!.zoningId, 2)).length).toBe(gridOf(second.ground).inside.length);
    for (const at of [0, 1]) expect(Math.abs(here.zones[at]!.layers[0]!.mean! - there.zones[at]!.layers[0]!.mean!)).toBeLessThan(0.05);
    expect((await manager.patch(`${base()}/zonings/${zoningId}`, { chosenZones: 2 })).status).toBe(200);
    await expectWhole(zoningId);
  });

  it('leaves out a layer with red findings until somebody answers for it', async () => {
    const ask = () => agronomist.post(`${base()}/blocks/${plot.blockId}/zonings`, recipe());
    await BlockLayer.query().where({ layerId: plot.layerId, blockId: plot.blockId }).patch({ findings: [{ code: 'stripes', severity: 'red', params: {} }] });
    const refused = await ask();
    expect(refused.status).toBe(422);
    expect(refused.body).toMatchObject({ code: 'layerBlocked', detail: expect.stringContaining('Flight of June') });
    expect((await manager.post(`${base()}/layers/${plot.layerId}/override`, { blockId: plot.blockId, reason: 'Seen on foot' })).status).toBeLessThan(300);
    expect((await ask()).status).toBe(202);
    await BlockLayer.query().where({ layerId: plot.layerId, blockId: plot.blockId }).patch({ findings: [], override: null });
  });

  it('refuses a layer that was placed on an older outline', async () => {
    const { gridKey } = await BlockLayer.query().findOne({ layerId: plot.layerId, blockId: plot.blockId }).throwIfNotFound();
    await BlockLayer.query().where({ layerId: plot.layerId, blockId: plot.blockId }).patch({ gridKey: 'older' });
    const refused = await agronomist.post(`${base()}/blocks/${plot.blockId}/zonings`, recipe());
    expect([refused.status, refused.body.code]).toEqual([409, 'layerStale']);
    await BlockLayer.query().where({ layerId: plot.layerId, blockId: plot.blockId }).patch({ gridKey });
  });

  it('is not found from another estate', async () => {
    const zoningId = await zoned();
    const other = await app.addEstate('Next door');
    const stranger = await app.as(other.ownerEmail);
    const there = `/api/estates/${other.estateId}/zonings/${zoningId}`;
    for (const path of ['', '/labels', '/edits', '/effects', `/compare?with=${zoningId}`]) expect((await stranger.get(there + path)).status, path).toBe(404);
    for (const path of ['/undo', '/redo', '/publish']) expect((await stranger.post(there + path, { revision: 0 })).status, path).toBe(404);
    expect((await stranger.post(`${there}/edits`, { operation: { kind: 'merge', zones: [1], into: 2 }, revision: 0 })).status).toBe(404);
    expect((await stranger.post(`${there}/restore`)).status).toBe(404);
    expect((await stranger.patch(there, { chosenZones: 2 })).status).toBe(404);
    expect((await stranger.post(`/api/estates/${other.estateId}/blocks/${plot.blockId}/zonings`, recipe())).status).toBe(404);
    expect((await view(zoningId)).state).toBe('proposed');
  });
});

describe('a zoning that does not come to its end', () => {
  const ask = () => requestZoning(owner, plot.blockId, newZoning.parse(recipe()), '2026-09-03');
  const expectNothing = async (zoningId: string) => {
    expect((await view(zoningId)).state).toBe('failed');
    expect(await ZoningCandidate.query().where({ zoningId }).resultSize()).toBe(0);
  };

  it('leaves no proposal when it is called off while it waits', async () => {
    const { zoningId, jobId } = await ask();
    expect((await agronomist.delete(`${base()}/jobs/${jobId}`)).body.state).toBe('cancelled');
    await expectNothing(zoningId);
    expect((await manager.patch(`${base()}/zonings/${zoningId}`, { chosenZones: 2 })).status).toBe(409);
  });

  it('says that it was stopped, and not that it could not be computed', async () => {
    const { zoningId, jobId } = await ask();
    await agronomist.delete(`${base()}/jobs/${jobId}`);
    const done = await zoned();
    const { items } = (await manager.get(`${base()}/zonings?block=${plot.blockId}`)).body as { items: ZoningLine[] };
    expect([zoningId, done].map((id) => items.find((line) => line.id === id)!.isStopped)).toEqual([true, false]);
    expect(await view(zoningId)).toMatchObject({ state: 'failed', isStopped: true, problem: null });
  });

  it('has words for every stage that it tells of', async () => {
    const { jobId } = await ask();
    const job = await Job.query().patchAndFetchById(jobId, { state: 'running' });
    const stages = new Set<string>();
    await zoningJob.work({ job, report: (stage) => Promise.resolve(void stages.add(stage)) });
    const words = JSON.parse(readFileSync(join(import.meta.dirname, '../../src/locales/en/zones.json'), 'utf8')) as { stage: Record<string, string> };
    expect(stages.size).toBeGreaterThan(5);
    expect([...stages].filter((stage) => !(stage.replace(/[ -]/g, '_') in words.stage))).toEqual([]);
  });

  it('leaves no proposal when it is called off while it is computed', async () => {
    const { zoningId, jobId } = await ask();
    const job = await Job.query().patchAndFetchById(jobId, { state: 'running' });
    const report = async () => {
      await agronomist.delete(`${base()}/jobs/${jobId}`);
      throw new JobCancelled();
    };
    await expect(zoningJob.work({ job, report })).rejects.toThrow(JobCancelled);
    await expectNothing(zoningId);
  });

  it('leaves no proposal when it is called off in the last moment before it is kept', async () => {
    const { zoningId, jobId } = await ask();
    const job = await Job.query().patchAndFetchById(jobId, { state: 'running' });
    await zoningJob.work({ job, report: async (stage) => void (stage === 'store' && (await agronomist.delete(`${base()}/jobs/${jobId}`))) });
    await expectNothing(zoningId);
  });

  it('is marked as failed with the reason', async () => {
    const here = await BlockLayer.query().findOne({ layerId: plot.layerId, blockId: plot.blockId }).throwIfNotFound();
    await BlockLayer.query().findById(here.id).patch({ cells: here.cells.subarray(0, 40) });
    const { zoningId, jobId } = await ask();
    const runner = await startRunner(app.config.databaseUrl);
    try {
      expect((await jobEnd(agronomist, base(), jobId)).state).toBe('failed');
      await expect.poll(async () => (await view(zoningId)).state).toBe('failed');
    } finally {
      await runner.stop();
      await BlockLayer.query().findById(here.id).patch({ cells: here.cells });
    }
    expect(await view(zoningId)).toMatchObject({ isStopped: false, problem: expect.stringMatching(/^The stored values of layer ".+" cannot be read\. Import its file again/) });
    await expectNothing(zoningId);
  });

  it('is taken up by the next process when the one that worked on it was killed', async () => {
    const { jobId } = await ask();
    // What a killed process leaves behind: a lock of a worker that is no more.
    await Job.knex().raw(`update graphile_worker._private_jobs set locked_by = 'worker-of-the-dead', locked_at = now(), attempts = 1 where payload->>'jobId' = ?`, [jobId]);
    await Job.query().findById(jobId).patch({ state: 'running' });
    const runner = await startRunner(app.config.databaseUrl);
    try {
      expect((await jobEnd(agronomist, base(), jobId)).state).toBe('done');
    } finally {
      await runner.stop();
    }
  });
});

describe('a draft', () => {
  it('has a smallest patch that suits the block where nobody said one', async () => {
    const { options } = await view(await zoned({ smallestPatchHa: undefined }));
    expect(options.smallestPatchHa).toBe(smallestPatchFor(plot.ground.block.areaM2));
    expect([2_000, 20_000, 33_000, 200_000].map(smallestPatchFor)).toEqual([0.01, 0.02, 0.03, 0.05]);
  });

  it('fills the block: areas add up to within 0.1 %, no gap, no overlap', async () => {
    const zoningId = await draft(4);
    const seen = await view(zoningId);
    expect(seen).toMatchObject({ state: 'draft', chosenZones: 4, shown: 4 });
    const { areaM2 } = plot.ground.block;
    expect(Math.abs(seen.zones.reduce((sum, zone) => sum + zone.areaM2, 0) / areaM2 - 1)).toBeLessThan(1e-3);
    expect(seen.zones.reduce((sum, zone) => sum + zone.vines, 0)).toBe(plot.ground.vines.count);
    await expectWhole(zoningId);
  });

  it('is merged, named, undone and brought back, each step as it was', async () => {
    // Clean-up leaves three of the four.
    const zoningId = await draft(4);
    const ids = (await view(zoningId)).zones.map((zone) => zone.id);
    const named = await edit(zoningId, { kind: 'rename', zone: 1, name: 'Crête' });
    expect(named.zones[0]).toMatchObject({ name: 'Crête', id: ids[0] });
    const merged = await edit(zoningId, { kind: 'merge', zones: [2, 3], into: 2 });
    expect(merged.zones.map((zone) => zone.number)).toEqual([1, 2]);
    const step = async (which: 'undo' | 'redo') => manager.post(`${base()}/zonings/${zoningId}/${which}`, { revision: (await view(zoningId)).revision });
    const back = (await step('undo')).body as ZoningView;
    expect(back.zones.map(({ number, areaM2, vines, geometry }) => ({ number, areaM2, vines, geometry }))).toEqual(named.zones.map(({ number, areaM2, vines, geometry }) => ({ number, areaM2, vines, geometry })));
    expect((await step('undo')).body.zones[0].name).toBe('');
    expect((await step('undo')).status).toBe(409);
    await step('redo');
    expect((await step('redo')).body.zones).toEqual(merged.zones);
    expect((await step('redo')).status).toBe(409);
    const { items } = (await manager.get(`${base()}/zonings/${zoningId}/edits`)).body as { items: { sequence: number; author: string; undone: boolean }[] };
    expect(items.map(({ sequence, author, undone }) => [sequence, author, undone])).toEqual([[1, managerName, false], [2, managerName, false]]);
  });

  it('tells the difference between its zones as they stand, also after a hand has changed them', async () => {
    const zoningId = await draft(4);
    const told = ({ zones, differences }: ZoningView) => {
      const means = zones.map(({ layers }) => layers[0]!.mean!);
      expect(differences).toMatchObject([{ lowest: Math.min(...means), highest: Math.max(...means) }]);
      return differences[0]!;
    };
    const computed = told(await view(zoningId));
    const joined = told(await edit(zoningId, { kind: 'merge', zones: [1], into: 2 }));
    expect(joined.lowest).toBeGreaterThan(computed.lowest);
    expect(joined.withinSd).toBeGreaterThan(computed.withinSd);
  });

  it('goes on from where it was undone to: what was taken back is let go', async () => {
    const zoningId = await draft(2);
    await edit(zoningId, { kind: 'rename', zone: 1, name: 'First thought' });
    await manager.post(`${base()}/zonings/${zoningId}/undo`, { revision: (await view(zoningId)).revision });
    await edit(zoningId, { kind: 'rename', zone: 1, name: 'Second thought' });
    expect((await manager.post(`${base()}/zonings/${zoningId}/redo`, { revision: (await view(zoningId)).revision })).status).toBe(409);
    expect((await view(zoningId)).zones[0]!.name).toBe('Second thought');
  });

  it('is split along a row: that row and the next one keep their vines together', async () => {
    const zoningId = await draft(1);
    const row = Math.floor(plot.ground.stored.length / 2);
    const split = await edit(zoningId, { kind: 'splitAlongRow', zone: 1, rowId: plot.ground.stored[row]!.id });
    expect(split.zones.map((zone) => zone.number)).toEqual([1, 2]);
    await expectWhole(zoningId);
    const zoneOf = zonesOfVines(plot.ground, await Zoning.query().findById(zoningId).throwIfNotFound());
    const { rowStart } = plot.ground.vines;
    const sideOf = (index: number) => [...new Set(zoneOf.subarray(rowStart[index], rowStart[index + 1]))];
    expect(sideOf(row)).toHaveLength(1);
    expect(sideOf(row + 1)).toHaveLength(1);
    expect(sideOf(row)).not.toEqual(sideOf(row + 1));
    expect(sideOf(0)).toEqual(sideOf(row));
    expect(sideOf(plot.ground.stored.length - 1)).toEqual(sideOf(row + 1));
  });

  it('gives whole rows, and parts of rows, to another zone', async () => {
    const zoningId = await draft(1);
    const given = plot.ground.stored.slice(10, 14);
    const whole = await edit(zoningId, { kind: 'giveRows', toZone: 2, rows: given.map(({ id }) => ({ rowId: id, from: null, to: null })) });
    const vines = given.reduce((sum, row) => sum + row.vineCount, 0);
    expect(Math.abs(whole.zones[1]!.vines / vines - 1)).toBeLessThan(0.02);
    const part = await edit(zoningId, { kind: 'giveRows', toZone: 1, rows: given.map(({ id }) => ({ rowId: id, from: 1, to: 20 })) });
    expect(Math.abs((whole.zones[1]!.vines - part.zones[1]!.vines) / 80 - 1)).toBeLessThan(0.05);
    await expectWhole(zoningId);
  });

  it('is snapped to whole rows, so that every row is of one zone', async () => {
    const zoningId = await draft(2);
    const snapped = await edit(zoningId, { kind: 'snap', mode: 'wholeRow', shortestRunM: 20 });
    expect(snapped.zones).toHaveLength(2);
    await expectWhole(zoningId);
    const zoneOf = zonesOfVines(plot.ground, await Zoning.query().findById(zoningId).throwIfNotFound());
    const { rowStart } = plot.ground.vines;
    const mixed = plot.ground.stored.filter((_row, index) => new Set(zoneOf.subarray(rowStart[index], rowStart[index + 1])).size > 1);
    expect(mixed.length).toBeLessThanOrEqual(plot.ground.stored.length * 0.05);
  });

  it('is cleaned of patches that are too small to work', async () => {
    const zoningId = await draft(1);
    const shape = { type: 'Polygon' as const, coordinates: [[lonLatAt(40, 40), lonLatAt(50, 40), lonLatAt(50, 50), lonLatAt(40, 50), lonLatAt(40, 40)]] };
    const spotted = await edit(zoningId, { kind: 'giveArea', toZone: 2, area: shape });
    expect(spotted.zones[1]!.areaM2).toBeGreaterThan(60);
    expect(spotted.zones[1]!.areaM2).toBeLessThan(140);
    expect((await edit(zoningId, { kind: 'clean', smallestPatchHa: 0.05, narrowestRows: 0 })).zones.map((zone) => zone.number)).toEqual([1]);
    await expectWhole(zoningId);
  });

  it('refuses an edit that makes no sense and stays as it was', async () => {
    const zoningId = await draft(2);
    const { revision } = await view(zoningId);
    const away = { type: 'LineString' as const, coordinates: [lonLatAt(900, 0), lonLatAt(900, 90)] };
    for (const operation of [
      { kind: 'merge', zones: [9], into: 1 },
      { kind: 'merge', zones: [1], into: 1 },
      { kind: 'split', zone: 1, line: away },
      { kind: 'giveRows', toZone: 1, rows: [{ rowId: plot.blockId }] },
      { kind: 'renumber', numbers: [{ from: 1, to: 2 }] },
      { kind: 'rename', zone: 1, name: 'two\nlines' },
      { kind: 'fold', zone: 1 },
    ]) {
      const answer = await manager.post(`${base()}/zonings/${zoningId}/edits`, { operation, revision });
      expect([operation.kind, answer.status]).toEqual([operation.kind, 422]);
    }
    expect((await view(zoningId)).revision).toBe(revision);
  });

  it('refuses a step made on an old state and names who changed it, also by undoing', async () => {
    const zoningId = await draft(2);
    const { revision } = await view(zoningId);
    const operation = { kind: 'rename', zone: 1, name: 'Late' };
    await edit(zoningId, { kind: 'rename', zone: 1, name: 'Early' });
    const late = await agronomist.post(`${base()}/zonings/${zoningId}/edits`, { operation, revision });
    expect(late.status).toBe(412);
    expect(late.body).toMatchObject({ who: managerName, revision: revision + 1, detail: expect.stringContaining(managerName) });
    const ownerAgent = await app.as(estate.ownerEmail);
    await ownerAgent.post(`${base()}/zonings/${zoningId}/undo`, { revision: revision + 1 });
    const later = await agronomist.post(`${base()}/zonings/${zoningId}/edits`, { operation, revision: revision + 1 });
    expect(later.status).toBe(412);
    expect(later.body.who).toMatch(/^Owner/);
    expect((await view(zoningId)).zones[0]!.name).toBe('');
  });

  it('is not begun anew by somebody who has not seen the edits made meanwhile', async () => {
    const zoningId = await draft(2);
    const { revision } = await view(zoningId);
    await edit(zoningId, { kind: 'rename', zone: 1, name: 'Kept' });
    const anew = (read: number) => agronomist.patch(`${base()}/zonings/${zoningId}`, { chosenZones: 3, revision: read });
    const refused = await anew(revision);
    expect([refused.status, refused.body.who]).toEqual([412, managerName]);
    expect((await view(zoningId)).zones[0]!.name).toBe('Kept');
    expect((await anew(revision + 1)).body).toMatchObject({ chosenZones: 3, revision: revision + 2 });
  });

  it('that was published meanwhile is told to whoever still edits it', async () => {
    const zoningId = await draft(2);
    const { revision } = await view(zoningId);
    expect((await manager.post(`${base()}/zonings/${zoningId}/publish`, { revision })).status).toBe(200);
    const seen = (await agronomist.post(`${base()}/zonings/${zoningId}/presence`)).body as ZoningPresence;
    expect(seen).toMatchObject({ revision: revision + 1, changedBy: managerName });
    const late = await agronomist.post(`${base()}/zonings/${zoningId}/edits`, { operation: { kind: 'merge', zones: [1], into: 2 }, revision });
    expect([late.status, late.body.who]).toEqual([412, managerName]);
  });

  it('is taken by one of two people who edit in the same moment', async () => {
    const zoningId = await draft(2);
    const { revision } = await view(zoningId);
    const send = (agent: Agent, name: string) => agent.post(`${base()}/zonings/${zoningId}/edits`, { operation: { kind: 'rename', zone: 1, name }, revision });
    const answers = await Promise.all([send(manager, 'Mine'), send(agronomist, 'Yours')]);
    expect(answers.map((answer) => answer.status).sort()).toEqual([201, 412]);
  });

  it('stays one whole through any sequence of edits', async () => {
    const random = seededRandom(20_260_903);
    const zoningId = await draft(3);
    const access = { ...owner };
    const areaM2 = plot.ground.block.areaM2;
    let taken = 0;
    for (let sequence = 0; sequence < 15; sequence++) {
      await keepAsDraft(access, zoningId, 2 + randomIndex(random, 4));
      for (let step = 0; step < 3; step++) {
        const { revision } = await Zoning.query().findById(zoningId).throwIfNotFound();
        // A random edit may make no sense for the zones that are there; a refusal must leave them as they were.
        const done = await editZones(access, zoningId, { operation: randomOperation(plot, random), reason: '', revision }).then(() => true, (error: { name: string }) => {
          expect(error.name).toBe('AnalysisError');
          return false;
        });
        if (done) taken += 1;
      }
      await expectWhole(zoningId);
      const seen = await view(zoningId);
      expect(Math.abs(seen.zones.reduce((sum, zone) => sum + zone.areaM2, 0) / areaM2 - 1)).toBeLessThan(1e-3);
      expect(seen.zones.reduce((sum, zone) => sum + zone.vines, 0)).toBe(plot.ground.vines.count);
    }
    expect(taken).toBeGreaterThan(20);
  }, 180_000);
});

describe('publishing', () => {
  let first: string;
  const publish = async (zoningId: string) => manager.post(`${base()}/zonings/${zoningId}/publish`, { revision: (await view(zoningId)).revision, reason: 'Walked it' });

  it('puts a draft in force, once, and only a draft', async () => {
    const proposal = await zoned();
    expect((await manager.post(`${base()}/zonings/${proposal}/publish`, { revision: 0 })).status).toBe(409);
    first = await draft(2);
    await edit(first, { kind: 'rename', zone: 1, name: 'Crête' });
    await edit(first, { kind: 'recolour', zone: 2, colour: '#336699' });
    expect((await agronomist.post(`${base()}/zonings/${first}/publish`, { revision: 2 })).status).toBe(403);
    const live = await publish(first);
    expect(live.body).toMatchObject({ state: 'live', publishedAt: expect.any(String) });
    expect((await publish(first)).status).toBe(409);
    expect((await manager.post(`${base()}/zonings/${first}/edits`, { operation: { kind: 'merge', zones: [1], into: 2 }, revision: live.body.revision })).status).toBe(409);
    const zones = (await manager.get(`${base()}/zones`)).body.features as { properties: { name: string } }[];
    expect(zones.map((zone) => zone.properties.name)).toEqual(['Crête', '']);
    expect(await AuditEntry.query().where({ subjectId: first, action: 'zones.publish' })).toMatchObject([{ reason: 'Walked it' }]);
  });

  it('tells before how many readings and vines would change zone, then retires the zones in force', async () => {
    const { seasonId } = await Zoning.query().findById(first).throwIfNotFound();
    const zoneOf = zonesOfVines(plot.ground, await Zoning.query().findById(first).throwIfNotFound());
    const place = (vine: number) => ({ rowId: plot.ground.stored[plot.ground.vines.row[vine]!]!.id, ordinal: plot.ground.vines.ordinal[vine]! });
    const [inOne, inTwo] = [1, 2].map((zone) => [...zoneOf.keys()].filter((vine) => zoneOf[vine] === zone));
    const sampled = [...inOne!.slice(0, 5), ...inTwo!.slice(0, 3)];
    await Reading.query().insert(sampled.map((vine) => ({ id: randomUUID(), estateId: estate.estateId, seasonId, blockId: plot.blockId, ...place(vine), measureCode: 'brix', value: 22, unit: '°Brix', takenAt: new Date('2026-09-01T09:00:00Z'), source: 'field' as const })));
    const next = await draft(2);
    await edit(next, { kind: 'merge', zones: [1], into: 2 });
    const effects = await manager.get(`${base()}/zonings/${next}/effects`);
    expect(effects.body).toMatchObject({ replaces: (await view(first)).number, readingsMoved: 5, readingsOutside: 0, vinesMoved: inOne!.length });
    expect((await publish(next)).status).toBe(200);
    expect((await view(first)).state).toBe('retired');
    expect(await Zoning.query().where({ blockId: plot.blockId, state: 'live' }).resultSize()).toBe(1);
  });

  it('replaces no zones but those whose replacing was shown', async () => {
    const { number } = await Zoning.query().findOne({ blockId: plot.blockId, state: 'live' }).throwIfNotFound();
    const [mine, theirs] = [await draft(2), await draft(3)];
    const put = async (zoningId: string, replaces?: number | null) => manager.post(`${base()}/zonings/${zoningId}/publish`, { revision: (await view(zoningId)).revision, replaces });
    expect((await manager.get(`${base()}/zonings/${mine}/effects`)).body.replaces).toBe(number);
    expect((await put(theirs, number)).status).toBe(200);
    const refused = await put(mine, number);
    expect([refused.status, refused.body.detail]).toEqual([412, expect.stringContaining(`${managerName} put version ${number + 2}`)]);
    expect((await put(mine, null)).status).toBe(412);
    expect((await view(mine)).state).toBe('draft');
    expect((await put(mine, number + 2)).status).toBe(200);
    expect((await view(theirs)).state).toBe('retired');
  });

  it('puts two drafts that are published in one moment in force one after the other', async () => {
    const before = await draft(2);
    expect((await publish(before)).status).toBe(200);
    const both = [await draft(2), await draft(3)];
    // Both are under way before either comes to the zones in force.
    const hold = await Zoning.startTransaction();
    await Zoning.query(hold).findById(before).forUpdate();
    const answers = both.map((zoningId) => publish(zoningId));
    const waiting = async () => Number((await app.knex.raw("select count(*) as n from pg_stat_activity where datname = current_database() and wait_event_type = 'Lock'")).rows[0].n);
    await expect.poll(waiting, { timeout: 10_000 }).toBe(2);
    await hold.commit();
    expect((await Promise.all(answers)).map(({ status }) => status)).toEqual([200, 200]);
    expect(await Zoning.query().where({ blockId: plot.blockId, state: 'live' }).resultSize()).toBe(1);
  });

  it('keeps names and colours of retired zones when they are taken up as a new draft', async () => {
    const made = await manager.post(`${base()}/zonings/${first}/restore`);
    expect(made.status).toBe(201);
    const [old, copy] = [await view(first), await view(made.body.id as string)];
    expect(copy.state).toBe('draft');
    expect(copy.zones.map(({ name, colour, areaM2, vines }) => ({ name, colour, areaM2, vines }))).toEqual(old.zones.map(({ name, colour, areaM2, vines }) => ({ name, colour, areaM2, vines })));
    expect(copy.zones.map((zone) => zone.name)).toEqual(['Crête', '']);
    expect(copy.zones[1]!.colour).toBe('#336699');
    expect(old.state).toBe('retired');
    // What the old version came to is where the draft begins: nobody did it here, and nothing of it can be taken back.
    const begun = () => manager.get(`${base()}/zonings/${copy.id}/edits`);
    expect((await begun()).body.items).toEqual([]);
    const refused = await manager.post(`${base()}/zonings/${copy.id}/undo`, { revision: copy.revision });
    expect([refused.status, refused.body.code]).toEqual([409, 'nothingToStep']);
    await edit(copy.id, { kind: 'rename', zone: 1, name: null });
    const back = (await manager.post(`${base()}/zonings/${copy.id}/undo`, { revision: copy.revision + 1 })).body as ZoningView;
    expect(back.zones.map(({ name, colour }) => [name, colour])).toEqual([['Crête', null], ['', '#336699']]);
    expect((await begun()).body.items).toHaveLength(1);
    const edited = await edit(copy.id, { kind: 'rename', zone: 2, name: 'Fond' });
    expect(edited.zones.map((zone) => [zone.name, zone.doubtfulShare])).toEqual([['Crête', old.zones[0]!.doubtfulShare], ['Fond', old.zones[1]!.doubtfulShare]]);
    // Ground that was given by hand is where the next draft begins, and it says so; a number kept anew is as computed.
    expect([old.beginsByHand, old.takenUpFrom, copy.takenUpFrom]).toEqual([false, null, old.number]);
    await edit(copy.id, { kind: 'merge', zones: [1], into: 2 });
    const again = await view((await manager.post(`${base()}/zonings/${copy.id}/restore`)).body.id as string);
    expect([again.zones.length, again.beginsByHand, again.takenUpFrom]).toEqual([1, true, copy.number]);
    const anew = (await manager.patch(`${base()}/zonings/${copy.id}`, { chosenZones: 4 })).body as ZoningView;
    // Of the four that were asked for, cleaning left three, and three is what its edits begin with.
    expect([anew.zones.length, anew.chosenZones, anew.beginsWith, anew.beginsByHand, anew.takenUpFrom]).toEqual([3, 4, 3, false, null]);
    expect(anew.zones.map(({ name, colour }) => [name, colour])).toEqual(anew.zones.map(() => ['', null]));
    expect((await edit(copy.id, { kind: 'rename', zone: 3, name: 'Haut' })).zones.map(({ name }) => name)).toEqual(['', '', 'Haut']);
  });

  it('takes zones of an earlier season up in the season that it is', async () => {
    const now = (await Zoning.query().findById(first).throwIfNotFound()).seasonId;
    const { estateId } = await Season.query().findById(now).throwIfNotFound();
    const earlier = await Season.query().insertAndFetch({ estateId, name: 'Long ago', startsOn: '2001-03-01', endsOn: '2002-02-28' });
    await Zoning.query().findById(first).patch({ seasonId: earlier.id });
    const { id } = (await manager.post(`${base()}/zonings/${first}/restore`)).body as { id: string };
    await Zoning.query().findById(first).patch({ seasonId: now });
    await Season.query().deleteById(earlier.id);
    expect((await Zoning.query().findById(id).throwIfNotFound()).seasonId).toBe(now);
  });

  it('compares two zonings vine by vine', async () => {
    const one = await draft(2);
    const same = await manager.get(`${base()}/zonings/${one}/compare?with=${first}`);
    expect(same.body).toMatchObject({ vines: plot.ground.vines.count, vinesMoved: 0, adjustedRand: 1 });
    const proposal = await zoned();
    expect((await manager.get(`${base()}/zonings/${proposal}/compare?with=${first}`)).body.vines).toBe(plot.ground.vines.count);
    await edit(one, { kind: 'renumber', numbers: [{ from: 1, to: 2 }, { from: 2, to: 1 }] });
    const swapped = (await manager.get(`${base()}/zonings/${one}/compare?with=${first}`)).body as { vines: number; vinesMoved: number; adjustedRand: number; pairs: object[] };
    expect(swapped).toMatchObject({ vinesMoved: swapped.vines, vinesApart: 0, adjustedRand: 1 });
    expect(swapped.pairs).toHaveLength(2);
  });

  it('compares a run with the number of zones that its page shows: the one fixed for it, or another that is looked at', async () => {
    const [fixed, other] = [await zoned({ zones: 4 }), await draft(2)];
    // Two are advised, and of four clean-up leaves three.
    const vinesOf = async (path: string) => {
      const { pairs } = (await manager.get(`${base()}/zonings/${fixed}/${path}`)).body as { pairs: { from: number; vines: number }[] };
      return [...new Set(pairs.map(({ from }) => from))].map((zone) => [zone, pairs.filter(({ from }) => from === zone).reduce((sum, { vines }) => sum + vines, 0)]);
    };
    const shown = async (zones?: number) => (await view(fixed, zones)).zones.map(({ number, vines }) => [number, vines]);
    expect(await shown()).toHaveLength(3);
    expect(await vinesOf(`compare?with=${other}`)).toEqual(await shown());
    expect(await vinesOf(`compare?with=${other}&zones=2`)).toEqual(await shown(2));
    const doubt = (await manager.get(`${base()}/zonings/${fixed}/doubt`)).body as ZoningDoubt;
    expect(doubt).toEqual((await manager.get(`${base()}/zonings/${fixed}/doubt?zones=4`)).body);
    expect((await manager.get(`${base()}/zonings/${fixed}/labels`)).body).toEqual(await labelsOf(fixed, 4));
  });

  it('moves no vine by publishing zones that only got other numbers', async () => {
    const live = await draft(2);
    await publish(live);
    const next = await draft(2);
    await edit(next, { kind: 'renumber', numbers: [{ from: 1, to: 2 }, { from: 2, to: 1 }] });
    const { body } = await manager.get(`${base()}/zonings/${next}/effects`);
    expect(body).toMatchObject({ replaces: (await view(live)).number, vinesMoved: 0, readingsMoved: 0, lots: [] });
    expect(body.renumbered).toEqual([{ from: 1, to: 2 }, { from: 2, to: 1 }]);
  });

  it('counts the vines in doubt and draws where they stand', async () => {
    const zoningId = await zoned();
    const doubt = (await manager.get(`${base()}/zonings/${zoningId}/doubt?zones=4`)).body as ZoningDoubt;
    expect(doubt.vines).toBe(plot.ground.vines.count);
    expect(doubt.doubtful).toBeGreaterThan(0);
    expect(doubt.byZone.reduce((sum, zone) => sum + zone.vines, 0)).toBe(doubt.doubtful);
    expect(doubt.runs.reduce((sum, run) => sum + run.to - run.from + 1, 0)).toBe(doubt.doubtful);
    // Vines stand evenly, so their share is about the share of cells that the zones tell.
    const { zones } = await view(zoningId, 4);
    const cells = zones.reduce((sum, zone) => sum + zone.doubtfulShare! * zone.areaM2, 0) / zones.reduce((sum, zone) => sum + zone.areaM2, 0);
    expect(Math.abs(doubt.doubtful / doubt.vines - cells)).toBeLessThan(0.05);
    expect((await manager.get(`${base()}/zonings/${zoningId}/doubt?zones=1`)).body).toMatchObject({ doubtful: 0, geometry: null });
  });

  it.runIf(process.platform === 'linux')('is computed in a thread that lets requests go first', async () => {
    await zoned();
    const niceness = (thread: string) => Number(readFileSync(`/proc/self/task/${thread}/stat`, 'utf8').split(') ')[1]!.split(' ')[16]);
    const own = niceness(readlinkSync('/proc/thread-self').split('/').at(-1)!);
    // Counted from what these tests themselves were started with; 19 is the last there is.
    expect(readdirSync('/proc/self/task').map(niceness).filter((nice) => nice === Math.min(19, own + 10))).toHaveLength(1);
  });

  it('is set beside the layers and zones of other seasons', async () => {
    const { placed, layer } = { placed: await BlockLayer.query().findOne({ layerId: plot.layerId, blockId: plot.blockId }).throwIfNotFound(), layer: await Layer.query().findById(plot.layerId).throwIfNotFound() };
    const { id: _id, createdAt: _made, ...facts } = placed;
    const older = await Layer.query().insert({ estateId: estate.estateId, type: 'vigour', name: 'Flight of last year', unit: '', measuredOn: '2025-06-20', createdBy: layer.createdBy });
    await BlockLayer.query().insert({ ...facts, layerId: older.id });
    const zoningId = await draft(2);
    const season = await Season.query().insert({ estateId: estate.estateId, name: '2025', startsOn: '2024-11-01', endsOn: '2025-10-31', phases: {} });
    const { id: _copy, ...kept } = await Zoning.query().findById(zoningId).throwIfNotFound();
    await Zoning.query().insert({ ...kept, seasonId: season.id, number: 900, state: 'retired', publishedAt: new Date('2025-07-01') });
    const seasons = (await manager.get(`${base()}/zonings/${zoningId}/seasons`)).body as ZoningSeasons;
    expect(seasons.layers).toMatchObject([{ layerId: plot.layerId, otherId: older.id, rankCorrelation: 1, sameThird: 1 }]);
    // The same values in both seasons: every place keeps its rank, and the drawing is the whole block.
    expect(seasons.ground).toMatchObject([{ layerId: plot.layerId, measuredOn: ['2025-06-20', layer.measuredOn], shares: { steady: 1, moving: 0, chance: 0 }, areas: [{ ground: 'steady' }] }]);
    expect(seasons.zones).toMatchObject([{ season: '2025', number: 900, zones: 2, ownZones: 2, adjustedRand: 1, vinesApart: 0 }]);
    // A run is compared in its own number, and says in which.
    const one = await zoned({ zones: 1 });
    expect((await manager.get(`${base()}/zonings/${one}/seasons`)).body.zones).toMatchObject([{ zones: 2, ownZones: 1 }]);
    await Zoning.query().where({ seasonId: season.id }).delete();
  });

  it('tells zones that another season has in force from those that are replaced', async () => {
    const next = await draft(2);
    const live = await Zoning.query().findOne({ estateId: estate.estateId, blockId: plot.blockId, state: 'live' }).throwIfNotFound();
    const { name: thisSeason } = await Season.query().findById(live.seasonId).throwIfNotFound();
    const season = await Season.query().insert({ estateId: estate.estateId, name: 'Year before', startsOn: '2024-11-01', endsOn: '2025-10-31', phases: {} });
    const { id: _copy, ...kept } = await Zoning.query().findById(next).throwIfNotFound();
    const older = await Zoning.query().insertAndFetch({ ...kept, seasonId: season.id, number: 950, state: 'live', publishedAt: new Date('2025-07-01') } as never);
    const effects = async () => (await manager.get(`${base()}/zonings/${next}/effects`)).body as PublishEffects;
    expect(await effects()).toMatchObject({ season: thisSeason, replaces: live.number, shownNow: null });
    await live.$query().patch({ state: 'retired' });
    expect(await effects()).toMatchObject({ season: thisSeason, replaces: null, shownNow: { number: 950, season: 'Year before', isLater: false } });
    await live.$query().patch({ state: 'live' });
    await Zoning.query().findById(next).patch({ seasonId: season.id });
    expect(await effects()).toMatchObject({ season: 'Year before', replaces: 950, shownNow: { number: live.number, season: thisSeason, isLater: true } });
    const lines = (await manager.get(`${base()}/blocks/${plot.blockId}/zonings`)).body.items as ZoningLine[];
    expect([older.id, live.id].map((id) => lines.find((line) => line.id === id)!).map(({ state, pastSeason }) => [state, pastSeason])).toEqual([['live', 'Year before'], ['live', null]]);
    await Zoning.query().where({ seasonId: season.id }).delete();
    await Season.query().deleteById(season.id);
  });

  it('tells the second of two editors who else has the zones open and who changed them', async () => {
    const zoningId = await draft(2);
    const open = async (agent: Agent) => (await agent.post(`${base()}/zonings/${zoningId}/presence`)).body as ZoningPresence;
    expect(await open(manager)).toMatchObject({ others: [] });
    expect((await open(agronomist)).others.map(({ name }) => name)).toEqual([managerName]);
    const before = (await open(manager)).revision;
    await edit(zoningId, { kind: 'rename', zone: 1, name: 'Seen' });
    expect(await open(agronomist)).toMatchObject({ revision: before + 1, changedBy: managerName });
    await ZoningEditor.query().where({ zoningId }).patch({ seenAt: new Date(Date.now() - 120_000) });
    expect((await open(agronomist)).others).toEqual([]);
  });
});
