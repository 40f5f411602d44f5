import { Logger, run, type Runner } from 'graphile-worker';
import { problemOf } from '../errors.ts';
import { log } from '../log.ts';
import { Job } from '../models/Job.ts';
import { handlers } from './handlers.ts';
import { announceRunner } from './runnerPresence.ts';

/** Thrown inside a handler when somebody cancelled the job; nothing of it is kept. */
export class JobCancelled extends Error {}

export interface JobContext {
  job: Job;
  /** Tells how far the work is; throws JobCancelled when the job was cancelled meanwhile. */
  report: (stage: string, progress: number) => Promise<void>;
}

/** Takes jobs from the queue until stopped. Several processes may run this at once. */
export async function startRunner(databaseUrl: string): Promise<Runner> {
  const withdraw = await announceRunner(databaseUrl);
  const runner = await run({
    connectionString: databaseUrl,
    concurrency: 2,
    noHandleSignals: true,
    pollInterval: 2000,
    maxPoolSize: 4,
    logger: quietLogger(),
    taskList: {
      work: async (payload, helpers) => {
        const { jobId } = payload as { jobId: string };
        await workOn(jobId, { lastTry: helpers.job.attempts >= helpers.job.max_attempts });
      },
    },
  });
  void runner.promise.then(withdraw, withdraw).catch((error: unknown) => log.error('queue', error));
  return runner;
}

async function workOn(jobId: string, { lastTry }: { lastTry: boolean }): Promise<void> {
  const job = await Job.query().findById(jobId);
  if (!job || job.state === 'done' || job.state === 'cancelled') return;
  await job.$query().patchAndFetch({ state: 'running', attempts: job.attempts + 1, startedAt: job.startedAt ?? new Date(), heartbeatAt: new Date() });
  const handler = handlers[job.kind];
  try {
    if (!handler) throw new Error(`No handler for job kind "${job.kind}"`);
    const result = await handler.work({ job, report: reporter(jobId) });
    await Job.query().findById(jobId).where({ state: 'running' }).patch({ state: 'done', stage: 'done', progress: 1, result: result ?? null, finishedAt: new Date() });
  } catch (error) {
    if (error instanceof JobCancelled) return;
    const problem = problemOf(error);
    const ours = problem.status >= 500;
    if (ours) log.error('job failed', error, { jobId, kind: job.kind });
    // A fault of ours may pass, a fault of the input will not: only the first is tried again.
    if (ours && !lastTry) throw error;
    await Job.query().findById(jobId).patch({ state: 'failed', problem: problem.detail, finishedAt: new Date() });
    await handler?.failed?.(job, problem.detail);
  }
}

function reporter(jobId: string): JobContext['report'] {
  let last = 0;
  return async (stage, progress) => {
    const now = Date.now();
    if (now - last < 150 && progress < 1) return;
    last = now;
    const alive = await Job.query().findById(jobId).where({ state: 'running' }).patch({ stage, progress: Math.min(1, Math.max(0, progress)), heartbeatAt: new Date() });
    if (alive === 0) throw new JobCancelled();
  };
}

/** The queue's own chatter stays out of the log; its errors do not. */
function quietLogger(): Logger {
  return new Logger(() => (level, message) => {
    if (level === 'error') log.error('queue', new Error(message));
  });
}
