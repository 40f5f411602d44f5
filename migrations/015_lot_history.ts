import type { Knex } from 'knex';

/**
 * How lots, their vines, tanks, what-ifs and switched-on factors stood on any day: every state of a row is kept, so that
 * a board can be shown as it was known. A notice outlives its lot, so that a paper in somebody's pocket still has an answer.
 */
export async function up(knex: Knex): Promise<void> {
  await knex.raw(`
    create table lot_history (
      id bigint generated always as identity primary key,
      estate_id uuid not null references estates (id) on delete cascade deferrable initially immediate,
      subject text not null,
      row_id uuid not null,
      at timestamptz not null default now(),
      gone boolean not null,
      body jsonb not null
    );
    create index lot_history_newest on lot_history (estate_id, subject, row_id, id desc);

    create function keep_lot_history() returns trigger language plpgsql as $$
      declare kept record;
      begin
        if tg_op = 'DELETE' then kept := old; else kept := new; end if;
        -- With the estate itself goes its history.
        if exists (select 1 from estates where id = kept.estate_id) then
          insert into lot_history (estate_id, subject, row_id, gone, body) values (kept.estate_id, tg_table_name, kept.id, tg_op = 'DELETE', to_jsonb(kept));
        end if;
        return null;
      end $$;
  `);
  for (const table of ['scenarios', 'lots', 'lot_parts', 'lot_row_runs', 'tanks', 'factor_switches']) {
    await knex.raw(`insert into lot_history (estate_id, subject, row_id, gone, body) select estate_id, '${table}', id, false, to_jsonb(${table}) from ${table}`);
    await knex.raw(`create trigger ${table}_history after insert or update or delete on ${table} for each row execute function keep_lot_history()`);
  }
  await knex.raw(`
    alter table pick_notices alter column lot_id drop not null;
    do $$
      declare reference record;
      begin
        for reference in select conname from pg_constraint where conrelid = 'pick_notices'::regclass and contype = 'f' and confrelid = 'lots'::regclass loop
          execute format('alter table pick_notices drop constraint %I', reference.conname);
        end loop;
      end $$;
    alter table pick_notices add constraint pick_notices_lot foreign key (estate_id, lot_id) references lots (estate_id, id) on delete set null (lot_id) deferrable initially immediate;
  `);
}

export async function down(knex: Knex): Promise<void> {
  for (const table of ['scenarios', 'lots', 'lot_parts', 'lot_row_runs', 'tanks', 'factor_switches']) await knex.raw(`drop trigger ${table}_history on ${table}`);
  await knex.raw(`
    drop function keep_lot_history();
    drop table lot_history;
    alter table pick_notices drop constraint pick_notices_lot;
    delete from pick_notices where lot_id is null;
    alter table pick_notices alter column lot_id set not null;
    alter table pick_notices add foreign key (estate_id, lot_id) references lots (estate_id, id) on delete cascade deferrable initially immediate;
  `);
}
