import { afterAll, beforeAll, describe, expect, it } from 'vitest';
import type { PlanView } from '../../shared/contracts/plans.ts';
import { readLabelCode } from '../../shared/field/labelCode.ts';
import { closeComputePool, openComputePool } from '../../server/workers/computePool.ts';
import { Label } from '../../server/models/Label.ts';
import { makeStripBlock } from './support/makeStripBlock.ts';
import { startTestApp, type Agent, type TestApp } from './support/testApp.ts';

let app: TestApp;
let base: string;
let zoningId: string;
let manager: Agent;
let crew: { id: string; email: string };
let other: { id: string; email: string };

beforeAll(async () => {
  app = await startTestApp();
  openComputePool(1);
  const estate = await app.addEstate('Label test');
  base = `/api/estates/${estate.estateId}`;
  zoningId = (await makeStripBlock(estate)).zoningId;
  manager = await app.as((await app.addPerson(estate.estateId, 'manager')).email);
  crew = await app.addPerson(estate.estateId, 'crew', 'Nia Holt');
  other = await app.addPerson(estate.estateId, 'crew', 'Teo Marsh');
});
afterAll(async () => {
  await closeComputePool();
  await app.close();
});

async function sent(measures: object[], people: string[]): Promise<{ plan: PlanView; roundId: string }> {
  const plan = (await manager.post(`${base}/zonings/${zoningId}/plans`, { name: 'Bags', measures, seed: 3 })).body as PlanView;
  await manager.post(`${base}/plans/${plan.id}/lock`);
  const round = await manager.post(`${base}/plans/${plan.id}/rounds`, { onDate: '2026-08-20', people });
  expect(round.status, round.text).toBe(201);
  return { plan, roundId: round.body.id as string };
}

async function pdf(agent: Agent, path: string): Promise<{ status: number; text: string }> {
  const answer = await agent.post(`${base}${path}`).buffer(true).parse((response, done) => {
    const parts: Buffer[] = [];
    response.on('data', (part: Buffer) => parts.push(part));
    response.on('end', () => done(null, Buffer.concat(parts).toString('latin1')));
  });
  return { status: answer.status, text: answer.body as string };
}
const pages = (text: string) => text.match(/\/Type \/Page\b/gu)?.length ?? 0;

describe('bag labels', () => {
  it('are one a vine that something of goes to the laboratory, in walking order, and stay the same when printed again', async () => {
    const { plan, roundId } = await sent([{ code: 'brix' }, { code: 'clusterCount', margin: 0.3 }], [crew.id, other.id]);
    const first = await pdf(manager, `/rounds/${roundId}/labels?paper=single`);
    const bagged = plan.targets.filter(({ measures }) => measures.includes('brix'));
    expect(first.status).toBe(200);
    expect(pages(first.text)).toBe(bagged.length);
    const labels = await Label.query().where({ roundId }).orderBy(['personId', 'number']);
    expect(labels.map(({ targetId }) => targetId).sort()).toEqual(bagged.map(({ id }) => id).sort());
    expect(labels.every(({ code, measureCodes }) => 'code' in readLabelCode(code) && measureCodes.join() === 'brix')).toBe(true);
    // 14 labels a sheet of A4.
    expect(pages((await pdf(manager, `/rounds/${roundId}/labels?paper=a4`)).text)).toBe(Math.ceil(bagged.length / 14));
    expect((await Label.query().where({ roundId }).orderBy(['personId', 'number'])).map(({ code }) => code)).toEqual(labels.map(({ code }) => code));
  });

  it('are one a zone where a bag takes the whole zone', async () => {
    const { roundId } = await sent([{ code: 'brix' }], [crew.id]);
    expect(pages((await pdf(manager, `/rounds/${roundId}/labels?paper=single&per=zone`)).text)).toBe(3);
    expect(await Label.query().where({ roundId }).whereNull('targetId').resultSize()).toBe(3);
  });

  it('are refused in words where nothing goes to the laboratory', async () => {
    const { roundId } = await sent([{ code: 'clusterCount' }], [crew.id]);
    const answer = await manager.post(`${base}/rounds/${roundId}/labels`);
    expect(answer.status).toBe(422);
    expect(answer.body.code).toBe('noBags');
  });

  it('of their own walk only for crew, and none of a round of others', async () => {
    const { roundId } = await sent([{ code: 'brix' }], [crew.id, other.id]);
    const own = await pdf(await app.as(crew.email), `/rounds/${roundId}/labels?paper=single`);
    const labels = await Label.query().where({ roundId });
    expect(pages(own.text)).toBe(labels.length);
    expect(labels.every(({ personId }) => personId === crew.id)).toBe(true);
    const single = await sent([{ code: 'brix' }], [crew.id]);
    expect((await (await app.as(other.email)).post(`${base}/rounds/${single.roundId}/labels`)).status).toBe(404);
  });

  it('come blank by the roll, no code twice', async () => {
    const before = await Label.query().whereNull('roundId').resultSize();
    expect(pages((await pdf(manager, '/labels?count=25&paper=letter')).text)).toBe(3);
    expect((await Label.query().whereNull('roundId').resultSize()) - before).toBe(25);
    expect((await manager.post(`${base}/labels?count=0`)).status).toBe(422);
    expect((await manager.post(`${base}/labels?count=501`)).status).toBe(422);
  });
});
