import type { Knex } from 'knex';

/** What was known of a day's weather before it was put right or taken out, so that an earlier day can be shown as it was known. */
export async function up(knex: Knex): Promise<void> {
  await knex.raw(`
    create table weather_history (
      id bigint generated always as identity primary key,
      estate_id uuid not null references estates (id) on delete cascade deferrable initially immediate,
      day date not null,
      max_c double precision,
      min_c double precision,
      rain_mm double precision,
      entered_at timestamptz not null,
      until timestamptz not null default now()
    );
    create index weather_history_day on weather_history (estate_id, day);

    create function keep_weather_history() returns trigger language plpgsql as $$
      begin
        -- With the estate itself goes its history.
        insert into weather_history (estate_id, day, max_c, min_c, rain_mm, entered_at)
          select g.estate_id, g.day, g.max_c, g.min_c, g.rain_mm, g.entered_at from gone g where exists (select 1 from estates e where e.id = g.estate_id);
        return null;
      end $$;
    create trigger weather_history_changed after update on weather_days referencing old table as gone for each statement execute function keep_weather_history();
    create trigger weather_history_gone after delete on weather_days referencing old table as gone for each statement execute function keep_weather_history();
  `);
}

export async function down(knex: Knex): Promise<void> {
  await knex.raw(`
    drop trigger weather_history_changed on weather_days;
    drop trigger weather_history_gone on weather_days;
    drop function keep_weather_history();
    drop table weather_history;
  `);
}
