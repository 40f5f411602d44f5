import type { Knex } from 'knex';

/**
 * How the vine census of a block stood at any moment. Every change of a mark is kept from now on; for the marks that
 * stand today only the time of their last entry is known, so blocks that had any remember since when the history is whole.
 */
export async function up(knex: Knex): Promise<void> {
  await knex.raw(`
    create table vine_history (
      id bigint generated always as identity primary key,
      estate_id uuid not null references estates (id) on delete cascade deferrable initially immediate,
      block_id uuid not null,
      row_id uuid not null,
      ordinal int not null,
      -- Null when the mark was taken away: a plain living vine again.
      state text,
      proposed boolean not null default false,
      at timestamptz not null default now()
    );
    create index vine_history_newest on vine_history (estate_id, block_id, row_id, ordinal, id desc);
    alter table blocks add column census_kept_since timestamptz;

    insert into vine_history (estate_id, block_id, row_id, ordinal, state, proposed, at)
      select estate_id, block_id, row_id, ordinal, state, proposed, noted_at from vines order by noted_at;
    update blocks b set census_kept_since = now() where exists (select 1 from vines v where v.estate_id = b.estate_id and v.block_id = b.id);

    create function keep_vine_history() returns trigger language plpgsql as $$
      begin
        if tg_op = 'DELETE' then
          -- With the estate itself goes its history.
          insert into vine_history (estate_id, block_id, row_id, ordinal)
            select g.estate_id, g.block_id, g.row_id, g.ordinal from gone g where exists (select 1 from estates e where e.id = g.estate_id);
        elsif tg_op = 'UPDATE' then
          insert into vine_history (estate_id, block_id, row_id, ordinal, state, proposed)
            select f.estate_id, f.block_id, f.row_id, f.ordinal, f.state, f.proposed from fresh f join gone g using (id)
            where (f.row_id, f.ordinal, f.state, f.proposed) is distinct from (g.row_id, g.ordinal, g.state, g.proposed);
        else
          insert into vine_history (estate_id, block_id, row_id, ordinal, state, proposed)
            select f.estate_id, f.block_id, f.row_id, f.ordinal, f.state, f.proposed from fresh f;
        end if;
        return null;
      end $$;
    create trigger vines_history_made after insert on vines referencing new table as fresh for each statement execute function keep_vine_history();
    create trigger vines_history_changed after update on vines referencing old table as gone new table as fresh for each statement execute function keep_vine_history();
    create trigger vines_history_gone after delete on vines referencing old table as gone for each statement execute function keep_vine_history();
  `);
}

export async function down(knex: Knex): Promise<void> {
  await knex.raw(`
    drop trigger vines_history_made on vines;
    drop trigger vines_history_changed on vines;
    drop trigger vines_history_gone on vines;
    drop function keep_vine_history();
    alter table blocks drop column census_kept_since;
    drop table vine_history;
  `);
}
