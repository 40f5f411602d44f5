import type { JobView } from '../../shared/contracts/jobs.ts';
import type { Access } from '../access/access.ts';
import { Job } from '../models/Job.ts';
import { Zoning } from '../models/Zoning.ts';

export async function readJob(access: Access, jobId: string): Promise<JobView> {
  return viewOf(await Job.query().findOne({ estateId: access.estateId, id: jobId }).throwIfNotFound());
}

/** Asks a job to stop. What it had begun is thrown away by its handler; finished jobs stay as they are. A zoning then ends without a result. */
export async function cancelJob(access: Access, jobId: string, now: Date): Promise<JobView> {
  const { estateId } = access;
  await Job.transaction(async (trx) => {
    const job = await Job.query(trx).findOne({ estateId, id: jobId }).whereIn('state', ['queued', 'running']).forUpdate();
    if (!job) return;
    await Job.query(trx).where({ estateId, id: jobId }).patch({ state: 'cancelled', finishedAt: now });
    if (job.kind === 'zoning') await Zoning.query(trx).where({ estateId, id: job.subjectId, state: 'running' }).patch({ state: 'failed' });
  });
  return readJob(access, jobId);
}

function viewOf(job: Job): JobView {
  return {
    id: job.id,
    kind: job.kind,
    subjectType: job.subjectType,
    subjectId: job.subjectId,
    state: job.state,
    stage: job.stage,
    progress: job.progress,
    problem: job.problem,
    result: job.result,
    createdAt: job.createdAt.toISOString(),
    finishedAt: job.finishedAt?.toISOString() ?? null,
  };
}
