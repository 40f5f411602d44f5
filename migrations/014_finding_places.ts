import type { Knex } from 'knex';

/** Where on a block a finding about a layer holds: a byte a cell, a bit a finding. Layers placed before have none. */
export async function up(knex: Knex): Promise<void> {
  await knex.raw('alter table block_layers add column marks bytea');
}

export async function down(knex: Knex): Promise<void> {
  await knex.raw('alter table block_layers drop column marks');
}
