import { randomUUID } from 'node:crypto';
import { mkdtempSync, rmSync, writeFileSync } from 'node:fs';
import { tmpdir } from 'node:os';
import { join } from 'node:path';
import type { FeatureCollection, MultiPoint, Point } from 'geojson';
import { afterAll, beforeAll, beforeEach, describe, expect, it } from 'vitest';
import type { PlanBasis } from '../../shared/contracts/planBasis.ts';
import type { EarlierPlan, PlanList, PlanView } from '../../shared/contracts/plans.ts';
import { planChoices } from '../../shared/contracts/planChoices.ts';
import type { FieldRound, RoundSummary } from '../../shared/contracts/rounds.ts';
import type { PublishEffects } from '../../shared/contracts/zonings.ts';
import { decodeLabels, encodeCells } from '../../shared/analysis/cellBytes.ts';
import { polygonsToUtm } from '../../shared/geo/utm.ts';
import { answerPlan } from '../../shared/sampling/plan.ts';
import { closeComputePool, openComputePool } from '../../server/workers/computePool.ts';
import { Estate } from '../../server/models/Estate.ts';
import { AuditEntry } from '../../server/models/AuditEntry.ts';
import { Block } from '../../server/models/Block.ts';
import { MailMessage } from '../../server/models/MailMessage.ts';
import { MeasureRecord } from '../../server/models/MeasureRecord.ts';
import { Plan } from '../../server/models/Plan.ts';
import { Quota } from '../../server/models/Quota.ts';
import { Reading } from '../../server/models/Reading.ts';
import { Round } from '../../server/models/Round.ts';
import { Season } from '../../server/models/Season.ts';
import { Target } from '../../server/models/Target.ts';
import { Vine } from '../../server/models/Vine.ts';
import { Zoning } from '../../server/models/Zoning.ts';
import { hasTool, readWithGdal } from './support/gdal.ts';
import { makeStripBlock, type StripBlock } from './support/makeStripBlock.ts';
import { startTestApp, type Agent, type TestApp } from './support/testApp.ts';

let app: TestApp;
let estate: Awaited<ReturnType<TestApp['addEstate']>>;
let place: StripBlock;
let manager: Agent;
let crew: { id: string; email: string };
let otherCrew: { id: string; email: string };

beforeAll(async () => {
  app = await startTestApp();
  openComputePool(1);
  estate = await app.addEstate('Plan test');
  place = await makeStripBlock(estate);
  manager = await app.as((await app.addPerson(estate.estateId, 'manager')).email);
  crew = await app.addPerson(estate.estateId, 'crew', 'Nia Holt');
  otherCrew = await app.addPerson(estate.estateId, 'crew', 'Teo Marsh');
});
afterAll(async () => {
  await closeComputePool();
  await app.close();
});
beforeEach(async () => {
  await app.knex.raw('truncate readings, plans, rounds, entry_restrictions, vines, mail_messages cascade');
});

const base = () => `/api/estates/${estate.estateId}`;
const clusters = { code: 'clusterCount', marginKind: 'relative', margin: 0.1, confidence: 0.95 };
const plan = async (over: Record<string, unknown> = {}): Promise<PlanView> => {
  const answer = await manager.post(`${base()}/zonings/${place.zoningId}/plans`, { name: 'Lag-phase count', measures: [clusters], seed: 7, ...over });
  expect(answer.status, answer.text).toBe(201);
  return answer.body as PlanView;
};

describe('the basis of a plan', () => {
  it('falls back on the trade default and says so', async () => {
    const basis = (await manager.get(`${base()}/zonings/${place.zoningId}/plan-basis`)).body as PlanBasis;
    const measure = basis.measures.find(({ code }) => code === 'clusterCount')!;
    expect(measure.spreads).toHaveLength(3);
    expect(measure.spreads[0]).toMatchObject({ kind: 'cv', value: 0.25, source: 'trade', n: 0, isMeanAssumed: true });
    // 48 rows of 83 vines: 16 rows a strip.
    expect(basis.zones.map(({ vines }) => vines)).toEqual([1328, 1328, 1328]);
    expect(basis.zones[0]!.eligible).toBeLessThan(1328);
  });

  it('takes earlier readings by the vine, whatever zone it was in then', async () => {
    const season = await Season.query().where({ estateId: estate.estateId }).first().throwIfNotFound();
    // Standard deviation of 20 22 24 26 28 30 is 3.741657 (n - 1), mean 25: 14.97 percent.
    await Reading.query().insert([20, 22, 24, 26, 28, 30].map((value, i) => ({
      id: randomUUID(), estateId: estate.estateId, seasonId: season.id, blockId: place.blockId, rowId: place.rows[3 + i]!.id, ordinal: 10, measureCode: 'clusterCount', value, unit: 'clusters', takenAt: new Date(`${season.startsOn}T09:00:00Z`), source: 'field' as const, flags: [],
    })));
    const basis = (await manager.get(`${base()}/zonings/${place.zoningId}/plan-basis`)).body as PlanBasis;
    const [first, second] = basis.measures.find(({ code }) => code === 'clusterCount')!.spreads;
    expect(first).toMatchObject({ source: 'zone', n: 6, outliers: 0, expectedMean: 25, isMeanAssumed: false });
    expect(first!.withOutliers).toBeCloseTo(0.149666, 5);
    expect(second!.source).toBe('block');
  });

  it('counts the vines that may be drawn by the rule asked for', async () => {
    const eligible = async (query: string) => ((await manager.get(`${base()}/zonings/${place.zoningId}/plan-basis?${query}`)).body as PlanBasis).zones.map(({ eligible: n }) => n);
    // 16 rows of 83 vines a strip: without any rule all of them; with one edge row on the outer strips, two vines at each end and
    // a cell from the neighbouring strip fewer.
    expect(await eligible('edgeRows=0&endVines=0&borderM=0')).toEqual([1328, 1328, 1328]);
    expect(await eligible('edgeRows=0&endVines=2&borderM=0')).toEqual([16 * 79, 16 * 79, 16 * 79]);
    expect(await eligible('edgeRows=3&endVines=0&borderM=0')).toEqual([13 * 83, 1328, 13 * 83]);
    const [first, middle] = await eligible('edgeRows=0&endVines=0&borderM=6');
    expect(middle).toBeLessThan(first!);
    expect((await manager.get(`${base()}/zonings/${place.zoningId}/plan-basis?edgeRows=-1`)).status).toBe(422);
  });

  it('refuses zones that were drawn on an outline since changed', async () => {
    const moved = await makeStripBlock(estate, { name: 'Moved', x: 400 });
    await Block.query().findById(moved.blockId).patch({ cellSizeM: 3 });
    const answer = await manager.get(`${base()}/zonings/${moved.zoningId}/plan-basis`);
    expect(answer.status).toBe(422);
    expect(answer.body.code).toBe('zoningOutOfDate');
  });
});

describe('a plan', () => {
  it('counts as the tables do and gives the answer that the browser computes', async () => {
    const made = await plan();
    // 25 % spread, 10 % margin, 95 %: 27 without the population, 26 of 1328 (t search with finite population correction, Cochran 1977 §4.6; checked by hand: t(25) 2.0595 · 25/√26 · √(1 − 26/1328) = 9.998).
    expect(made.draw.map(({ drawn }) => drawn)).toEqual([26, 26, 26]);
    const basis = (await manager.get(`${base()}/zonings/${place.zoningId}/plan-basis`)).body as PlanBasis;
    const inBrowser = answerPlan(basis, planChoices.parse({ measures: [clusters] }));
    expect(inBrowser.counts.zones.map(({ visits }) => visits)).toEqual([26, 26, 26]);
    expect(inBrowser.counts.drivers).toEqual(['clusterCount']);
    const stored = (await Plan.query().findById(made.id))!.result as { counts: unknown };
    expect(stored.counts).toEqual(JSON.parse(JSON.stringify(answerPlan(made.basis, made.choices).counts)));
    // Before the vines are drawn only the time on foot is another: an estimate.
    const withoutTime = (counts: unknown): unknown => JSON.parse(JSON.stringify(counts, (key, value: unknown) => (['hours', 'walkingHours', 'money'].includes(key) ? null : value)));
    expect(withoutTime(inBrowser.counts)).toEqual(withoutTime(stored.counts));
    expect(await Quota.query().where({ planId: made.id }).sum('samples as n').first()).toMatchObject({ n: 78 });
  });

  it('draws the same vines from the same seed, away from edges, each with a reserve of its zone', async () => {
    const [one, two] = [await plan(), await plan({ name: 'Again' })];
    const vines = (made: PlanView) => made.targets.map(({ rowId, ordinal }) => `${rowId} ${ordinal}`);
    expect(vines(one)).toEqual(vines(two));
    expect(vines(await plan({ name: 'Other seed', seed: 8 }))).not.toEqual(vines(one));
    expect(one.targets.every(({ ordinal }) => ordinal > 2 && ordinal <= 81)).toBe(true);
    expect(one.targets.some(({ rowId }) => rowId === place.rows[0]!.id || rowId === place.rows.at(-1)!.id)).toBe(false);
    expect(one.targets.every(({ reserve }) => reserve !== null)).toBe(true);
    expect(one.targets.map(({ walkOrder }) => walkOrder)).toEqual(Array.from({ length: 78 }, (_, i) => i + 1));
    expect(one.walk!.lengthM).toBeGreaterThan(500);
  });

  it('draws many vines in a thread: as many as asked for, the same from the same seed, with the walk past them', async () => {
    const many = { measures: [{ ...clusters, margin: 0.04 }], minimum: 100, seed: 11 };
    const [one, again] = [await plan(many), await plan(many)];
    expect(one.targets.length).toBeGreaterThan(250);
    expect(one.targets).toHaveLength(one.draw.reduce((sum, { wanted }) => sum + wanted, 0));
    expect(again.targets.map(({ rowId, ordinal, walkOrder }) => [rowId, ordinal, walkOrder])).toEqual(one.targets.map(({ rowId, ordinal, walkOrder }) => [rowId, ordinal, walkOrder]));
    expect(one.walk!.serviceS).toBeCloseTo(one.targets.length * (one.choices.secondsPerVine + one.basis.measures.find(({ code }) => code === 'clusterCount')!.secondsPerSample), 6);
    expect(one.walk!.lengthM).toBeGreaterThan(1000);
  });

  it('never draws a missing, replanted or off-type vine', async () => {
    const marked = place.rows.slice(0, 16).flatMap((row) => Array.from({ length: 83 }, (_, i) => i + 1).filter((ordinal) => ordinal % 4 !== 0).map((ordinal) => ({ estateId: estate.estateId, blockId: place.blockId, rowId: row.id, ordinal, state: 'missing' as const, proposed: false, notedAt: new Date() })));
    await Vine.query().insert(marked);
    const made = await plan();
    expect(made.targets.filter(({ zone }) => zone === 1).every(({ ordinal }) => ordinal % 4 === 0)).toBe(true);
    expect(made.basis.zones[0]!.vines).toBe(16 * 20);
  });

  it('says in a sentence what to do where no vine can be sampled, and plans the other zones where one has none', async () => {
    const gone = (rows: typeof place.rows) => Vine.query().insert(rows.flatMap((row) => Array.from({ length: 83 }, (_, i) => ({ estateId: estate.estateId, blockId: place.blockId, rowId: row.id, ordinal: i + 1, state: 'missing' as const, proposed: false, notedAt: new Date() }))));
    await gone(place.rows.slice(0, 16));
    const made = await plan();
    expect(made.basis.zones.map(({ number }) => number)).toEqual([2, 3]);
    expect(made.targets.every(({ zone }) => zone > 1)).toBe(true);
    await gone(place.rows.slice(16));
    for (const answer of [await manager.get(`${base()}/zonings/${place.zoningId}/plan-basis`), await manager.post(`${base()}/zonings/${place.zoningId}/plans`, { name: 'None left', measures: [clusters] })]) {
      expect(answer.status).toBe(422);
      expect(answer.body).toMatchObject({ code: 'noVines', detail: expect.stringMatching(/^No zone of Zoned plot has a vine to sample: .*Look at the marks/) });
    }
    expect(await Plan.query().resultSize()).toBe(1);
  });

  it('has one time: at the vines, setting up there, and the walk as it is laid', async () => {
    const made = await plan({ secondsPerVine: 20, zoneSeconds: { 2: 100 } });
    const inTwo = made.targets.filter(({ zone }) => zone === 2).length;
    // Cluster counts take 90 s a vine.
    expect(made.walk!.serviceS).toBe(made.targets.length * 110 + inTwo * 100);
    expect(made.hours).toBeCloseTo((made.walk!.serviceS + made.walk!.walkingS) / 3600, 9);
    // What the screen shows of the stored plan is the same figure.
    expect(made.basis.isWalkLaid).toBe(true);
    expect(answerPlan(made.basis, made.choices).counts.hours).toBeCloseTo(made.hours, 9);
    const before = (await manager.get(`${base()}/zonings/${place.zoningId}/plan-basis`)).body as PlanBasis;
    expect(before.isWalkLaid).toBe(false);
    expect(answerPlan(before, made.choices).counts.walkingHours * 3600).toBeGreaterThan(0.75 * made.walk!.walkingS);
    expect(answerPlan(before, made.choices).counts.walkingHours * 3600).toBeLessThan(1.25 * made.walk!.walkingS);
    const slow = await plan({ secondsPerVine: 20, zoneSeconds: { 2: 100 }, pace: { kmPerHour: made.choices.pace.kmPerHour / 2 } });
    expect(slow.hours - made.hours).toBeCloseTo(made.walk!.walkingS / 3600, 6);
  });

  it('begins with the walking speed and set-up time of the estate, where none are sent', async () => {
    const usual = await plan();
    expect([usual.choices.secondsPerVine, usual.choices.pace.kmPerHour]).toEqual([15, 3.01]);
    const { settings } = await Estate.query().findById(estate.estateId).throwIfNotFound();
    await Estate.query().findById(estate.estateId).patch({ settings: { ...settings, setUpSeconds: 40, walkingKmPerHour: 6.02 } });
    try {
      expect(((await manager.get(`${base()}/zonings/${place.zoningId}/plan-basis`)).body as PlanBasis).settings).toMatchObject({ setUpSeconds: 40, walkingKmPerHour: 6.02 });
      const own = await plan();
      expect([own.choices.secondsPerVine, own.choices.pace.kmPerHour]).toEqual([40, 6.02]);
      expect(own.walk!.walkingS).toBeCloseTo(usual.walk!.walkingS / 2, 6);
      expect(own.walk!.serviceS - usual.walk!.serviceS).toBe(25 * usual.targets.length);
      const typed = await plan({ secondsPerVine: 15, pace: { kmPerHour: 3.01, onSlopes: false } });
      expect([typed.choices.secondsPerVine, typed.choices.pace]).toEqual([15, { kmPerHour: 3.01, onSlopes: false }]);
      // A plan keeps what it was made with.
      expect(((await manager.get(`${base()}/plans/${usual.id}`)).body as PlanView).choices.secondsPerVine).toBe(15);
    } finally {
      await Estate.query().findById(estate.estateId).patch({ settings });
    }
  });

  it('gives reserves to the share of vines that is asked for, first drawn first', async () => {
    const some = await plan({ reserveShare: 0.5 });
    for (const zone of [1, 2, 3]) {
      const drawn = some.targets.filter((target) => target.zone === zone).sort((a, b) => a.drawOrder - b.drawOrder);
      drawn.forEach(({ reserve }, i) => expect(reserve !== null).toBe(i < Math.ceil(drawn.length / 2)));
    }
    expect((await plan({ reserveShare: 0 })).targets.every(({ reserve }) => reserve === null)).toBe(true);
  });

  it('names the measure that drives it and spares the others', async () => {
    const made = await plan({ measures: [clusters, { code: 'brix', margin: 1 }] });
    const brix = made.targets.filter(({ measures }) => measures.includes('brix'));
    expect(brix.length).toBeLessThan(made.targets.length);
    expect(made.targets.every(({ measures }) => measures.includes('clusterCount'))).toBe(true);
    // Taken at the first vines of the draw, so that they too are a random sample.
    expect(Math.max(...brix.map(({ drawOrder }) => drawOrder))).toBe(brix.length / 3);
  });

  it('spreads a pilot of twenty over the zones with at least five in each', async () => {
    const made = await plan({ isPilot: true });
    expect(made.draw.map(({ drawn }) => drawn).reduce((a, b) => a + b)).toBe(20);
    expect(Math.min(...made.draw.map(({ drawn }) => drawn))).toBeGreaterThanOrEqual(5);
  });

  it('locks: then it is not changed, and other vines need a reason and leave the old draw on record', async () => {
    const made = await plan();
    expect((await manager.patch(`${base()}/plans/${made.id}`, { choices: { measures: [{ ...clusters, margin: 0.2 }] } })).body.draw[0].drawn).toBeLessThan(26);
    expect((await manager.post(`${base()}/plans/${made.id}/lock`)).body.state).toBe('locked');
    expect((await manager.patch(`${base()}/plans/${made.id}`, { name: 'Other' })).status).toBe(409);
    expect((await manager.post(`${base()}/plans/${made.id}/redraw`, { reason: ' ' })).status).toBe(422);
    const again = (await manager.post(`${base()}/plans/${made.id}/redraw`, { reason: 'Hail took the north end', seed: 9 })).body as PlanView;
    expect(again.oldDraws).toMatchObject([{ reason: 'Hail took the north end', seed: 7 }]);
    expect(again.seed).toBe(9);
    expect(await AuditEntry.query().where({ action: 'plans.redraw', subjectId: made.id }).resultSize()).toBe(1);
  });

  it('refuses measures that are not in use, doubled or unknown, and bad margins', async () => {
    const tries = [{ measures: [] }, { measures: [clusters, clusters] }, { measures: [{ code: 'colour' }] }, { measures: [{ ...clusters, margin: 0 }] }, { measures: [{ ...clusters, confidence: 0.97 }] }];
    for (const body of tries) expect((await manager.post(`${base()}/zonings/${place.zoningId}/plans`, { name: 'Bad', ...body })).status).toBe(422);
    expect(await Plan.query().resultSize()).toBe(0);
  });

  it('says at once that a plan of thousands of vines is not drawn, and what makes it smaller', async () => {
    const refused = await manager.post(`${base()}/zonings/${place.zoningId}/plans`, { name: 'All of them', measures: [{ ...clusters, margin: 0.0005 }] });
    expect(refused.status).toBe(422);
    expect(refused.body).toMatchObject({ code: 'tooManyVines', detail: expect.stringMatching(/^This plan asks for \d+ vines; up to 600 are drawn at once\. Widen the margins/) });
    const made = await plan();
    const changed = await manager.patch(`${base()}/plans/${made.id}`, { choices: { ...made.choices, measures: [{ ...clusters, margin: 0.0005 }] } });
    expect(changed.status).toBe(422);
    expect(((await manager.get(`${base()}/plans/${made.id}`)).body as PlanView).vines).toBe(made.vines);
  });

  it('leaves as a table that a spreadsheet cannot run and as waypoints', async () => {
    await MeasureRecord.query().where({ estateId: estate.estateId, code: 'clusterCount' }).patch({ inUse: true });
    const made = await plan({ name: '=Plan & co' });
    const csv = await manager.get(`${base()}/plans/${made.id}/export?format=csv`);
    expect(csv.headers['content-type']).toMatch(/text\/csv/);
    expect(csv.text.trim().split('\r\n')).toHaveLength(79);
    const french = await manager.get(`${base()}/plans/${made.id}/export?format=csv`).set('accept-language', 'fr');
    const [head, first] = french.text.split('\r\n');
    expect(head).toBe('\uFEFFwalk_order;block;zone;zone_name;row;vine;reserve_row;reserve_vine;measures;draw_order;longitude;latitude;target_id');
    expect(first).toMatch(/;-?\d+,\d{7};-?\d+,\d{7};/);
    const textOf = (response: NodeJS.ReadableStream, done: (error: Error | null, text: string) => void) => {
      let text = '';
      response.on('data', (part: Buffer) => (text += part.toString('utf8')));
      response.on('end', () => done(null, text));
    };
    const gpx = await manager.get(`${base()}/plans/${made.id}/export?format=gpx`).buffer(true).parse(textOf as never);
    expect((gpx.body as string).match(/<wpt /g)).toHaveLength(78);
    expect(gpx.body).toContain('=Plan &amp; co');
    expect(gpx.body).toMatch(/<desc>Zone 1, Strip 1; reserve R\d+ V\d+<\/desc>/);
    const spoken = await manager.get(`${base()}/plans/${made.id}/export?format=gpx`).set('accept-language', 'it').buffer(true).parse(textOf as never);
    expect(spoken.body).toMatch(/<desc>Zona 1, Strip 1; riserva R\d+ V\d+<\/desc>/);
    expect((await manager.get(`${base()}/plans/${made.id}/export?format=docx`)).status).toBe(422);
  });

  it.skipIf(!hasTool('ogr2ogr'))('is read by GDAL in every format of points, each vine within a centimetre and in its order', async () => {
    await MeasureRecord.query().where({ estateId: estate.estateId, code: 'clusterCount' }).patch({ inUse: true });
    const made = await plan({ name: 'Côte à l’Éperon' });
    const folder = mkdtempSync(join(tmpdir(), 'patchrow-plan-'));
    const titles = { gpx: 'name', geojson: 'walk_order', shapefile: 'WALK_ORDER', geopackage: 'walk_order', kml: 'Name' };
    for (const [format, title] of Object.entries(titles)) {
      const { body, status } = await manager.get(`${base()}/plans/${made.id}/export?format=${format}`).buffer(true).parse((response, done) => {
        const parts: Buffer[] = [];
        response.on('data', (part: Buffer) => parts.push(part));
        response.on('end', () => done(null, Buffer.concat(parts)));
      });
      expect(status).toBe(200);
      const file = join(folder, `targets.${format === 'shapefile' ? 'zip' : format === 'geopackage' ? 'gpkg' : format}`);
      writeFileSync(file, body as Buffer);
      const read = readWithGdal<FeatureCollection<Point | MultiPoint>>(format === 'shapefile' ? `/vsizip/${file}/targets.shp` : file, format === 'gpx' ? 'waypoints' : undefined);
      expect(read.features, format).toHaveLength(made.targets.length);
      read.features.forEach(({ geometry, properties }, at) => {
        const target = made.targets[at]!;
        const [lon, lat] = (geometry.type === 'Point' ? geometry.coordinates : geometry.coordinates[0]) as [number, number];
        const [[[[x, y], [u, v]]]] = polygonsToUtm([[[[lon, lat], [target.position[0], target.position[1]]]]], 32630) as unknown as [[[[number, number], [number, number]]]];
        expect(Math.hypot(x - u, y - v), format).toBeLessThan(0.01);
        expect(String(properties![title]).split(' ')[0], format).toBe(String(target.walkOrder));
      });
    }
    rmSync(folder, { recursive: true, force: true });
  });
});

describe('a plan on zones that are published anew', () => {
  it('is named before they are, with its vines that leave their zone, and says afterwards what is in force', async () => {
    const anew = await makeStripBlock(estate, { name: 'Anew', x: 800 });
    const { id: _id, createdAt: _at, ...same } = await Zoning.query().findById(anew.zoningId).throwIfNotFound();
    const other = Buffer.from(encodeCells(decodeLabels(same.labels!).map((zone) => Math.max(zone - 1, Math.min(zone, 1)))));
    const version = async (number: number, labels: Buffer) => (await Zoning.query().insert({ ...same, number, labels, state: 'draft' } as never)).id;
    const effects = async (zoningId: string) => (await manager.get(`${base()}/zonings/${zoningId}/effects`)).body as PublishEffects;
    const publish = async (zoningId: string) => expect((await manager.post(`${base()}/zonings/${zoningId}/publish`, { revision: same.revision })).status).toBe(200);
    const made = (await manager.post(`${base()}/zonings/${anew.zoningId}/plans`, { name: 'Counts', measures: [clusters], seed: 7 })).body as PlanView;
    const seen = async () => ((await manager.get(`${base()}/plans/${made.id}`)).body as PlanView).replacedBy;
    expect(made.replacedBy).toBeNull();

    // Of three strips of 26 vines the first two become one zone, which one of the two has to leave its own for.
    const second = await version(2, other);
    expect((await effects(second)).plans).toEqual([{ id: made.id, name: 'Counts', isDraft: true, vines: 78, vinesMoved: 26 }]);
    await publish(second);
    expect(await seen()).toEqual({ id: second, number: 2 });
    expect(((await manager.get(`${base()}/plans`)).body as PlanList).items[0]!.replacedBy).toEqual({ id: second, number: 2 });

    // The first version taken up again as it was: the plan fits, and stands on what is in force.
    await manager.post(`${base()}/plans/${made.id}/lock`);
    const third = await version(3, same.labels!);
    expect((await effects(third)).plans).toEqual([]);
    await publish(third);
    expect(await seen()).toBeNull();
    expect((await effects(await version(4, other))).plans).toMatchObject([{ id: made.id, isDraft: false, vinesMoved: 26 }]);

    // A round of it is under way, and one of its vines is read.
    const roundId = (await manager.post(`${base()}/plans/${made.id}/rounds`, { onDate: '2026-07-09', people: [crew.id] })).body.id as string;
    const target = await Target.query().findOne({ planId: made.id }).throwIfNotFound();
    await Reading.query().insert({ id: randomUUID(), estateId: estate.estateId, seasonId: same.seasonId, blockId: anew.blockId, rowId: target.rowId, ordinal: target.ordinal, roundId, targetId: target.id, measureCode: 'clusters', value: 20, unit: '', takenAt: new Date('2026-07-09T09:00:00Z'), source: 'field' });
    const fifth = await version(5, other);
    const before = await effects(fifth);
    expect(before.openRounds).toMatchObject([{ id: roundId, planId: made.id, vines: 78, done: 1 }]);
    expect(before.byZone.map(({ zone, vines }) => [zone, vines])).toEqual([[1, 2656], [2, 1328]]);
    expect(before.byZone.map(({ sampled }) => sampled).sort()).toEqual([0, 1]);
    expect(before.byZone.map(({ sampled, toVisit }) => sampled + toVisit)).toEqual([52, 26]);
    const put = (by: typeof manager, zoningId: string, callOff: string[]) => by.post(`${base()}/zonings/${zoningId}/publish`, { revision: same.revision, callOff });
    // A round of another block is none of theirs, and with it nothing is published.
    const there = await plan();
    await manager.post(`${base()}/plans/${there.id}/lock`);
    const elsewhere = (await manager.post(`${base()}/plans/${there.id}/rounds`, { onDate: '2026-07-09', people: [crew.id] })).body.id as string;
    for (const stray of [randomUUID(), elsewhere]) expect((await put(manager, fifth, [roundId, stray])).status).toBe(404);
    expect((await Round.query().findById(elsewhere))!.state).toBe('sent');
    expect((await Zoning.query().findById(fifth))!.state).toBe('draft');
    expect((await Round.query().findById(roundId))!.state).toBe('sent');
    expect((await put(manager, fifth, [roundId])).status).toBe(200);
    expect((await Round.query().findById(roundId))!.state).toBe('called off');
    expect(await AuditEntry.query().where({ subjectId: roundId, action: 'rounds.callOff' })).toHaveLength(1);
    const after = await effects(await version(6, same.labels!));
    expect([after.openRounds, after.byZone.map(({ sampled }) => sampled).sort(), after.byZone.map(({ toVisit }) => toVisit)]).toEqual([[], [0, 0, 1], [0, 0, 0]]);
  });

  it('gives what it asked to a plan on the new ones, as far as it makes sense there', async () => {
    const { zoningId, blockId } = await makeStripBlock(estate, { name: 'Handed on', x: 1200 });
    const { id: _id, createdAt: _at, ...same } = await Zoning.query().findById(zoningId).throwIfNotFound();
    // The strips the other way round, the middle one and the last as one.
    const other = await Zoning.query().insert({ ...same, number: 2, state: 'draft', labels: Buffer.from(encodeCells(decodeLabels(same.labels!).map((zone) => [0, 2, 1, 1][zone]!))) } as never);
    const brix = { code: 'brix', margin: 0.6, marginKind: 'absolute', confidence: 0.9, means: { 1: 21 } };
    const asked = { measures: [brix, clusters], people: 3, minimum: 7, secondsPerVine: 33, pace: { kmPerHour: 2 }, zoneSeconds: { 1: 40, 2: 15, 3: 25 } };
    const made = (await manager.post(`${base()}/zonings/${zoningId}/plans`, { name: 'Sugar', ...asked })).body as PlanView;
    const takenOn = async (on: string, planId = made.id) => manager.get(`${base()}/zonings/${on}/earlier-plans/${planId}`);

    expect((await takenOn(zoningId)).body).toEqual({ id: made.id, name: 'Sugar', zoningNumber: 1, seasonName: made.basis.seasonName, choices: made.choices, leftOut: { zones: [], measures: [] } });
    const there = (await takenOn(other.id)).body as EarlierPlan;
    expect(there.choices).toEqual({ ...made.choices, measures: [{ ...brix, means: { 2: 21 } }, clusters], zoneSeconds: { 2: 40, 1: 15 } });
    expect(there.leftOut).toEqual({ zones: [3], measures: [] });

    // Measures that the estate has given up since, and a plan from the days before walks were tried, whose time at a vine held the way to it.
    await MeasureRecord.query().where({ estateId: estate.estateId, code: 'brix' }).patch({ inUse: false });
    await app.knex.raw("update plans set result = jsonb_set(result, '{basis,walks}', '[]') where id = ?", [made.id]);
    const later = (await takenOn(other.id)).body as EarlierPlan;
    await MeasureRecord.query().where({ estateId: estate.estateId, code: 'brix' }).patch({ inUse: true });
    expect(later.choices).toMatchObject({ measures: [clusters], secondsPerVine: made.basis.settings.setUpSeconds, pace: { kmPerHour: made.basis.settings.walkingKmPerHour }, people: 3 });
    expect(later.leftOut.measures.map(({ code }) => code)).toEqual(['brix']);

    // Vines of another outline are not those of the plan: what was said of its zones is said of none.
    await Zoning.query().findById(zoningId).patch({ gridKey: 'before the outline changed' });
    expect((await takenOn(other.id)).body).toMatchObject({ choices: { zoneSeconds: {} }, leftOut: { zones: [1, 2, 3] } });

    const elsewhere = await plan({ name: 'Next door' });
    const refused = await takenOn(other.id, elsewhere.id);
    expect([refused.status, refused.body.code, refused.body.detail]).toEqual([422, 'otherBlock', '"Next door" is a plan of Zoned plot; these zones are of Handed on. Begin from a plan of Handed on, or make a new plan.']);
    const neighbour = await app.addEstate('Neighbour');
    const theirs = await makeStripBlock(neighbour);
    const theirManager = await app.as((await app.addPerson(neighbour.estateId, 'manager')).email);
    const theirPlan = (await theirManager.post(`/api/estates/${neighbour.estateId}/zonings/${theirs.zoningId}/plans`, { name: 'Theirs', measures: [clusters] })).body as PlanView;
    for (const [on, planId] of [[other.id, theirPlan.id], [theirs.zoningId, made.id], [theirs.zoningId, theirPlan.id], [other.id, randomUUID()]]) expect((await takenOn(on!, planId)).status).toBe(404);
    expect((await takenOn(other.id, 'no-id')).status).toBe(404);
    expect(await Plan.query().where({ estateId: estate.estateId, blockId })).toHaveLength(1);
  });
});

describe('a round', () => {
  const send = async (people: string[], over: Record<string, unknown> = {}) => {
    const made = await plan({ measures: [{ ...clusters, margin: 0.2 }], ...over });
    await manager.post(`${base()}/plans/${made.id}/lock`);
    const answer = await manager.post(`${base()}/plans/${made.id}/rounds`, { onDate: '2026-07-09', people, gate: 'Kiln gate', notes: 'Bring the red tape' });
    expect(answer.status, answer.text).toBe(201);
    return { plan: made, roundId: answer.body.id as string };
  };
  const fieldOf = async (agent: Agent, roundId: string) => (await agent.get(`${base()}/rounds/${roundId}`)).body as FieldRound;

  it('is not sent from a draft, nor to people who may not record', async () => {
    const made = await plan();
    const body = { onDate: '2026-07-09', people: [crew.id] };
    expect((await manager.post(`${base()}/plans/${made.id}/rounds`, body)).body.code).toBe('notLocked');
    await manager.post(`${base()}/plans/${made.id}/lock`);
    const guest = await app.addPerson(estate.estateId, 'guest');
    expect((await manager.post(`${base()}/plans/${made.id}/rounds`, { ...body, people: [guest.id] })).body.code).toBe('notAWalker');
    const stranger = await app.addPerson((await app.addEstate()).estateId, 'crew');
    expect((await manager.post(`${base()}/plans/${made.id}/rounds`, { ...body, people: [stranger.id] })).body.code).toBe('notAWalker');
  });

  it('shares the walk with loads within 15 percent, each vine to one person, and writes to both', async () => {
    const { plan: made, roundId } = await send([crew.id, otherCrew.id]);
    const [nia, teo] = [await fieldOf(await app.as(crew.email), roundId), await fieldOf(await app.as(otherCrew.email), roundId)];
    const ids = [...nia.stops, ...teo.stops].map(({ targetId }) => targetId);
    expect([...ids].sort()).toEqual(made.targets.map(({ id }) => id).sort());
    const { items } = (await manager.get(`${base()}/rounds`)).body as { items: RoundSummary[] };
    const loads = items[0]!.people.map(({ seconds }) => seconds);
    expect(Math.max(...loads) / Math.min(...loads)).toBeLessThanOrEqual(1.15);
    const mails = await MailMessage.query().where({ kind: 'assignment' });
    expect(mails).toHaveLength(2);
    expect(mails[0]!.bodyText).toContain(`/e/${estate.estateId}/field/rounds/${roundId}`);
    expect(mails[0]!.bodyText).toContain('Kiln gate');
  });

  it('holds all that a phone needs for the day', async () => {
    const { roundId } = await send([crew.id]);
    const field = await fieldOf(await app.as(crew.email), roundId);
    expect(field).toMatchObject({ blockName: 'Zoned plot', gate: 'Kiln gate', state: 'sent', startPostColour: 'white', endPostColour: 'red' });
    expect(field.rows).toHaveLength(48);
    expect(field.rows.every(({ runs, vineCount }) => runs.reduce((sum, { from, to }) => sum + to - from + 1, 0) === vineCount)).toBe(true);
    expect(field.stops.map(({ number }) => number)).toEqual(field.stops.map((_, i) => i + 1));
    expect(field.stops.every(({ ahead, rowLabel, reserve }) => ahead >= 0 && rowLabel !== '' && reserve !== null)).toBe(true);
    expect(field.measures[0]).toMatchObject({ code: 'clusterCount', margin: 0.2, marginKind: 'relative', minimum: 0, maximum: 150 });
    expect(field.zones.reduce((sum, { targets }) => sum + targets, 0)).toBe(field.stops.length);
  });

  it('is hidden from crew it was not sent to', async () => {
    const { roundId } = await send([crew.id]);
    const stranger = await app.as(otherCrew.email);
    expect((await stranger.get(`${base()}/rounds`)).body.items).toEqual([]);
    expect((await stranger.get(`${base()}/rounds/${roundId}`)).status).toBe(404);
    expect((await stranger.patch(`${base()}/rounds/${roundId}`, { state: 'open' })).status).toBe(404);
    expect((await stranger.post(`${base()}/rounds/${roundId}/acknowledge`)).status).toBe(404);
  });

  it('takes the readings of its crew, who see their own values and which vines are done', async () => {
    const { roundId } = await send([crew.id, otherCrew.id]);
    const [nia, teo] = [await app.as(crew.email), await app.as(otherCrew.email)];
    const stop = (await fieldOf(nia, roundId)).stops[0]!;
    const reading = { id: randomUUID(), blockId: place.blockId, roundId, targetId: stop.targetId, rowId: stop.rowId, ordinal: stop.ordinal, measureCode: 'clusterCount', value: 31, unit: 'clusters', takenAt: '2026-07-09T07:00:00Z' };
    expect((await nia.post(`${base()}/readings`, { readings: [reading] })).body.outcomes).toMatchObject([{ state: 'received' }]);
    const after = await fieldOf(nia, roundId);
    expect(after.received).toMatchObject([{ value: 31, targetId: stop.targetId, zone: stop.zone }]);
    const seenByTeo = await fieldOf(teo, roundId);
    expect(seenByTeo.received).toEqual([]);
    expect(seenByTeo.doneTargetIds).toEqual([stop.targetId]);
    expect((await manager.get(`${base()}/rounds`)).body.items[0]).toMatchObject({ done: 1 });
  });

  it('is not opened while an entry restriction is in force, the longest of several counting', async () => {
    const { roundId } = await send([crew.id]);
    const agent = await app.as(crew.email);
    const restriction = (over: object) => manager.post(`${base()}/restrictions`, { blockId: place.blockId, startsAt: '2026-07-08T18:00:00Z', endsAt: '2026-07-09T18:00:00Z', product: 'Copper', labelInterval: '24 h', ...over });
    await restriction({});
    await restriction({ endsAt: '2026-07-10T18:00:00Z', product: 'Sulphur', labelInterval: '48 h' });
    const refused = await agent.patch(`${base()}/rounds/${roundId}`, { state: 'open', startedAt: '2026-07-09T07:00:00Z' });
    expect(refused.status).toBe(409);
    expect(refused.body).toMatchObject({ code: 'entryRestricted', until: '2026-07-10T18:00:00.000Z' });
    expect(refused.body.detail).toMatch(/Sulphur.*label.*law/s);
    const { lifters } = await fieldOf(agent, roundId);
    expect(lifters.length).toBeGreaterThan(0);
    for (const name of lifters) expect(refused.body.detail).toContain(name);
    expect((await agent.patch(`${base()}/rounds/${roundId}`, { state: 'open', startedAt: '2026-07-11T07:00:00Z' })).status).toBe(204);
    // Open already, such as by others: whoever goes in later is stopped all the same.
    expect((await agent.patch(`${base()}/rounds/${roundId}`, { state: 'open', startedAt: '2026-07-10T07:00:00Z' })).body.code).toBe('entryRestricted');
  });

  it('is opened beside restricted rows that it does not touch', async () => {
    const { roundId, plan: made } = await send([crew.id]);
    const agent = await app.as(crew.email);
    const walked = new Set(made.targets.map(({ rowId }) => rowId));
    const free = place.rows.find(({ id }) => !walked.has(id))!;
    const visit = { state: 'open', startedAt: '2026-07-09T07:00:00Z' };
    await manager.post(`${base()}/restrictions`, { blockId: place.blockId, rowIds: [free.id], startsAt: '2026-07-08T18:00:00Z', endsAt: '2026-07-09T18:00:00Z', product: 'Copper', labelInterval: '24 h' });
    expect((await agent.patch(`${base()}/rounds/${roundId}`, visit)).status).toBe(204);
  });

  it('may be opened and closed again and again, and called off by its sender only', async () => {
    const { roundId, plan: made } = await send([crew.id]);
    const agent = await app.as(crew.email);
    for (let i = 0; i < 2; i++) expect((await agent.patch(`${base()}/rounds/${roundId}`, { state: 'open' })).status).toBe(204);
    expect((await agent.patch(`${base()}/rounds/${roundId}`, { state: 'called off' })).status).toBe(403);
    expect((await manager.post(`${base()}/plans/${made.id}/redraw`, { reason: 'Nicer vines' })).body.code).toBe('roundsOut');
    expect((await manager.patch(`${base()}/rounds/${roundId}`, { state: 'called off' })).status).toBe(204);
    expect((await agent.patch(`${base()}/rounds/${roundId}`, { state: 'open' })).body.code).toBe('calledOff');
  });

  it('prints a sheet a person with every vine, for its own crew and nobody else of the crew', async () => {
    const { roundId } = await send([crew.id]);
    const pdf = await (await app.as(crew.email)).get(`${base()}/rounds/${roundId}/sheet?paper=letter`).buffer(true).parse((response, done) => {
      const parts: Buffer[] = [];
      response.on('data', (part: Buffer) => parts.push(part));
      response.on('end', () => done(null, Buffer.concat(parts)));
    });
    expect(pdf.headers['content-type']).toBe('application/pdf');
    const text = (pdf.body as Buffer).toString('latin1');
    expect(text.startsWith('%PDF-')).toBe(true);
    // US Letter is 612 by 792 points.
    expect(text).toContain('/MediaBox [0 0 612 792]');
    expect((await (await app.as(otherCrew.email)).get(`${base()}/rounds/${roundId}/sheet`)).status).toBe(404);
    expect((await manager.get(`${base()}/rounds/${roundId}/sheet?paper=a0`)).status).toBe(422);
  });

  it('ends for each who walks it when they are done, and for all with the last of them or from the office', async () => {
    const { roundId } = await send([crew.id, otherCrew.id]);
    const [first, second] = [await app.as(crew.email), await app.as(otherCrew.email)];
    const seen = async () => ((await manager.get(`${base()}/rounds`)).body as { items: RoundSummary[] }).items[0]!;
    for (let i = 0; i < 2; i++) expect((await first.patch(`${base()}/rounds/${roundId}`, { state: 'closed' })).status).toBe(204);
    expect((await seen()).state).toBe('sent');
    expect((await seen()).people.map(({ id, finishedAt }) => [id, finishedAt !== null])).toEqual(expect.arrayContaining([[crew.id, true], [otherCrew.id, false]]));
    expect((await fieldOf(second, roundId)).state).toBe('sent');
    expect((await second.patch(`${base()}/rounds/${roundId}`, { state: 'closed', whole: true })).status).toBe(403);
    expect((await second.patch(`${base()}/rounds/${roundId}`, { state: 'closed' })).status).toBe(204);
    expect((await seen()).state).toBe('closed');
    expect(await AuditEntry.query().where({ action: 'rounds.finish', subjectId: roundId }).resultSize()).toBe(2);
    const { roundId: another } = await send([crew.id, otherCrew.id]);
    expect((await manager.patch(`${base()}/rounds/${another}`, { state: 'closed', whole: true })).status).toBe(204);
    expect((await fieldOf(second, another)).state).toBe('closed');
  });

  it('is under way with its first reading, where it began out of reach', async () => {
    const { roundId } = await send([crew.id]);
    const agent = await app.as(crew.email);
    const { stops, measures, blockId } = await fieldOf(agent, roundId);
    const [stop, measure] = [stops[0]!, measures[0]!];
    const reading = { id: randomUUID(), blockId, roundId, targetId: stop.targetId, rowId: stop.rowId, ordinal: stop.ordinal, measureCode: measure.code, value: measure.minimum, unit: measure.unit, takenAt: '2026-07-09T07:00:00Z' };
    for (let i = 0; i < 2; i++) await agent.post(`${base()}/readings`, { readings: [reading], findings: [] });
    expect((await fieldOf(agent, roundId)).state).toBe('open');
    expect(await AuditEntry.query().where({ action: 'rounds.open', subjectId: roundId }).resultSize()).toBe(1);
  });

  it('is noted as seen once', async () => {
    const { roundId } = await send([crew.id]);
    const agent = await app.as(crew.email);
    for (let i = 0; i < 2; i++) expect((await agent.post(`${base()}/rounds/${roundId}/acknowledge`)).status).toBe(204);
    expect((await manager.get(`${base()}/rounds`)).body.items[0].people[0].acknowledgedAt).not.toBeNull();
    expect(await AuditEntry.query().where({ action: 'rounds.acknowledge', subjectId: roundId }).resultSize()).toBe(1);
  });
});
