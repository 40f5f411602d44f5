import type { Knex } from 'knex';

/** How far each cell belongs to each zone of a candidate, a plane of bytes a zone number. Null for one zone, and in runs of before. */
export async function up(knex: Knex): Promise<void> {
  await knex.raw('alter table zoning_candidates add column memberships bytea');
}

export async function down(knex: Knex): Promise<void> {
  await knex.raw('alter table zoning_candidates drop column memberships');
}
