import type { Knex } from 'knex';

/**
 * Blocks with rows and known vines; uploaded files, what was understood of them, and layers on block grids.
 * An ordinal of a vine may be 0 or less: a row lengthened at its start end keeps the numbers of the vines it had.
 * A relief is the lie of the land round all blocks, coarse, from the newest elevations; only maps use it.
 * An import that was refused has no file: only its name and the reason are kept.
 * Keys below an estate are (estate_id, id), so that the database itself refuses a reference across estates.
 */
export async function up(knex: Knex): Promise<void> {
  await knex.raw(`
    create table blocks (
      id uuid primary key default gen_random_uuid(),
      estate_id uuid not null references estates (id) on delete cascade,
      name text not null check (length(trim(name)) between 1 and 80),
      variety text not null default '',
      rootstock text not null default '',
      planted_year int check (planted_year between 1850 and 2200),
      boundary geometry(MultiPolygon, 4326) not null check (ST_IsValid(boundary)),
      area_m2 double precision not null check (area_m2 > 0),
      book_area_ha double precision,
      epsg int not null,
      row_bearing_deg double precision not null default 0 check (row_bearing_deg >= 0 and row_bearing_deg < 360),
      row_spacing_m double precision not null default 2.5 check (row_spacing_m between 0.5 and 12),
      vine_spacing_m double precision not null default 1.2 check (vine_spacing_m between 0.2 and 12),
      row_count int check (row_count between 1 and 20000),
      headland_m double precision not null default 0 check (headland_m between 0 and 50),
      row_one_side text not null default 'low' check (row_one_side in ('low', 'high')),
      vine_one_end text not null default 'start' check (vine_one_end in ('start', 'end')),
      first_row_label int not null default 1 check (first_row_label between 0 and 100000),
      start_post_colour text not null default 'white',
      end_post_colour text not null default 'red',
      gate geometry(Point, 4326),
      cell_size_m double precision not null default 2 check (cell_size_m between 0.5 and 30),
      grid_key text not null,
      trellis text not null default '',
      notes text not null default '',
      census text not null default 'unknown' check (census in ('unknown', 'partial', 'full')),
      census_at timestamptz,
      version int not null default 1,
      retired_at timestamptz,
      created_at timestamptz not null default now(),
      unique (estate_id, id)
    );
    create unique index blocks_name on blocks (estate_id, lower(name)) where retired_at is null;
    create index blocks_boundary on blocks using gist (boundary);

    create table block_rows (
      id uuid primary key default gen_random_uuid(),
      estate_id uuid not null,
      block_id uuid not null,
      ordinal int not null,
      label text not null,
      label_was text,
      pieces jsonb not null,
      line geometry(MultiLineString, 4326) not null,
      vine_count int not null check (vine_count >= 0),
      retired_at timestamptz,
      unique (estate_id, id),
      foreign key (estate_id, block_id) references blocks (estate_id, id) on delete cascade
    );
    create index block_rows_block on block_rows (estate_id, block_id, ordinal);

    create table vines (
      id uuid primary key default gen_random_uuid(),
      estate_id uuid not null,
      block_id uuid not null,
      row_id uuid not null,
      ordinal int not null,
      state text not null check (state in ('missing', 'dead', 'replant', 'offType', 'sick')),
      proposed boolean not null default false,
      noted_by uuid references people (id),
      noted_at timestamptz not null default now(),
      unique (estate_id, row_id, ordinal),
      foreign key (estate_id, block_id) references blocks (estate_id, id) on delete cascade,
      foreign key (estate_id, row_id) references block_rows (estate_id, id) on delete cascade
    );

    create table files (
      id uuid primary key default gen_random_uuid(),
      estate_id uuid not null references estates (id) on delete cascade,
      sha256 text not null,
      bytes bigint not null,
      original_name text not null,
      uploaded_by uuid references people (id),
      created_at timestamptz not null default now(),
      unique (estate_id, id)
    );
    create index files_hash on files (sha256);

    create table imports (
      id uuid primary key default gen_random_uuid(),
      estate_id uuid not null,
      file_id uuid,
      file_name text not null,
      format text not null default '',
      state text not null check (state in ('reading', 'asks', 'ready', 'done', 'refused')),
      understood jsonb not null default '{}',
      answers jsonb not null default '{}',
      warnings jsonb not null default '[]',
      problem jsonb,
      retired_at timestamptz,
      created_by uuid references people (id),
      created_at timestamptz not null default now(),
      finished_at timestamptz,
      unique (estate_id, id),
      foreign key (estate_id, file_id) references files (estate_id, id) on delete cascade
    );
    create index imports_estate on imports (estate_id, created_at desc);

    create table layers (
      id uuid primary key default gen_random_uuid(),
      estate_id uuid not null references estates (id) on delete cascade,
      import_id uuid,
      derived_from uuid,
      type text not null,
      name text not null,
      unit text not null default '',
      measured_on date,
      source jsonb not null default '{}',
      classes jsonb,
      retired_at timestamptz,
      created_by uuid references people (id),
      created_at timestamptz not null default now(),
      unique (estate_id, id),
      foreign key (estate_id, import_id) references imports (estate_id, id),
      foreign key (estate_id, derived_from) references layers (estate_id, id) on delete cascade
    );

    create table block_layers (
      id uuid primary key default gen_random_uuid(),
      estate_id uuid not null,
      layer_id uuid not null,
      block_id uuid not null,
      grid_key text not null,
      cells bytea not null,
      coverage real not null check (coverage between 0 and 1),
      statistics jsonb not null,
      findings jsonb not null default '[]',
      override jsonb,
      created_at timestamptz not null default now(),
      unique (estate_id, id),
      unique (layer_id, block_id),
      foreign key (estate_id, layer_id) references layers (estate_id, id) on delete cascade,
      foreign key (estate_id, block_id) references blocks (estate_id, id) on delete cascade
    );
    create index block_layers_block on block_layers (estate_id, block_id);

    create table reliefs (
      estate_id uuid primary key references estates (id) on delete cascade,
      epsg int not null,
      x0 double precision not null,
      y0 double precision not null,
      cell_size_m double precision not null check (cell_size_m > 0),
      cols int not null check (cols > 0),
      rows int not null check (rows > 0),
      cells bytea not null,
      updated_at timestamptz not null default now()
    );
  `);
}

export async function down(knex: Knex): Promise<void> {
  await knex.raw('drop table reliefs, block_layers, layers, imports, files, vines, block_rows, blocks cascade');
}
