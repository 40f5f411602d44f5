import type { Knex } from 'knex';

/** Zoning runs with one candidate a number of zones, the manager's ordered edits, and the zones traced from labels. */
export async function up(knex: Knex): Promise<void> {
  await knex.raw(`
    create table zonings (
      id uuid primary key default gen_random_uuid(),
      estate_id uuid not null,
      block_id uuid not null,
      season_id uuid not null,
      number int not null,
      name text not null default '',
      state text not null check (state in ('running', 'proposed', 'draft', 'live', 'retired', 'failed')),
      options jsonb not null,
      seed bigint not null,
      engine_version text not null,
      grid_key text not null default '',
      verdict jsonb,
      evidence jsonb,
      advised_zones int,
      chosen_zones int,
      base_labels bytea,
      labels bytea,
      revision int not null default 0,
      published_at timestamptz,
      published_by uuid references people (id),
      created_by uuid references people (id),
      created_at timestamptz not null default now(),
      unique (estate_id, id),
      unique (estate_id, block_id, number),
      foreign key (estate_id, block_id) references blocks (estate_id, id) on delete cascade,
      foreign key (estate_id, season_id) references seasons (estate_id, id)
    );
    create unique index zonings_one_live on zonings (estate_id, block_id, season_id) where state = 'live';

    create table zoning_candidates (
      id uuid primary key default gen_random_uuid(),
      estate_id uuid not null,
      zoning_id uuid not null,
      zone_count int not null check (zone_count between 1 and 6),
      labels bytea not null,
      doubt bytea,
      zones jsonb not null,
      unique (zoning_id, zone_count),
      foreign key (estate_id, zoning_id) references zonings (estate_id, id) on delete cascade
    );

    create table zone_edits (
      id uuid primary key default gen_random_uuid(),
      estate_id uuid not null,
      zoning_id uuid not null,
      sequence int not null,
      operation jsonb not null,
      reason text not null default '',
      undone boolean not null default false,
      author_id uuid references people (id),
      at timestamptz not null default now(),
      unique (zoning_id, sequence),
      foreign key (estate_id, zoning_id) references zonings (estate_id, id) on delete cascade
    );

    create table zones (
      id uuid primary key default gen_random_uuid(),
      estate_id uuid not null,
      zoning_id uuid not null,
      number int not null check (number between 1 and 60),
      name text not null,
      colour text,
      geometry geometry(MultiPolygon, 4326) not null,
      area_m2 double precision not null,
      vine_count int not null default 0,
      missing_count int not null default 0,
      statistics jsonb not null default '{}',
      unique (estate_id, id),
      unique (zoning_id, number),
      foreign key (estate_id, zoning_id) references zonings (estate_id, id) on delete cascade
    );
    create index zones_geometry on zones using gist (geometry);
  `);
}

export async function down(knex: Knex): Promise<void> {
  await knex.raw('drop table zones, zone_edits, zoning_candidates, zonings cascade');
}
