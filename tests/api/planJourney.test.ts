import { randomUUID } from 'node:crypto';
import { afterAll, beforeAll, beforeEach, describe, expect, it } from 'vitest';
import { encodeCells } from '../../shared/analysis/cellBytes.ts';
import type { PlanBasis } from '../../shared/contracts/planBasis.ts';
import { planChoices } from '../../shared/contracts/planChoices.ts';
import type { PlanStanding, PlanView, ZoneDivision } from '../../shared/contracts/plans.ts';
import type { DayWalk, PlanWalk } from '../../shared/contracts/planWalks.ts';
import type { ResultsView } from '../../shared/contracts/results.ts';
import type { FieldRound, RoundSummary } from '../../shared/contracts/rounds.ts';
import { answerPlan } from '../../shared/sampling/plan.ts';
import { gridOf, loadBlockVines } from '../../server/ground/blockVines.ts';
import { BlockLayer } from '../../server/models/BlockLayer.ts';
import { Layer } from '../../server/models/Layer.ts';
import { Reading } from '../../server/models/Reading.ts';
import { Season } from '../../server/models/Season.ts';
import { closeComputePool, openComputePool } from '../../server/workers/computePool.ts';
import { makeStripBlock, type StripBlock } from './support/makeStripBlock.ts';
import { startTestApp, type Agent, type TestApp } from './support/testApp.ts';
import { readPdf } from '../core/pdfText.ts';

let app: TestApp;
let estate: Awaited<ReturnType<TestApp['addEstate']>>;
let place: StripBlock;
let manager: Agent;
let crew: { id: string; email: string };
let base: string;

beforeAll(async () => {
  app = await startTestApp();
  openComputePool(1);
  estate = await app.addEstate('Journey of a plan');
  place = await makeStripBlock(estate);
  base = `/api/estates/${estate.estateId}`;
  manager = await app.as((await app.addPerson(estate.estateId, 'manager')).email);
  crew = await app.addPerson(estate.estateId, 'crew', 'Nia Holt');
});
afterAll(async () => {
  await closeComputePool();
  await app.close();
});
beforeEach(() => app.knex.raw('truncate readings, plans, rounds, layers cascade'));

const clusters = { code: 'clusterCount', marginKind: 'relative', margin: 0.1, confidence: 0.95 };
async function sent(over: object): Promise<{ plan: PlanView; roundId: string }> {
  const plan = (await manager.post(`${base}/zonings/${place.zoningId}/plans`, { name: 'Plan', measures: [clusters], seed: 7, ...over })).body as PlanView;
  await manager.post(`${base}/plans/${plan.id}/lock`);
  return { plan, roundId: (await manager.post(`${base}/plans/${plan.id}/rounds`, { onDate: '2026-07-09', people: [crew.id] })).body.id as string };
}
/** Readings of targets by hand, one value a vine. */
async function read(plan: PlanView, roundId: string, values: (target: PlanView['targets'][number]) => number | null): Promise<void> {
  const season = await Season.query().where({ estateId: estate.estateId }).first().throwIfNotFound();
  const rows = plan.targets.flatMap((target) => {
    const value = values(target);
    return value === null ? [] : [{ id: randomUUID(), estateId: estate.estateId, seasonId: season.id, blockId: place.blockId, rowId: target.rowId, ordinal: target.ordinal, roundId, targetId: target.id, measureCode: 'clusterCount', value, unit: 'clusters', takenAt: new Date('2026-07-09T09:00:00Z'), source: 'field' as const, flags: [] }];
  });
  await Reading.query().insert(rows);
}
const basis = async () => (await manager.get(`${base}/zonings/${place.zoningId}/plan-basis`)).body as PlanBasis;

describe('a pilot', () => {
  it('is told of while it is out, and its spread decides by the two-stage rule when it is read', async () => {
    const { plan, roundId } = await sent({ name: 'Pilot', isPilot: true, pilotVines: 30 });
    expect(await basis()).toMatchObject({ pilot: { planId: plan.id, name: 'Pilot', vines: 30, read: 0 } });
    const counts = [20, 24, 28, 32, 26, 30, 22, 27, 25, 29];
    await read(plan, roundId, ({ zone, drawOrder }) => (zone === 1 ? counts[(drawOrder - 1) % 10]! : null));
    const after = await basis();
    const [first, second] = after.measures.find(({ code }) => code === 'clusterCount')!.pilots;
    expect(after.pilot).toMatchObject({ read: 10 });
    // Mean 26.3, variance 13.5667 (n − 1), checked with R: coefficient of variation 0.140050.
    expect(first).toMatchObject({ n: 10, df: 9 });
    expect(first!.spread).toBeCloseTo(0.14005, 4);
    expect(second).toBeNull();
    // Stein 1945: (2.262157 · 0.14005 / 0.1)² = 10.04, of 1328 vines 9.96 → 10 (Cochran 1977 §4.6).
    const answer = answerPlan(after, planChoices.parse({ measures: [clusters], afterPilot: true }));
    expect(answer.counts.zones[0]!.visits).toBe(10);
    const made = (await manager.post(`${base}/zonings/${place.zoningId}/plans`, { name: 'After', measures: [clusters], afterPilot: true })).body as PlanView;
    expect(made.draw[0]!.drawn).toBe(10);
  });
});

describe('the spread that a plan assumes', () => {
  it('follows what the planner says of outliers, old seasons and pull, and the stored plan is made by it', async () => {
    const { plan, roundId } = await sent({});
    await read(plan, roundId, ({ zone, drawOrder }) => (zone === 1 ? (drawOrder === 1 ? 90 : 20 + (drawOrder % 5)) : null));
    const of = async (query: string) => ((await manager.get(`${base}/zonings/${place.zoningId}/plan-basis${query}`)).body as PlanBasis).measures.find(({ code }) => code === 'clusterCount')!.spreads[0]!;
    const [usual, counted] = [await of('?shrinkage=none'), await of('?shrinkage=none&outliers=in')];
    expect(usual.outliers).toBe(1);
    expect(counted.value).toBeCloseTo(counted.withOutliers!, 12);
    expect(usual.value).toBeCloseTo(counted.withoutOutliers!, 12);
    expect(counted.value).toBeGreaterThan(2 * usual.value);
    const [pulled, hard] = [await of('?shrinkage=fixed&priorDf=1'), await of('?shrinkage=fixed&priorDf=60')];
    expect(Math.abs(hard.value - usual.value)).toBeGreaterThan(Math.abs(pulled.value - usual.value));
    expect((await of('?upperLevel=0.95')).cautious).toBeGreaterThan((await of('?upperLevel=0.8')).cautious);
    expect((await manager.get(`${base}/zonings/${place.zoningId}/plan-basis?seasonWeight=7`)).status).toBe(422);

    const spread = { shrinkage: 'none', outliers: 'in' };
    const made = (await manager.post(`${base}/zonings/${place.zoningId}/plans`, { name: 'With all', measures: [clusters], spread })).body as PlanView;
    expect(made.choices.spread).toMatchObject({ ...spread, seasonWeight: 0.7 });
    expect(made.basis.measures.find(({ code }) => code === 'clusterCount')!.spreads[0]!.value).toBeCloseTo(counted.value, 12);
    const changed = (await manager.patch(`${base}/plans/${made.id}`).send({ choices: { ...made.choices, spread: { ...made.choices.spread, outliers: 'out' } } })).body as PlanView;
    expect(changed.draw[0]!.wanted).toBeLessThan(made.draw[0]!.wanted);
  });
});

describe('zones sampled as one', () => {
  it('have one count, one draw and one standing; vines keep their zone; phone, labels and results follow', async () => {
    const apart = (await manager.post(`${base}/zonings/${place.zoningId}/plans`, { name: 'Apart', measures: [clusters], seed: 7 })).body as PlanView;
    const { plan, roundId } = await sent({ pools: [[2, 3]] });
    expect(plan.draw.map(({ zone }) => zone)).toEqual([1, 2]);
    expect(plan.vines).toBeLessThan(apart.vines);
    const pooled = plan.targets.filter(({ zone }) => zone !== 1);
    expect(pooled).toHaveLength(plan.draw[1]!.drawn);
    // Strips of equal width: a draw over both gives each about half, and one order through both.
    expect(new Set(pooled.map(({ zone }) => zone))).toEqual(new Set([2, 3]));
    expect(pooled.map(({ drawOrder }) => drawOrder).sort((a, b) => a - b)).toEqual(pooled.map((_, i) => i + 1));

    const round = (await manager.get(`${base}/rounds/${roundId}`)).body as FieldRound;
    expect(round.zones.map(({ number, name, targets }) => [number, name, targets])).toEqual([[1, 'Strip 1', plan.draw[0]!.drawn], [2, 'Strip 2 + Strip 3', pooled.length]]);
    expect(new Set(round.stops.map(({ zone }) => zone))).toEqual(new Set([1, 2]));
    expect(round.rows.flatMap(({ runs }) => runs.map(({ zone }) => zone))).not.toContain(3);

    await read(plan, roundId, ({ zone, drawOrder }) => (zone === 1 ? null : 24 + (drawOrder % 4)));
    const { items } = (await manager.get(`${base}/plans/${plan.id}/standing`)).body as { items: PlanStanding[] };
    expect(items.map(({ zone, n, planned }) => [zone, n, planned])).toEqual([[1, 0, plan.draw[0]!.drawn], [2, pooled.length, pooled.length]]);
    const results = (await manager.get(`${base}/zonings/${place.zoningId}/results`)).body as ResultsView;
    const values = pooled.map(({ drawOrder }) => 24 + (drawOrder % 4));
    expect(results.together).toEqual([expect.objectContaining({ zones: [2, 3], measure: 'clusterCount', n: pooled.length, more: 0, enough: true })]);
    expect(results.together[0]!.mean).toBeCloseTo(values.reduce((sum, value) => sum + value, 0) / values.length, 9);
    expect(results.values.filter(({ zone }) => zone > 1).reduce((sum, { n }) => sum + n, 0)).toBe(pooled.length);
  });

  it('each zone in one pool only, or the choice is refused by name', async () => {
    const answer = await manager.post(`${base}/zonings/${place.zoningId}/plans`, { name: 'Twice', measures: [clusters], pools: [[1, 2], [2, 3]] });
    expect(answer.status).toBe(422);
    expect(answer.text).toContain('one pool only');
  });
});

describe('where a plan stands', () => {
  it('says enough, so many more, or too early by the rule of the phone', async () => {
    const { plan, roundId } = await sent({ measures: [{ ...clusters, margin: 0.12 }] });
    const few = [25, 26, 24, 27, 25, 26];
    await read(plan, roundId, ({ zone, drawOrder }) => {
      if (zone === 1) return drawOrder <= 12 ? few[drawOrder % 6]! : null;
      if (zone === 2) return drawOrder <= 10 ? 10 + ((drawOrder * 7) % 30) : null;
      return drawOrder <= 3 ? 20 + drawOrder : null;
    });
    const { items } = (await manager.get(`${base}/plans/${plan.id}/standing`)).body as { items: PlanStanding[] };
    expect(items.map(({ zone, say, n }) => [zone, say, n])).toEqual([[1, 'enough', 12], [2, 'goOn', 10], [3, 'walkOn', 3]]);
    expect(items[1]!.more).toBeGreaterThan(0);
    expect(items[0]!.halfWidth).toBeLessThan(items[0]!.margin!);
  });
});

describe('the walk of a plan', () => {
  it('is shorter when it may end anywhere, is shared evenly, and begins where one says', async () => {
    const { plan } = await sent({});
    const walk = async (query: string) => (await manager.get(`${base}/plans/${plan.id}/walk${query}`)).body as PlanWalk;
    const [closed, open, two] = [await walk(''), await walk('?end=anywhere'), await walk('?people=2')];
    expect(closed.people[0]!.targetIds.length).toBe(plan.targets.length);
    expect(closed.people[0]!.lengthM).toBeCloseTo(plan.walk!.lengthM, 6);
    expect(open.people[0]!.lengthM).toBeLessThan(closed.people[0]!.lengthM);
    expect(two.people.flatMap(({ targetIds }) => targetIds).sort()).toEqual(plan.targets.map(({ id }) => id).sort());
    const loads = two.people.map(({ walkingS, serviceS }) => walkingS + serviceS);
    expect(two.isEven && Math.max(...loads) / Math.min(...loads)).toBeLessThanOrEqual(1.15);
    const [lon, lat] = plan.targets.at(-1)!.position;
    const elsewhere = await walk(`?gate=${lon},${lat}`);
    expect(elsewhere.gate[0]).toBeCloseTo(lon, 6);
    expect(elsewhere.isGateAssumed).toBe(false);
    expect((await manager.get(`${base}/plans/${plan.id}/walk?gate=here`)).status).toBe(422);
  });
});

describe('a day over several blocks', () => {
  it('takes the blocks in the order that saves most on the way', async () => {
    const [near, far] = [await makeStripBlock(estate, { name: 'Near', x: 300 }), await makeStripBlock(estate, { name: 'Far', x: 1500 })];
    const made: PlanView[] = [];
    for (const zoningId of [near.zoningId, place.zoningId, far.zoningId]) made.push((await manager.post(`${base}/zonings/${zoningId}/plans`, { name: 'Day', measures: [clusters], seed: 4 })).body as PlanView);
    const day = (await manager.post(`${base}/plans/day`, { plans: made.map(({ id }) => id), kmPerHour: 10 })).body as DayWalk;
    // Three blocks on a line: the one in the middle is never first or last.
    expect(day.blocks[1]!.blockName).toBe('Near');
    expect(day.blocks[0]!.travelS).toBe(0);
    // About 300 m + 1200 m from gate to gate, a third longer than straight, at 10 km/h.
    const onTheWay = day.blocks.reduce((sum, { travelS }) => sum + travelS, 0);
    expect(Math.abs(onTheWay - (1500 * 1.3 * 3.6) / 10)).toBeLessThan(120);
    expect(day.totalS).toBeCloseTo(onTheWay + day.blocks.reduce((sum, { seconds }) => sum + seconds, 0), 6);
    expect((await manager.post(`${base}/plans/day`, { plans: [made[0]!.id] })).status).toBe(422);
    expect((await manager.post(`${base}/plans/day`, { plans: [made[0]!.id, randomUUID()] })).status).toBe(404);
  });
});

describe('a day that is sent as one', () => {
  it('carries the order to everybody who walks: list, phone, sheet and page of the day; all rounds or none', async () => {
    const [one, other] = [await makeStripBlock(estate, { name: 'First', x: 3000 }), await makeStripBlock(estate, { name: 'Second', x: 3300 })];
    const made: PlanView[] = [];
    for (const zoningId of [one.zoningId, other.zoningId]) made.push((await manager.post(`${base}/zonings/${zoningId}/plans`, { name: 'Day', measures: [clusters], seed: 4 })).body as PlanView);
    const ask = { plans: [made[1]!.id, made[0]!.id], keepOrder: true, onDate: '2026-07-10', people: [crew.id] };
    await manager.post(`${base}/plans/${made[1]!.id}/lock`);
    const refused = await manager.post(`${base}/plans/day/rounds`, ask);
    expect(refused.status).toBe(409);
    expect((await manager.get(`${base}/rounds`)).body.items).toEqual([]);
    await manager.post(`${base}/plans/${made[0]!.id}/lock`);
    const sentDay = await manager.post(`${base}/plans/day/rounds`, ask);
    expect(sentDay.status, sentDay.text).toBe(201);
    const rounds = (await manager.get(`${base}/rounds`)).body.items as RoundSummary[];
    expect(new Map(rounds.map(({ blockName, dayPlace }) => [blockName, dayPlace]))).toEqual(new Map([['Second', 1], ['First', 2]]));
    const nia = await app.as(crew.email);
    const second = rounds.find(({ blockName }) => blockName === 'First')!;
    const { day } = (await nia.get(`${base}/rounds/${second.id}`)).body as FieldRound;
    expect(day.map(({ block, place: at, wayS }) => [block, at, wayS === null])).toEqual([['Second', 1, true], ['First', 2, false]]);
    expect(day[1]!.wayS).toBeGreaterThan(60);
    const sheet = await nia.get(`${base}/rounds/day-sheet?onDate=2026-07-10`).buffer(true).parse((answer, done) => { const parts: Buffer[] = []; answer.on('data', (part: Buffer) => parts.push(part)); answer.on('end', () => done(null, Buffer.concat(parts))); });
    expect(sheet.status).toBe(200);
    const [page] = await readPdf(sheet.body as Buffer);
    const words = page!.texts.join(' ');
    expect(words.indexOf('Second')).toBeGreaterThan(0);
    expect(words.indexOf('First')).toBeGreaterThan(words.indexOf('Second'));
    // With the first block called off, nobody knows the way to the second.
    await manager.patch(`${base}/rounds/${rounds.find(({ blockName }) => blockName === 'Second')!.id}`, { state: 'called off' });
    expect(((await nia.get(`${base}/rounds/${second.id}`)).body as FieldRound).day).toMatchObject([{ block: 'First', place: 2, wayS: null }]);
    expect((await nia.get(`${base}/rounds/day-sheet?onDate=2026-07-11`)).status).toBe(404);
  });
});

describe('the time of a walk', () => {
  it('follows the speed that was chosen and the slopes of the elevation layer', async () => {
    const ground = await loadBlockVines(estate.estateId, place.blockId);
    const grid = gridOf(ground);
    const walkOf = async (over: object) => {
      const plan = (await manager.post(`${base}/zonings/${place.zoningId}/plans`, { name: 'Walk', measures: [clusters], seed: 7, ...over })).body as PlanView;
      return { plan, walk: (await manager.get(`${base}/plans/${plan.id}/walk`)).body as PlanWalk };
    };
    const level = await walkOf({});
    expect(level.walk.slopesFrom).toBeNull();
    // Twice the speed is half the time.
    expect((await walkOf({ pace: { kmPerHour: 6.02 } })).plan.walk!.walkingS).toBeCloseTo(level.plan.walk!.walkingS / 2, 6);
    // A hill of 20 % along the rows, which run north; the class figure is 0.448 m/s for 0.836 on the level.
    const cells = Float32Array.from({ length: grid.cols * grid.rows }, (_, cell) => 200 - 0.2 * grid.cellSizeM * Math.floor(cell / grid.cols));
    const layer = await Layer.query().insertAndFetch({ estateId: estate.estateId, type: 'elevation', name: 'Ground of 2024', unit: 'm', source: {} });
    await BlockLayer.query().insert({ estateId: estate.estateId, layerId: layer.id, blockId: place.blockId, gridKey: grid.key, cells: Buffer.from(encodeCells(cells)), coverage: 1, statistics: {} as never, findings: [] });
    const steep = await walkOf({});
    expect(steep.walk.slopesFrom).toBe('Ground of 2024');
    expect(steep.plan.walk!.walkingS).toBeGreaterThan(1.4 * level.plan.walk!.walkingS);
    expect(steep.walk.people[0]!.walkingS).toBeCloseTo(steep.plan.walk!.walkingS, 6);
    const ignored = await walkOf({ pace: { onSlopes: false } });
    expect(ignored.plan.walk!.walkingS).toBeCloseTo(level.plan.walk!.walkingS, 6);
    expect(ignored.walk.slopesFrom).toBeNull();
    // Half of what the usual figure leaves at 20 % costs more, and the walk that is shared out says the same time.
    const own = await walkOf({ pace: { slopeSpeeds: [0.8, 0.448 / 0.836 / 2, 0.1] } });
    expect(own.plan.walk!.walkingS).toBeGreaterThan(1.4 * steep.plan.walk!.walkingS);
    expect(own.walk.people[0]!.walkingS).toBeCloseTo(own.plan.walk!.walkingS, 6);
    expect(own.plan.hours * 3600).toBeCloseTo(own.plan.walk!.walkingS + own.plan.walk!.serviceS, 6);
    const refused = await manager.post(`${base}/zonings/${place.zoningId}/plans`, { name: 'Walk', measures: [clusters], pace: { slopeSpeeds: [0.8, 0, 0.1] } });
    expect(refused.status).toBe(422);
    expect(JSON.stringify(refused.body)).toContain('slopeSpeeds');
  });
});

describe('a plan that asks for too much', () => {
  it('is offered a division along a layer when the readings say two populations, and the zone editor takes it', async () => {
    const ground = await loadBlockVines(estate.estateId, place.blockId);
    const grid = gridOf(ground);
    // The layer rises along the rows; low counts below its middle, high counts above.
    const cells = Float32Array.from({ length: grid.cols * grid.rows }, (_, cell) => grid.rows - Math.floor(cell / grid.cols));
    const layer = await Layer.query().insertAndFetch({ estateId: estate.estateId, type: 'conductivity', name: 'Survey of spring', unit: 'mS/m', source: {} });
    await BlockLayer.query().insert({ estateId: estate.estateId, layerId: layer.id, blockId: place.blockId, gridKey: grid.key, cells: Buffer.from(encodeCells(cells)), coverage: 1, statistics: {} as never, findings: [] });
    const season = await Season.query().where({ estateId: estate.estateId }).first().throwIfNotFound();
    const rows = place.rows.slice(2, 12);
    await Reading.query().insert(rows.flatMap((row, i) => [8, 16, 24, 60, 68, 76].map((ordinal) => ({
      id: randomUUID(), estateId: estate.estateId, seasonId: season.id, blockId: place.blockId, rowId: row.id, ordinal, measureCode: 'clusterCount', value: (ordinal < 42 ? 15 : 40) + ((i * 3 + ordinal) % 5), unit: 'clusters', takenAt: new Date('2026-07-09T09:00:00Z'), source: 'field' as const, flags: [],
    }))));
    const choices = { measures: [{ ...clusters, margin: 0.08 }], limits: { visitsPerZone: 40 } };
    const { items } = (await manager.post(`${base}/zonings/${place.zoningId}/divisions`, { choices })).body as { items: ZoneDivision[] };
    const division = items.find(({ zone }) => zone === '1')!;
    expect(division).toMatchObject({ layerName: 'Survey of spring', measureCode: 'clusterCount', newZone: 4 });
    expect(division.division.recommended).toBe(true);
    expect(Math.abs(division.means[0] - division.means[1])).toBeGreaterThan(15);
    const answer = answerPlan(await basis(), planChoices.parse(choices), items);
    expect(answer.advice!.options.find(({ kind }) => kind === 'divideZone')).toMatchObject({ zone: '1', recommended: true, layerName: 'Survey of spring' });

    await app.knex.raw('update zonings set base_labels = labels where id = ?', [place.zoningId]);
    const draft = (await manager.post(`${base}/zonings/${place.zoningId}/restore`)).body as { id: string };
    const { revision } = (await manager.get(`${base}/zonings/${draft.id}`)).body as { revision: number };
    const edited = await manager.post(`${base}/zonings/${draft.id}/edits`, { operation: { kind: 'giveRows', toZone: division.newZone, rows: division.rows }, reason: 'Too many samples', revision });
    expect(edited.status, edited.text).toBe(201);
    expect((edited.body as { zones: { number: number }[] }).zones.map(({ number }) => number)).toEqual([1, 2, 3, 4]);
  });

  it('is offered none where there is nothing to judge by', async () => {
    const answer = await manager.post(`${base}/zonings/${place.zoningId}/divisions`, { choices: { measures: [{ ...clusters, margin: 0.03 }] } });
    expect(answer.body).toEqual({ items: [] });
  });
});
