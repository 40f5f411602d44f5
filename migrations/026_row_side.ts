import type { Knex } from 'knex';

/** Some measures are taken from one face of the row only: sun, rot and spray differ between them. */
export async function up(knex: Knex): Promise<void> {
  await knex.raw("alter table measures add column row_side text not null default 'either' check (row_side in ('either', 'north', 'east', 'south', 'west'))");
}

export async function down(knex: Knex): Promise<void> {
  await knex.raw('alter table measures drop column row_side');
}
