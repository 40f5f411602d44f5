import type { Knex } from 'knex';

/** How a layer was made of point readings: the method, its figures, and the readings set aside with their places and reasons. */
export async function up(knex: Knex): Promise<void> {
  await knex.raw('alter table block_layers add column survey jsonb');
}

export async function down(knex: Knex): Promise<void> {
  await knex.raw('alter table block_layers drop column survey');
}
