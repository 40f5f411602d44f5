import type { Knex } from 'knex';
import type { Transaction } from 'objection';
import { runMigrations } from 'graphile-worker';
import type { Access } from '../access/access.ts';
import { Job } from '../models/Job.ts';

export type JobKind = 'zoning' | 'readFile' | 'placeLayer';

const attempts = 3;

/** Makes or updates the queue's own schema. */
export async function prepareQueue(databaseUrl: string): Promise<void> {
  await runMigrations({ connectionString: databaseUrl });
}

/**
 * Writes a job and puts it in the queue within the transaction of its cause,
 * so that a job exists exactly when the thing it works on does. Returns its id.
 */
export async function enqueueJob(trx: Transaction, access: Access, job: { kind: JobKind; subjectType: string; subjectId: string; input?: Record<string, unknown> }): Promise<string> {
  const record = await Job.query(trx).insert({
    estateId: access.estateId,
    kind: job.kind,
    subjectType: job.subjectType,
    subjectId: job.subjectId,
    input: job.input ?? {},
    createdBy: access.personId,
  });
  await (trx as unknown as Knex).raw("select graphile_worker.add_job('work', json_build_object('jobId', ?::text), max_attempts := ?)", [record.id, attempts]);
  return record.id;
}
