import type { Knex } from 'knex';

/** A lot may have its own way to potential alcohol; without one it takes the estate's. */
export async function up(knex: Knex): Promise<void> {
  await knex.raw(`alter table lots add column alcohol_method text check (alcohol_method in ('brixFactor', 'sugarTable', 'solidsLessAllowance'))`);
}

export async function down(knex: Knex): Promise<void> {
  await knex.raw('alter table lots drop column alcohol_method');
}
