import { mkdtempSync, readdirSync, readFileSync, rmSync } from 'node:fs';
import { getPriority, tmpdir } from 'node:os';
import { join } from 'node:path';
import { afterAll, beforeAll, expect, it, vi } from 'vitest';
import { startJobProcess, type JobProcess } from '../../server/jobs/jobProcess.ts';
import { prepareQueue } from '../../server/jobs/queue.ts';
import { setLogLevel } from '../../server/log.ts';
import { Job } from '../../server/models/Job.ts';
import { startTestApp, type TestApp } from './support/testApp.ts';

let app: TestApp;
let jobs: JobProcess;
const folder = mkdtempSync(join(tmpdir(), 'patchrow-jobs-'));
const wait = { timeout: 60_000, interval: 200 };

beforeAll(async () => {
  setLogLevel('silent');
  app = await startTestApp();
  await prepareQueue(app.config.databaseUrl);
  vi.stubEnv('DATABASE_URL', app.config.databaseUrl);
  vi.stubEnv('PATCHROW_DATA', folder);
  vi.stubEnv('NODE_ENV', 'test');
  vi.stubEnv('LOG_LEVEL', 'silent');
  jobs = startJobProcess();
});

afterAll(async () => {
  await jobs?.stop();
  await app.close();
  vi.unstubAllEnvs();
  rmSync(folder, { recursive: true, force: true });
});

/** Puts something into the queue that is done as soon as anybody looks at it, and waits until somebody has. */
async function expectTaken(): Promise<void> {
  await Job.knex().raw("select graphile_worker.add_job('work', json_build_object('jobId', gen_random_uuid()))");
  await expect.poll(async () => Number((await Job.knex().raw('select count(*) as left from graphile_worker.jobs')).rows[0].left), wait).toBe(0);
}

it.skipIf(process.platform !== 'linux')('takes jobs beside the server, all of it at a lower priority than requests', async () => {
  await expectTaken();
  const tasks = `/proc/${jobs.processId()}/task`;
  const niceness = readdirSync(tasks).map((thread) => Number(readFileSync(`${tasks}/${thread}/stat`, 'utf8').replace(/^.*\) /s, '').split(' ')[16]));
  expect(niceness.length).toBeGreaterThan(4);
  // Counted from what these tests themselves were started with; 19 is the last there is.
  expect(new Set(niceness)).toEqual(new Set([Math.min(19, getPriority() + 10)]));
});

it('is replaced when it dies, and takes what was queued meanwhile', async () => {
  const first = jobs.processId()!;
  process.kill(first, 'SIGKILL');
  await expect.poll(() => jobs.processId(), wait).not.toBe(first);
  await expectTaken();
  expect(jobs.processId()).not.toBe(first);
});

it('ends when it is stopped, and is not started again', async () => {
  const last = jobs.processId()!;
  await jobs.stop();
  expect(jobs.processId()).toBeNull();
  expect(() => process.kill(last, 0)).toThrow('ESRCH');
});
