import { randomUUID } from 'node:crypto';
import { afterAll, beforeAll, describe, expect, it } from 'vitest';
import type { BagLine } from '../../shared/contracts/bags.ts';
import type { BlockView, ChangedBlock } from '../../shared/contracts/blocks.ts';
import type { ConflictList } from '../../shared/contracts/conflicts.ts';
import type { PlanView } from '../../shared/contracts/plans.ts';
import type { PlanWalk } from '../../shared/contracts/planWalks.ts';
import type { ResultsView } from '../../shared/contracts/results.ts';
import type { FieldRound } from '../../shared/contracts/rounds.ts';
import { labelCode } from '../../shared/field/labelCode.ts';
import { latLonText } from '../../shared/geo/latLonText.ts';
import { toUtm } from '../../shared/geo/utm.ts';
import { labelSheet } from '../../server/exporters/labelSheet.ts';
import { AuditEntry } from '../../server/models/AuditEntry.ts';
import { FieldPhoto } from '../../server/models/FieldPhoto.ts';
import { Round } from '../../server/models/Round.ts';
import { StoredFile } from '../../server/models/StoredFile.ts';
import { closeComputePool, openComputePool } from '../../server/workers/computePool.ts';
import { readPdf } from '../core/pdfText.ts';
import { makeZonedBlock, type ZonedBlock } from './support/makeZonedBlock.ts';
import { startTestApp, type Agent, type TestApp } from './support/testApp.ts';

let app: TestApp;
let estate: Awaited<ReturnType<TestApp['addEstate']>>;
let block: ZonedBlock;
let owner: Agent;
let crew: { id: string; email: string };
let plan: PlanView;
const base = () => `/api/estates/${estate.estateId}`;

beforeAll(async () => {
  app = await startTestApp();
  openComputePool(1);
  estate = await app.addEstate('Bush vines');
  owner = await app.as(estate.ownerEmail);
  crew = await app.addPerson(estate.estateId, 'crew', 'Nia Holt');
  block = await makeZonedBlock({ estateId: estate.estateId, personId: estate.ownerId }, { name: 'Goblets', withoutRows: true, rowSpacingM: 2, vineSpacingM: 2 });
  const made = await owner.post(`${base()}/zonings/${block.zoningId}/plans`, { name: 'Clusters', measures: [{ code: 'clusterCount', marginKind: 'relative', margin: 0.15, confidence: 0.95 }], seed: 7 });
  plan = made.body as PlanView;
});
afterAll(async () => {
  await closeComputePool();
  await app.close();
});

describe('a block whose vines stand without rows', () => {
  it('says so, and can be told otherwise without losing a place', async () => {
    const at = `${base()}/blocks/${block.blockId}`;
    const { version, withoutRows, vines } = (await owner.get(at)).body as BlockView;
    expect(withoutRows).toBe(true);
    const changed = (await owner.write('patch', at).set('if-match', `"${version}"`).send({ withoutRows: false })).body as ChangedBlock;
    expect(changed).toMatchObject({ withoutRows: false, rowEffects: null, vines });
    await owner.write('patch', at).set('if-match', `"${changed.version}"`).send({ withoutRows: true });
  });

  it('gives targets and reserves by coordinates, balanced over its zones as elsewhere', () => {
    expect(plan.targets.length).toBeGreaterThan(10);
    for (const { place, position, reserve } of plan.targets) {
      expect(place![0]).toBeCloseTo(position[0], 6);
      expect(place![1]).toBeCloseTo(position[1], 6);
      expect(reserve?.place).toHaveLength(2);
    }
    expect(new Set(plan.targets.map(({ zone }) => zone))).toEqual(new Set([1, 2]));
  });

  it('leaves in files by place numbers and coordinates, and names no row that is not there', async () => {
    const file = async (format: string) => String((await owner.get(`${base()}/plans/${plan.id}/export?format=${format}`).buffer(true)).text);
    const [first] = plan.targets;
    const gpx = await file('gpx');
    expect(gpx).toContain(`<name>1 ${first!.rowLabel}-${first!.vineNumber}</name><desc>Zone ${first!.zone}; reserve ${latLonText(first!.reserve!.place!)}</desc>`);
    expect(gpx).not.toMatch(/<name>[^<]*R\d/);
    expect(await file('kml')).toContain(`<name>1 ${first!.rowLabel}-${first!.vineNumber}</name>`);
    expect(await file('csv')).toContain(`${first!.position[0].toFixed(7)},${first!.position[1].toFixed(7)}`);
  });

  it('is walked straight from vine to vine', async () => {
    const walk = (await owner.get(`${base()}/plans/${plan.id}/walk?people=2`)).body as PlanWalk;
    const xyOf = (id: string) => toUtm(plan.targets.find((target) => target.id === id)!.position, block.ground.block.epsg);
    for (const { targetIds, lengthM } of walk.people) {
      const way = [toUtm(walk.gate, block.ground.block.epsg), ...targetIds.map(xyOf), toUtm(walk.gate, block.ground.block.epsg)];
      expect(lengthM).toBeCloseTo(way.slice(1).reduce((sum, [x, y], i) => sum + Math.hypot(x - way[i]![0], y - way[i]![1]), 0), 0);
    }
    expect(walk.people.flatMap(({ targetIds }) => targetIds).sort()).toEqual(plan.targets.map(({ id }) => id).sort());
  });

  it('is read on phone and paper by the same coordinates, and its zones have their means', async () => {
    await owner.post(`${base()}/plans/${plan.id}/lock`);
    const { id: roundId } = (await owner.post(`${base()}/plans/${plan.id}/rounds`, { onDate: '2026-07-09', people: [crew.id] })).body as { id: string };
    const phone = await app.as(crew.email);
    const round = (await phone.get(`${base()}/rounds/${roundId}`)).body as FieldRound;
    expect(round.stops.map(({ place }) => place)).toEqual(round.stops.map(({ targetId }) => plan.targets.find(({ id }) => id === targetId)!.place));
    expect(round.stops.every(({ ahead, enterBy }) => ahead === 0 && enterBy === 'inside')).toBe(true);
    const sheet = readPdf((await phone.get(`${base()}/rounds/${roundId}/sheet?paper=a4`)).body as Buffer).flatMap(({ texts }) => texts).join('\n');
    for (const { place } of round.stops) expect(sheet).toContain(latLonText(place!));
    expect(sheet).toContain('No rows here');
    const readings = round.stops.map(({ targetId, rowId, ordinal, zone }) => ({ id: randomUUID(), value: 20 + 10 * zone, blockId: block.blockId, roundId, targetId, rowId, ordinal, measureCode: 'clusterCount', unit: 'clusters', takenAt: '2026-07-09T08:00:00Z' }));
    expect((await phone.post(`${base()}/readings`, { readings })).status).toBe(200);
    const { values } = (await owner.get(`${base()}/zonings/${block.zoningId}/results`)).body as ResultsView;
    expect(Object.fromEntries(values.map(({ zone, mean }) => [zone, mean]))).toEqual({ 1: 30, 2: 40 });
    expect(values).toHaveLength(2);
  });

  it('is named by the same coordinates where records meet, in photos, on bags, on their labels and in the history', async () => {
    const [round] = await Round.query().where({ planId: plan.id });
    const [stop] = plan.targets;
    const vine = { rowId: stop!.rowId, ordinal: stop!.ordinal };
    const again = { ...vine, id: randomUUID(), value: 77, blockId: block.blockId, roundId: round!.id, targetId: stop!.id, measureCode: 'clusterCount', unit: 'clusters', takenAt: '2026-07-09T09:00:00Z', seenAs: { row: '999', vine: 1 } };
    await (await app.as(crew.email)).post(`${base()}/readings`, { readings: [again] });
    const { items: cards } = (await owner.get(`${base()}/conflicts`)).body as ConflictList;
    // Numbers of places are no names here: that they changed is nothing to ask about.
    expect(cards.map(({ kind }) => kind)).toEqual(['sameVine']);
    expect(cards[0]!.readings.map(({ place, seenAs }) => ({ place, seenAs }))).toEqual([0, 1].map(() => ({ place: stop!.place, seenAs: null })));
    await owner.post(`${base()}/conflicts/${cards[0]!.id}/settle`, { choice: 'keepOne', keptReadingId: again.id });
    const deed = await AuditEntry.query().findOne({ action: 'conflicts.settle', subjectId: cards[0]!.id }).throwIfNotFound();
    expect(deed.after).toMatchObject({ at: { place: stop!.place } });

    const file = await StoredFile.query().insert({ estateId: estate.estateId, sha256: 'b'.repeat(64), bytes: 3, originalName: 'x.jpg', uploadedBy: crew.id });
    await FieldPhoto.query().insert({ ...vine, id: randomUUID(), estateId: estate.estateId, blockId: block.blockId, roundId: round!.id, fileId: file.id, personId: crew.id, note: '', takenAt: new Date('2026-07-09T09:00:00Z') });
    expect((await owner.get(`${base()}/field-photos`)).body.items).toMatchObject([{ place: stop!.place }]);

    const bag = { id: randomUUID(), code: labelCode(4711), roundId: round!.id, blockId: block.blockId, vines: [vine], closedAt: '2026-07-09T09:10:00Z' };
    expect((await owner.post(`${base()}/bags`, { bags: [bag] })).body.outcomes).toMatchObject([{ state: 'received' }]);
    expect(((await owner.get(`${base()}/bags?round=${round!.id}&days=400`)).body as { items: BagLine[] }).items.map(({ vinePlace }) => vinePlace)).toEqual([stop!.place]);
    const label = { block: 'Goblets', date: '9 Jul 2026', zone: '1', vine: { row: '1', number: 1, place: stop!.place }, stop: 1, measures: 'Cluster count', person: 'Nia Holt' };
    const words = readPdf(await labelSheet([{ code: bag.code, facts: label }], { paper: 'a4', language: 'en', title: 'Labels' })).flatMap(({ texts }) => texts).join('\n');
    expect(words).toContain(latLonText(stop!.place!));
    expect(words).not.toContain('Row');
  });
});
