import type { Knex } from 'knex';

/**
 * Entry restrictions, pick lots, tanks, notices and scale tickets.
 * A lot part is stored as runs of vines along rows, and an exclusion constraint keeps a vine out of two lots
 * of the same scenario, whatever happens to zones later.
 */
export async function up(knex: Knex): Promise<void> {
  await knex.raw(`
    create table entry_restrictions (
      id uuid primary key default gen_random_uuid(),
      estate_id uuid not null,
      block_id uuid not null,
      row_ids uuid[],
      starts_at timestamptz not null,
      ends_at timestamptz not null check (ends_at > starts_at),
      product text not null,
      label_interval text not null,
      no_pick_before date,
      note text not null default '',
      set_by uuid not null references people (id),
      lifted_at timestamptz,
      lifted_by uuid references people (id),
      lifted_reason text,
      created_at timestamptz not null default now(),
      unique (estate_id, id),
      foreign key (estate_id, block_id) references blocks (estate_id, id) on delete cascade,
      check ((lifted_at is null) = (lifted_reason is null))
    );

    create table tanks (
      id uuid primary key default gen_random_uuid(),
      estate_id uuid not null references estates (id) on delete cascade,
      name text not null,
      litres double precision not null check (litres > 0),
      working_fill double precision not null default 0.8 check (working_fill > 0 and working_fill <= 1),
      minimum_fill double precision not null default 0.5 check (minimum_fill >= 0 and minimum_fill < 1),
      retired_at timestamptz,
      unique (estate_id, id)
    );
    create unique index tanks_name on tanks (estate_id, lower(name)) where retired_at is null;

    create table scenarios (
      id uuid primary key default gen_random_uuid(),
      estate_id uuid not null references estates (id) on delete cascade,
      season_id uuid not null,
      name text not null,
      is_live boolean not null default false,
      created_by uuid references people (id),
      created_at timestamptz not null default now(),
      unique (estate_id, id),
      foreign key (estate_id, season_id) references seasons (estate_id, id)
    );
    create unique index scenarios_one_live on scenarios (estate_id, season_id) where is_live;

    create table lots (
      id uuid primary key default gen_random_uuid(),
      estate_id uuid not null,
      scenario_id uuid not null,
      season_id uuid not null,
      name text not null check (length(trim(name)) between 1 and 80),
      wine_type text not null default 'red' check (wine_type in ('red', 'white', 'rose')),
      state text not null default 'draft' check (state in ('draft', 'confirmed', 'picked')),
      pick_on date,
      tank_id uuid,
      targets jsonb not null default '{}',
      factors jsonb not null default '{}',
      version int not null default 1,
      confirmed_by uuid references people (id),
      confirmed_at timestamptz,
      created_by uuid references people (id),
      created_at timestamptz not null default now(),
      unique (estate_id, id),
      unique (estate_id, scenario_id, name),
      foreign key (estate_id, scenario_id) references scenarios (estate_id, id) on delete cascade,
      foreign key (estate_id, season_id) references seasons (estate_id, id),
      foreign key (estate_id, tank_id) references tanks (estate_id, id)
    );

    create table lot_parts (
      id uuid primary key default gen_random_uuid(),
      estate_id uuid not null,
      lot_id uuid not null,
      block_id uuid not null,
      zone_id uuid,
      zone_number int not null,
      zone_name text not null,
      unique (estate_id, id),
      foreign key (estate_id, lot_id) references lots (estate_id, id) on delete cascade,
      foreign key (estate_id, block_id) references blocks (estate_id, id) on delete cascade,
      foreign key (zone_id) references zones (id) on delete set null
    );

    create table lot_row_runs (
      id uuid primary key default gen_random_uuid(),
      estate_id uuid not null,
      scenario_id uuid not null,
      lot_part_id uuid not null,
      row_id uuid not null,
      vines int4range not null check (not isempty(vines)),
      foreign key (estate_id, scenario_id) references scenarios (estate_id, id) on delete cascade,
      foreign key (estate_id, lot_part_id) references lot_parts (estate_id, id) on delete cascade,
      foreign key (estate_id, row_id) references block_rows (estate_id, id),
      constraint lot_row_runs_no_vine_twice exclude using gist (scenario_id with =, row_id with =, vines with &&)
    );

    create table pick_notices (
      id uuid primary key default gen_random_uuid(),
      estate_id uuid not null,
      lot_id uuid not null,
      number int not null,
      replaces_number int,
      void_at timestamptz,
      body jsonb not null,
      sent_by uuid not null references people (id),
      sent_at timestamptz not null default now(),
      unique (estate_id, number),
      foreign key (estate_id, lot_id) references lots (estate_id, id) on delete cascade
    );

    create table notice_readers (
      notice_id uuid not null references pick_notices (id) on delete cascade,
      person_id uuid not null references people (id),
      read_at timestamptz,
      primary key (notice_id, person_id)
    );

    create table scale_tickets (
      id uuid primary key default gen_random_uuid(),
      estate_id uuid not null,
      lot_id uuid not null,
      ticket_no text not null,
      gross_kg double precision not null,
      tare_kg double precision not null,
      net_kg double precision generated always as (gross_kg - tare_kg) stored,
      unit_typed text not null default 'kg',
      weighed_at timestamptz not null,
      split jsonb not null default '[]',
      corrects uuid references scale_tickets (id),
      note text not null default '',
      entered_by uuid not null references people (id),
      entered_at timestamptz not null default now(),
      unique (estate_id, id),
      foreign key (estate_id, lot_id) references lots (estate_id, id) on delete cascade
    );

    -- References below an estate may be checked at the end of a transaction, so that a whole estate can be taken away at once.
    do $$
      declare reference record;
      begin
        for reference in
          select conrelid::regclass as owner, conname from pg_constraint
          where contype = 'f' and connamespace = 'public'::regnamespace and not condeferrable
        loop
          execute format('alter table %s alter constraint %I deferrable initially immediate', reference.owner, reference.conname);
        end loop;
      end $$;
  `);
}

export async function down(knex: Knex): Promise<void> {
  await knex.raw('drop table scale_tickets, notice_readers, pick_notices, lot_row_runs, lot_parts, lots, scenarios, tanks, entry_restrictions cascade');
}
