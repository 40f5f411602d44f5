import { appendFileSync } from 'node:fs';
import { afterAll, beforeAll, describe, expect, it } from 'vitest';
import { makeFieldRound, type FieldRoundMade } from './support/makeFieldRound.ts';
import { syncRun, type StoredReading, type SyncRunResult } from './support/syncRun.ts';
import { startTestApp, type TestApp } from './support/testApp.ts';

// The bench asks for hundreds of days and writes what came out; the tests run a dozen.
const count = Number(process.env.PATCHROW_SYNC_RUNS ?? 12);
const firstSeed = Number(process.env.PATCHROW_SYNC_SEED ?? 1);
const report = process.env.PATCHROW_SYNC_REPORT;

let app: TestApp;
let made: FieldRoundMade;

beforeAll(async () => {
  app = await startTestApp();
  made = await makeFieldRound(app, { vines: 20, crew: 3 });
}, 120_000);
afterAll(() => app.close());

async function stored(): Promise<StoredReading[]> {
  const { rows } = (await app.knex.raw(
    `select r.id, r.target_id as "targetId", r.person_id as "personId", r.value, r.supersedes, r.excluded_reason is null and not exists (select 1 from readings c where c.supersedes = r.id) as counts from readings r where r.estate_id = ?`,
    [made.estateId],
  )) as { rows: StoredReading[] };
  return rows;
}

describe('days of several phones in random orders', () => {
  it('lose nothing, double nothing and list every vine that two people read', async () => {
    const results: SyncRunResult[] = [];
    for (let run = 0; run < count; run++) {
      await app.knex.raw('truncate readings, reading_conflicts cascade');
      results.push(await syncRun(made, stored, firstSeed + run));
    }
    const sum = (key: keyof SyncRunResult) => results.reduce((total, result) => total + result[key], 0);
    const total = { runs: count, taps: sum('taps'), requests: sum('requests'), lost: sum('lost'), doubled: sum('doubled'), conflictsMissing: sum('conflictsMissing'), conflictsInvented: sum('conflictsInvented') };
    if (report) appendFileSync(report, `${JSON.stringify(total)}\n`);
    expect(total.taps).toBeGreaterThan(5 * count);
    expect(total).toMatchObject({ lost: 0, doubled: 0, conflictsMissing: 0, conflictsInvented: 0 });
  }, 600_000);
});
