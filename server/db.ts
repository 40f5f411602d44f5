import knexPackage, { type Knex } from 'knex';
import { knexSnakeCaseMappers, Model } from 'objection';
import pg from 'pg';
import * as m001 from '../migrations/001_estates.ts';
import * as m002 from '../migrations/002_blocks_and_layers.ts';
import * as m003 from '../migrations/003_zones.ts';
import * as m004 from '../migrations/004_sampling.ts';
import * as m005 from '../migrations/005_lots.ts';
import * as m006 from '../migrations/006_lab.ts';
import * as m007 from '../migrations/007_labels.ts';
import * as m009 from '../migrations/009_field.ts';
import * as m011 from '../migrations/011_surveys.ts';
import * as m012 from '../migrations/012_invited_roles_and_backups.ts';
import * as m010 from '../migrations/010_zoning_editors.ts';
import * as m008 from '../migrations/008_harvest_records.ts';
import * as m013 from '../migrations/013_correction_index.ts';
import * as m014 from '../migrations/014_finding_places.ts';
import * as m015 from '../migrations/015_lot_history.ts';
import * as m016 from '../migrations/016_earlier_readings.ts';
import * as m017 from '../migrations/017_marks_of_older_layers.ts';
import * as m018 from '../migrations/018_round_shares.ts';
import * as m019 from '../migrations/019_pick_intervals.ts';
import * as m020 from '../migrations/020_vine_history.ts';
import * as m021 from '../migrations/021_day_order.ts';
import * as m022 from '../migrations/022_missing_vines.ts';
import * as m023 from '../migrations/023_lot_alcohol_methods.ts';
import * as m024 from '../migrations/024_weather_history.ts';
import * as m025 from '../migrations/025_blocks_without_rows.ts';
import * as m026 from '../migrations/026_row_side.ts';
import * as m027 from '../migrations/027_zones_taken_up.ts';
import * as m028 from '../migrations/028_zone_memberships.ts';

/** Named by hand so that the same names are recorded from source and from the built code. */
const migrations: Record<string, Knex.Migration> = {
  '001_estates': m001,
  '002_blocks_and_layers': m002,
  '003_zones': m003,
  '004_sampling': m004,
  '005_lots': m005,
  '006_lab': m006,
  '007_labels': m007,
  '009_field': m009,
  '011_surveys': m011,
  '012_invited_roles_and_backups': m012,
  '010_zoning_editors': m010,
  '008_harvest_records': m008,
  '013_correction_index': m013,
  '014_finding_places': m014,
  '015_lot_history': m015,
  '016_earlier_readings': m016,
  '017_marks_of_older_layers': m017,
  '018_round_shares': m018,
  '019_pick_intervals': m019,
  '020_vine_history': m020,
  '021_day_order': m021,
  '022_missing_vines': m022,
  '023_lot_alcohol_methods': m023,
  '024_weather_history': m024,
  '025_blocks_without_rows': m025,
  '026_row_side': m026,
  '027_zones_taken_up': m027,
  '028_zone_memberships': m028,
};

// A date column is a calendar day, not an instant: keep it as text. Counts are small enough for numbers.
pg.types.setTypeParser(pg.types.builtins.DATE, (value) => value);
pg.types.setTypeParser(pg.types.builtins.INT8, (value) => Number(value));

/** Opens the pool and binds the models to it. Column names are snake_case in the database, camelCase here. */
export function openDatabase(databaseUrl: string, poolSize = 10): Knex {
  const knex = knexPackage({
    client: 'pg',
    connection: { connectionString: databaseUrl, application_name: 'patchrow' },
    pool: { min: 0, max: poolSize },
    ...knexSnakeCaseMappers(),
  });
  Model.knex(knex);
  return knex;
}

/** Brings the schema to the newest version. Safe to call from several processes: knex takes a lock. */
export async function migrateToLatest(knex: Knex): Promise<string[]> {
  await knex.raw('create extension if not exists postgis');
  await knex.raw('create extension if not exists btree_gist');
  const [, applied] = (await knex.migrate.latest({
    migrationSource: {
      getMigrations: () => Promise.resolve(Object.keys(migrations).sort()),
      getMigrationName: (name: string) => name,
      getMigration: (name: string) => Promise.resolve(migrations[name]!),
    },
    tableName: 'schema_versions',
  })) as [number, string[]];
  return applied;
}
