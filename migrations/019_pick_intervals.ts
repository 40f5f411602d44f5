import type { Knex } from 'knex';

/**
 * Entry and pre-harvest interval end apart: lifting entry early leaves the day before which nothing may be picked as it
 * is, and a change of that day is kept with its ground, person and reason. What had been lifted before both had their
 * own record was lifted together, by one decision, and stays so.
 */
export async function up(knex: Knex): Promise<void> {
  await knex.raw(`
    create table pick_interval_changes (
      id uuid primary key default gen_random_uuid(),
      estate_id uuid not null,
      restriction_id uuid not null,
      basis text not null check (basis in ('mistyped', 'notApplied', 'labelAllows', 'withEntry')),
      day_before date,
      day_after date,
      reason text not null,
      changed_by uuid not null references people (id),
      changed_at timestamptz not null default now(),
      unique (estate_id, id),
      foreign key (estate_id, restriction_id) references entry_restrictions (estate_id, id) on delete cascade,
      check (day_before is distinct from day_after)
    );
    create index pick_interval_changes_of on pick_interval_changes (estate_id, restriction_id, changed_at);
    insert into pick_interval_changes (estate_id, restriction_id, basis, day_before, day_after, reason, changed_by, changed_at)
      select estate_id, id, 'withEntry', no_pick_before, null, lifted_reason, coalesce(lifted_by, set_by), lifted_at
      from entry_restrictions where lifted_at is not null and no_pick_before is not null;
    update entry_restrictions set no_pick_before = null where lifted_at is not null and no_pick_before is not null;
  `);
}

export async function down(knex: Knex): Promise<void> {
  await knex.raw(`
    update entry_restrictions r set no_pick_before = c.day_before
      from pick_interval_changes c where c.restriction_id = r.id and c.estate_id = r.estate_id and c.basis = 'withEntry';
    drop table pick_interval_changes;
  `);
}
