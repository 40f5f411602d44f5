import type { Knex } from 'knex';

const placed = ['partial', 'gaps', 'impossible', 'saturated', 'stripes', 'stripesAlongRows', 'rowBeat', 'cloud', 'shadow'];

/** Layers that were placed before findings had places are placed again from their files, in the background. */
export async function up(knex: Knex): Promise<void> {
  const queue = (await knex.raw("select to_regnamespace('graphile_worker') is not null as there")) as { rows: { there: boolean }[] };
  // Without the queue there was never a layer either.
  if (!queue.rows[0]!.there) return;
  await knex.raw(
    `with wanting as (
       select distinct on (l.estate_id, l.import_id) l.estate_id, l.id
       from layers l join block_layers b on b.estate_id = l.estate_id and b.layer_id = l.id
       where l.retired_at is null and l.import_id is not null and b.marks is null
         and exists (select 1 from jsonb_array_elements(b.findings) f where f->>'code' = any(?))
       order by l.estate_id, l.import_id, l.created_at
     ), made as (
       insert into jobs (estate_id, kind, subject_type, subject_id) select estate_id, 'placeLayer', 'layer', id from wanting returning id
     )
     select graphile_worker.add_job('work', json_build_object('jobId', id::text), max_attempts := 3) from made`,
    [placed],
  );
}

/** What was placed again stays: it holds everything that it held before. */
export function down(): Promise<void> {
  return Promise.resolve();
}
