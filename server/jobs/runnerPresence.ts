import pg from 'pg';

/** Any number that nothing else in this database locks. */
const presence = 7_203_117;

/**
 * Marks this process as one that takes jobs, for as long as its connection lives, and frees the jobs of processes that died.
 * A killed process leaves its jobs locked for hours; when no other process is marked, every locked job is such a one.
 * Resolves to what ends the mark.
 */
export async function announceRunner(databaseUrl: string): Promise<() => Promise<void>> {
  const client = new pg.Client({ connectionString: databaseUrl });
  // The server going away ends the mark; the queue's own pool reports it.
  client.on('error', () => undefined);
  await client.connect();
  const { rows } = await client.query<{ alone: boolean }>('select pg_try_advisory_lock($1) as alone', [presence]);
  const alone = rows[0]!.alone;
  if (alone) {
    await client.query('select graphile_worker.force_unlock_workers(array(select distinct locked_by from graphile_worker.jobs where locked_by is not null))');
  }
  await client.query('select pg_advisory_lock_shared($1)', [presence]);
  if (alone) await client.query('select pg_advisory_unlock($1)', [presence]);
  return () => client.end();
}
