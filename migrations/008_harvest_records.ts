import type { Knex } from 'knex';

/**
 * Weather by day, what a day can take in, what the cellar measured, which learned factors are used, and decisions as
 * they looked when they were made. Scale tickets can no longer be changed, and a notice on paper leads to its state.
 */
export async function up(knex: Knex): Promise<void> {
  await knex.raw(`
    create table weather_days (
      id uuid primary key default gen_random_uuid(),
      estate_id uuid not null references estates (id) on delete cascade,
      day date not null,
      max_c double precision check (max_c between -60 and 60),
      min_c double precision check (min_c between -60 and 60),
      rain_mm double precision check (rain_mm between 0 and 2000),
      source text not null check (source in ('typed', 'imported')),
      entered_by uuid references people (id),
      entered_at timestamptz not null default now(),
      unique (estate_id, id),
      unique (estate_id, day),
      check (min_c <= max_c),
      check (num_nonnulls(max_c, min_c, rain_mm) > 0),
      check ((max_c is null) = (min_c is null))
    );

    -- A line without a day holds for every day that has none of its own.
    create table day_capacities (
      id uuid primary key default gen_random_uuid(),
      estate_id uuid not null references estates (id) on delete cascade,
      day date,
      pick_t double precision check (pick_t >= 0),
      press_t double precision check (press_t >= 0),
      note text not null default '',
      unique (estate_id, id)
    );
    create unique index day_capacities_one on day_capacities (estate_id, coalesce(day, date '0001-01-01'));

    -- Only the newest line of a lot counts; the ones before stay.
    create table cellar_results (
      id uuid primary key default gen_random_uuid(),
      estate_id uuid not null,
      lot_id uuid not null,
      must_l double precision check (must_l > 0),
      wine_l double precision check (wine_l > 0),
      tank_brix double precision check (tank_brix between 0 and 60),
      left_out_kg double precision check (left_out_kg >= 0),
      note text not null default '',
      entered_by uuid not null references people (id),
      entered_at timestamptz not null default now(),
      unique (estate_id, id),
      foreign key (estate_id, lot_id) references lots (estate_id, id) on delete cascade,
      check (num_nonnulls(must_l, wine_l, tank_brix, left_out_kg) > 0)
    );

    create table factor_switches (
      id uuid primary key default gen_random_uuid(),
      estate_id uuid not null references estates (id) on delete cascade,
      kind text not null check (kind in ('growth', 'losses', 'mustL', 'wineL', 'tankOffset')),
      about text not null,
      is_on boolean not null,
      set_by uuid not null references people (id),
      set_at timestamptz not null default now(),
      unique (estate_id, id),
      unique (estate_id, kind, about)
    );

    create table lot_decisions (
      id uuid primary key default gen_random_uuid(),
      estate_id uuid not null,
      lot_id uuid not null,
      kind text not null check (kind in ('confirm', 'notice')),
      body jsonb not null,
      decided_by uuid not null references people (id),
      decided_at timestamptz not null default now(),
      unique (estate_id, id),
      foreign key (estate_id, lot_id) references lots (estate_id, id) on delete cascade
    );

    alter table scenarios add column suggestion jsonb;
    alter table lots add column crew text not null default '';
    alter table pick_notices add column code uuid not null default gen_random_uuid();
    create unique index pick_notices_code on pick_notices (code);

    create function scale_tickets_stand() returns trigger language plpgsql as $$
      begin
        raise exception 'A scale ticket is never changed; enter one that corrects it.';
      end $$;
    create trigger scale_tickets_stand before update on scale_tickets for each row execute function scale_tickets_stand();

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
  await knex.raw(`
    drop trigger scale_tickets_stand on scale_tickets;
    drop function scale_tickets_stand();
    alter table pick_notices drop column code;
    alter table lots drop column crew;
    alter table scenarios drop column suggestion;
    drop table lot_decisions, factor_switches, cellar_results, day_capacities, weather_days;
  `);
}
