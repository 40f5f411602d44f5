import type { Knex } from 'knex';

/** Readings are read without those that a later one corrects: without this index that compares every reading with every other. */
export async function up(knex: Knex): Promise<void> {
  await knex.raw('create index readings_supersedes on readings (estate_id, supersedes) where supersedes is not null');
}

export async function down(knex: Knex): Promise<void> {
  await knex.raw('drop index readings_supersedes');
}
