import type { Knex } from 'knex';

/** Rounds of several blocks that were sent as one day: their place in it, and the way from the block before. */
export async function up(knex: Knex): Promise<void> {
  await knex.raw(`
    alter table rounds
      add column day_place int check (day_place >= 1),
      add column way_s double precision check (way_s >= 0);
  `);
}

export async function down(knex: Knex): Promise<void> {
  await knex.raw('alter table rounds drop column day_place, drop column way_s');
}
