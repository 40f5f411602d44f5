import type { Knex } from 'knex';

/** Who has a draft of zones open to edit, so that the second of two people is told of the first. */
export async function up(knex: Knex): Promise<void> {
  await knex.raw(`
    create table zoning_editors (
      id uuid primary key default gen_random_uuid(),
      estate_id uuid not null,
      zoning_id uuid not null,
      person_id uuid not null references people (id) on delete cascade,
      seen_at timestamptz not null default now(),
      unique (zoning_id, person_id),
      foreign key (estate_id, zoning_id) references zonings (estate_id, id) on delete cascade deferrable initially immediate
    );
  `);
}

export async function down(knex: Knex): Promise<void> {
  await knex.raw('drop table zoning_editors');
}
