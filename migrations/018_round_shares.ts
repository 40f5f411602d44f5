import type { Knex } from 'knex';

/** When somebody was done with their part of a round: several people walk one, and one who is done does not end it for the others. */
export async function up(knex: Knex): Promise<void> {
  await knex.raw('alter table round_people add column finished_at timestamptz');
}

export async function down(knex: Knex): Promise<void> {
  await knex.raw('alter table round_people drop column finished_at');
}
