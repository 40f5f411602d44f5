import type { Knex } from 'knex';

/** Estates that began before the census by sample was a measure get it like new ones. */
export async function up(knex: Knex): Promise<void> {
  await knex.raw(`
    insert into measures (estate_id, code, unit, decimals, minimum, maximum, margin_kind, margin, confidence, sampled_unit, spread_kind, spread_value, spread_source, typical_mean, seconds_per_sample, weighting, skewed, measured_in)
    select id, 'missingVines', '/20', 0, 0, 20, 'absolute', 0.4, 0.95, 'vine', 'sd', 1.2, 'binomial for 4 % missing, a third more because gaps come together; planning judgement', 0.8, 45, 'vines', true, 'field'
    from estates
    on conflict (estate_id, code) do nothing;
  `);
}

export async function down(knex: Knex): Promise<void> {
  await knex.raw(`delete from measures where code = 'missingVines'`);
}
