import type { Knex } from 'knex';

/** Bush vines stand in no rows, and of some blocks nobody knows them: their vines are found by coordinates. */
export async function up(knex: Knex): Promise<void> {
  await knex.raw('alter table blocks add column without_rows boolean not null default false');
}

export async function down(knex: Knex): Promise<void> {
  await knex.raw('alter table blocks drop column without_rows');
}
