import type { Knex } from 'knex';

/** Measures, sampling plans, rounds and readings. A reading belongs to a vine and a time; its zone is looked up. */
export async function up(knex: Knex): Promise<void> {
  await knex.raw(`
    create table measures (
      id uuid primary key default gen_random_uuid(),
      estate_id uuid not null references estates (id) on delete cascade,
      code text not null,
      name text not null default '',
      unit text not null,
      decimals int not null check (decimals between 0 and 4),
      minimum double precision not null,
      maximum double precision not null check (maximum > minimum),
      margin_kind text not null check (margin_kind in ('absolute', 'relative')),
      margin double precision not null check (margin > 0),
      confidence double precision not null default 0.95 check (confidence in (0.9, 0.95, 0.98, 0.99)),
      sampled_unit text not null default 'vine',
      spread_kind text not null check (spread_kind in ('sd', 'cv')),
      spread_value double precision not null check (spread_value > 0),
      spread_source text not null,
      typical_mean double precision not null,
      seconds_per_sample double precision not null default 60,
      weighting text not null default 'vines' check (weighting in ('vines', 'mass')),
      skewed boolean not null default false,
      measured_in text not null default 'field' check (measured_in in ('field', 'lab')),
      in_use boolean not null default true,
      unique (estate_id, id),
      unique (estate_id, code)
    );

    create table plans (
      id uuid primary key default gen_random_uuid(),
      estate_id uuid not null,
      block_id uuid not null,
      zoning_id uuid not null,
      season_id uuid not null,
      name text not null,
      state text not null default 'draft' check (state in ('draft', 'locked', 'closed')),
      is_pilot boolean not null default false,
      options jsonb not null,
      result jsonb not null,
      seed bigint not null,
      engine_version text not null,
      draws jsonb not null default '[]',
      locked_at timestamptz,
      created_by uuid references people (id),
      created_at timestamptz not null default now(),
      unique (estate_id, id),
      foreign key (estate_id, block_id) references blocks (estate_id, id) on delete cascade,
      foreign key (estate_id, zoning_id) references zonings (estate_id, id) on delete cascade,
      foreign key (estate_id, season_id) references seasons (estate_id, id)
    );

    create table quotas (
      id uuid primary key default gen_random_uuid(),
      estate_id uuid not null,
      plan_id uuid not null,
      zone_id uuid not null,
      measure_code text not null,
      samples int not null check (samples >= 0),
      drives boolean not null default false,
      spread jsonb not null,
      unique (plan_id, zone_id, measure_code),
      foreign key (estate_id, plan_id) references plans (estate_id, id) on delete cascade,
      foreign key (estate_id, zone_id) references zones (estate_id, id) on delete cascade
    );

    create table targets (
      id uuid primary key default gen_random_uuid(),
      estate_id uuid not null,
      plan_id uuid not null,
      zone_id uuid not null,
      row_id uuid not null,
      ordinal int not null,
      position geometry(Point, 4326) not null,
      draw_order int not null,
      walk_order int,
      reserve_row_id uuid,
      reserve_ordinal int,
      measure_codes text[] not null,
      unique (estate_id, id),
      unique (plan_id, row_id, ordinal),
      foreign key (estate_id, plan_id) references plans (estate_id, id) on delete cascade,
      foreign key (estate_id, zone_id) references zones (estate_id, id) on delete cascade,
      foreign key (estate_id, row_id) references block_rows (estate_id, id),
      foreign key (estate_id, reserve_row_id) references block_rows (estate_id, id)
    );
    create index targets_plan on targets (estate_id, plan_id, walk_order);

    create table rounds (
      id uuid primary key default gen_random_uuid(),
      estate_id uuid not null,
      plan_id uuid not null,
      block_id uuid not null,
      on_date date not null,
      state text not null default 'sent' check (state in ('sent', 'open', 'closed', 'called off')),
      gate text not null default '',
      notes text not null default '',
      walk jsonb not null default '{}',
      created_by uuid references people (id),
      created_at timestamptz not null default now(),
      closed_at timestamptz,
      unique (estate_id, id),
      foreign key (estate_id, plan_id) references plans (estate_id, id) on delete cascade,
      foreign key (estate_id, block_id) references blocks (estate_id, id) on delete cascade
    );

    create table round_people (
      estate_id uuid not null,
      round_id uuid not null,
      person_id uuid not null references people (id),
      target_ids uuid[],
      acknowledged_at timestamptz,
      primary key (round_id, person_id),
      foreign key (estate_id, round_id) references rounds (estate_id, id) on delete cascade
    );
    create index round_people_person on round_people (person_id);

    create table bags (
      id uuid primary key default gen_random_uuid(),
      estate_id uuid not null references estates (id) on delete cascade,
      code text not null,
      round_id uuid,
      zone_id uuid,
      state text not null default 'printed' check (state in ('printed', 'closed', 'received', 'void')),
      facts jsonb not null default '{}',
      closed_by uuid references people (id),
      closed_at timestamptz,
      received_by uuid references people (id),
      received_at timestamptz,
      created_at timestamptz not null default now(),
      unique (estate_id, id),
      unique (estate_id, code),
      foreign key (estate_id, round_id) references rounds (estate_id, id) on delete cascade
    );

    create table readings (
      id uuid primary key,
      estate_id uuid not null references estates (id) on delete cascade,
      season_id uuid not null,
      block_id uuid not null,
      row_id uuid,
      ordinal int,
      position geometry(Point, 4326),
      round_id uuid,
      target_id uuid,
      bag_id uuid,
      measure_code text not null,
      value double precision not null,
      unit text not null,
      value_typed text,
      unit_typed text,
      samples int not null default 1 check (samples >= 1),
      taken_at timestamptz not null,
      device_time timestamptz,
      received_at timestamptz not null default now(),
      person_id uuid references people (id),
      device_id text,
      source text not null check (source in ('field', 'lab', 'import', 'paper', 'demo')),
      supersedes uuid,
      state text not null default 'checked' check (state in ('provisional', 'checked', 'final')),
      excluded_reason text,
      excluded_by uuid references people (id),
      flags jsonb not null default '[]',
      note text not null default '',
      unique (estate_id, id),
      foreign key (estate_id, season_id) references seasons (estate_id, id),
      foreign key (estate_id, block_id) references blocks (estate_id, id) on delete cascade,
      foreign key (estate_id, row_id) references block_rows (estate_id, id),
      foreign key (estate_id, round_id) references rounds (estate_id, id),
      foreign key (estate_id, bag_id) references bags (estate_id, id),
      foreign key (estate_id, supersedes) references readings (estate_id, id)
    );
    create index readings_block on readings (estate_id, block_id, measure_code, taken_at);
    create index readings_round on readings (estate_id, round_id);
    create index readings_vine on readings (estate_id, row_id, ordinal, measure_code);

    create table reading_conflicts (
      id uuid primary key default gen_random_uuid(),
      estate_id uuid not null references estates (id) on delete cascade,
      kind text not null,
      reading_ids uuid[] not null,
      state text not null default 'open' check (state in ('open', 'settled')),
      choice text check (choice in ('keepOne', 'repeat', 'bothReal')),
      kept_reading_id uuid,
      settled_by uuid references people (id),
      settled_at timestamptz,
      created_at timestamptz not null default now(),
      unique (estate_id, id)
    );

    create table lab_mappings (
      id uuid primary key default gen_random_uuid(),
      estate_id uuid not null references estates (id) on delete cascade,
      lab_name text not null,
      mapping jsonb not null,
      updated_at timestamptz not null default now(),
      unique (estate_id, lab_name)
    );
  `);
}

export async function down(knex: Knex): Promise<void> {
  await knex.raw('drop table lab_mappings, reading_conflicts, readings, bags, round_people, rounds, targets, quotas, plans, measures cascade');
}
