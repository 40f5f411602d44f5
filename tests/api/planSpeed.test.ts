import { randomUUID } from 'node:crypto';
import { appendFileSync } from 'node:fs';
import { afterAll, beforeAll, expect, it } from 'vitest';
import { measures as catalogue } from '../../shared/catalog/measures.ts';
import type { PlanView } from '../../shared/contracts/plans.ts';
import { Reading } from '../../server/models/Reading.ts';
import { Season } from '../../server/models/Season.ts';
import { makeStripBlock, type StripBlock } from './support/makeStripBlock.ts';
import { startTestApp, type Agent, type TestApp } from './support/testApp.ts';

/** Ten hectares, five zones, six measures with a hundred earlier readings each: what a manager waits for. PATCHROW_PLAN_RUNS asks for more of it. */
const codes = ['brix', 'ph', 'ta', 'clusterCount', 'clusterWeight', 'berryWeight'];
const runs = Number(process.env.PATCHROW_PLAN_RUNS ?? 2);
let app: TestApp;
let estate: Awaited<ReturnType<TestApp['addEstate']>>;
let place: StripBlock;
let manager: Agent;

beforeAll(async () => {
  app = await startTestApp();
  estate = await app.addEstate('Ten hectares');
  place = await makeStripBlock(estate, { width: 400, height: 250, zones: 5 });
  manager = await app.as((await app.addPerson(estate.estateId, 'manager')).email);
  const season = await Season.query().where({ estateId: estate.estateId }).first().throwIfNotFound();
  await Reading.query().insert(codes.flatMap((code) => Array.from({ length: 100 }, (_, i) => {
    const { typicalMean, unit } = catalogue.find((one) => one.code === code)!;
    return { id: randomUUID(), estateId: estate.estateId, seasonId: season.id, blockId: place.blockId, rowId: place.rows[3 + i]!.id, ordinal: 10 + i, measureCode: code, value: typicalMean * (1 + ((i * 7) % 11) / 100), unit, takenAt: new Date(`${season.startsOn}T09:00:00Z`), source: 'field' as const, flags: [] };
  })));
});
afterAll(() => app.close());

interface Waited {
  what: string;
  cpuMs: number;
  wallMs: number;
}

async function waited<Answer>(what: string, work: () => Promise<Answer>): Promise<[Answer, Waited]> {
  const [cpu, wall] = [process.cpuUsage(), performance.now()];
  const answer = await work();
  const { user, system } = process.cpuUsage(cpu);
  return [answer, { what, cpuMs: (user + system) / 1000, wallMs: performance.now() - wall }];
}

it('a plan with its vines and walk is there in under a second, and what the screen asks for before it in half of that', async () => {
  const base = `/api/estates/${estate.estateId}`;
  const rows: Waited[] = [];
  for (const question of ['eachZone', 'block'] as const)
    for (let run = 0; run < runs; run++) {
      const [basis, asked] = await waited('basis', () => manager.get(`${base}/zonings/${place.zoningId}/plan-basis`));
      expect(basis.status, basis.text).toBe(200);
      const [made, saved] = await waited(`plan, ${question}`, () => manager.post(`${base}/zonings/${place.zoningId}/plans`, { name: `Run ${run}`, measures: codes.map((code) => ({ code })), question, seed: run }));
      expect(made.status, made.text).toBe(201);
      const plan = made.body as PlanView;
      expect(plan.targets.length).toBe(plan.vines);
      expect(plan.basis.zones).toHaveLength(5);
      const [, seen] = await waited('opened again', () => manager.get(`${base}/plans/${plan.id}`));
      rows.push(asked, saved, seen);
    }
  if (process.env.PATCHROW_PLAN_REPORT) for (const row of rows) appendFileSync(process.env.PATCHROW_PLAN_REPORT, `${JSON.stringify(row)}\n`);
  const least = (what: string) => Math.min(...rows.filter((row) => row.what.startsWith(what)).map(({ cpuMs }) => cpuMs));
  // Work of the processor: a machine with too much to do makes everybody wait, not only here.
  expect(least('plan')).toBeLessThan(1000);
  expect(least('basis')).toBeLessThan(500);
  expect(least('opened again')).toBeLessThan(500);
});
