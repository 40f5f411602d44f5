import type { Knex } from 'knex';

/** Labels as they were printed: for the stops of a round, or blank for a roll that is bound when a bag is closed. */
export async function up(knex: Knex): Promise<void> {
  await knex.raw(`
    create table labels (
      id uuid primary key default gen_random_uuid(),
      estate_id uuid not null references estates (id) on delete cascade,
      code text not null,
      round_id uuid,
      person_id uuid references people (id),
      target_id uuid,
      zone_id uuid,
      number int,
      measure_codes text[] not null default '{}',
      printed_by uuid references people (id),
      printed_at timestamptz not null default now(),
      unique (estate_id, id),
      unique (estate_id, code),
      foreign key (estate_id, round_id) references rounds (estate_id, id) on delete cascade
    );
    create index labels_round on labels (estate_id, round_id);
  `);
}

export async function down(knex: Knex): Promise<void> {
  await knex.raw('drop table labels');
}
