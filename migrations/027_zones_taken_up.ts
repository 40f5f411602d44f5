import type { Knex } from 'knex';

/** Names and colours that the edits of a zoning begin with: those of the version it was taken up from. Zones as computed have none. */
export async function up(knex: Knex): Promise<void> {
  await knex.raw("alter table zonings add column base_zones jsonb not null default '[]'");
}

export async function down(knex: Knex): Promise<void> {
  await knex.raw('alter table zonings drop column base_zones');
}
