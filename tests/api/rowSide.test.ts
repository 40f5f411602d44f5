import { afterAll, beforeAll, describe, expect, it } from 'vitest';
import type { MeasureView } from '../../shared/contracts/measures.ts';
import type { PlanView } from '../../shared/contracts/plans.ts';
import type { PlanWalk } from '../../shared/contracts/planWalks.ts';
import type { FieldRound } from '../../shared/contracts/rounds.ts';
import { readPdf } from '../core/pdfText.ts';
import { closeComputePool, openComputePool } from '../../server/workers/computePool.ts';
import { makeStripBlock, type StripBlock } from './support/makeStripBlock.ts';
import { startTestApp, type Agent, type TestApp } from './support/testApp.ts';

let app: TestApp;
let place: StripBlock;
let manager: Agent;
let crew: { id: string };
let base: string;

beforeAll(async () => {
  app = await startTestApp();
  openComputePool(1);
  const estate = await app.addEstate('Sides');
  // Its rows run north, so that they face east and west.
  place = await makeStripBlock(estate);
  base = `/api/estates/${estate.estateId}`;
  manager = await app.as((await app.addPerson(estate.estateId, 'manager')).email);
  crew = await app.addPerson(estate.estateId, 'crew', 'Nia Holt');
});
afterAll(async () => {
  await closeComputePool();
  await app.close();
});

const asked = (...codes: string[]) => ({ name: 'Plan', seed: 7, measures: codes.map((code) => ({ code, marginKind: 'relative', margin: 0.5, confidence: 0.95 })) });
async function readFrom(code: string, rowSide: string): Promise<void> {
  const { items } = (await manager.get(`${base}/measures`)).body as { items: MeasureView[] };
  const changed = await manager.patch(`${base}/measures/${items.find((measure) => measure.code === code)!.id}`, { rowSide });
  expect([changed.status, changed.body.rowSide]).toEqual([200, rowSide]);
}
/** Vines of the plan that the way passes half a row's distance to their east (1) or west (-1); rows are 2.5 m apart. */
function passedOn(sign: 1 | -1, { targets }: PlanView, { people }: PlanWalk): number {
  const path = people.flatMap((person) => person.path);
  return targets.filter(({ position: [lon, lat] }) => {
    const metresEast = (to: readonly number[]) => (to[0]! - lon) * 111_320 * Math.cos((lat * Math.PI) / 180);
    const passing = path.slice(1).flatMap((to, i) => {
      const from = path[i]!;
      const isAlong = Math.abs(metresEast(to) - metresEast(from)) < 0.5 && Math.min(from[1], to[1]) - 1e-6 <= lat && lat <= Math.max(from[1], to[1]) + 1e-6;
      return isAlong ? [(metresEast(from) + metresEast(to)) / 2] : [];
    });
    return passing.some((east) => Math.abs(east - sign * 1.25) < 0.05);
  }).length;
}

describe('a measure that is read from one side of the row', () => {
  it.each([['east', 1], ['west', -1]] as const)('%s: the walk to the same vines passes each of them there, and is longer for it', async (side, sign) => {
    await readFrom('rotShare', side);
    const plan = (await manager.post(`${base}/zonings/${place.zoningId}/plans`, asked('rotShare'))).body as PlanView;
    expect(plan.targets.length).toBeGreaterThan(10);
    const walk = (await manager.get(`${base}/plans/${plan.id}/walk?people=1`)).body as PlanWalk;
    expect(passedOn(sign, plan, walk)).toBe(plan.targets.length);
    await readFrom('rotShare', 'either');
    const free = (await manager.post(`${base}/zonings/${place.zoningId}/plans`, asked('rotShare'))).body as PlanView;
    expect(free.targets.map(({ rowId, ordinal }) => `${rowId} ${ordinal}`).sort()).toEqual(plan.targets.map(({ rowId, ordinal }) => `${rowId} ${ordinal}`).sort());
    expect(passedOn(sign, free, (await manager.get(`${base}/plans/${free.id}/walk?people=1`)).body as PlanWalk)).toBeLessThan(free.targets.length);
    expect(free.walk!.walkingS).toBeLessThan(plan.walk!.walkingS);
  });

  it('in rows that run to that point of the compass, either side will do', async () => {
    await readFrom('rotShare', 'south');
    const sided = (await manager.post(`${base}/zonings/${place.zoningId}/plans`, asked('rotShare'))).body as PlanView;
    await readFrom('rotShare', 'either');
    const free = (await manager.post(`${base}/zonings/${place.zoningId}/plans`, asked('rotShare'))).body as PlanView;
    expect(sided.walk).toEqual(free.walk);
  });

  it('phone and sheet say it, as it was when the plan was made', async () => {
    await readFrom('rotShare', 'west');
    const plan = (await manager.post(`${base}/zonings/${place.zoningId}/plans`, asked('rotShare', 'clusterCount'))).body as PlanView;
    await readFrom('rotShare', 'east');
    await manager.post(`${base}/plans/${plan.id}/lock`);
    const { id } = (await manager.post(`${base}/plans/${plan.id}/rounds`, { onDate: '2026-07-09', people: [crew.id] })).body as { id: string };
    const { measures } = (await manager.get(`${base}/rounds/${id}`)).body as FieldRound;
    expect(measures.map(({ code, rowSide }) => [code, rowSide])).toEqual([['rotShare', 'west'], ['clusterCount', 'either']]);
    const sheet = await manager.get(`${base}/rounds/${id}/sheet`).buffer(true).parse((answer, done) => { const parts: Buffer[] = []; answer.on('data', (part: Buffer) => parts.push(part)); answer.on('end', () => done(null, Buffer.concat(parts))); });
    const [page] = await readPdf(sheet.body as Buffer);
    expect(page!.texts.join(' ')).toMatch(/Side: Rot, west side/);
  });

  it('two measures from opposite sides are refused with what to do', async () => {
    await readFrom('rotShare', 'east');
    await readFrom('clusterCount', 'west');
    const answer = await manager.post(`${base}/zonings/${place.zoningId}/plans`, asked('rotShare', 'clusterCount'));
    expect([answer.status, answer.body.code]).toEqual([422, 'bothSides']);
    expect(answer.body.detail).toMatch(/different sides of the rows of Zoned plot.*plan for each/);
    expect((await manager.post(`${base}/zonings/${place.zoningId}/plans`, asked('clusterCount'))).status).toBe(201);
  });
});
