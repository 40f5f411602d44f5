import type { Knex } from 'knex';

/** Bags as they are closed in the row, and how the lab's figures came: typed or read from a file, with instrument and state. */
export async function up(knex: Knex): Promise<void> {
  await knex.raw(`
    alter table bags drop constraint bags_estate_id_code_key;
    alter table bags
      add column block_id uuid,
      add column vines jsonb not null default '[]',
      add column device_id text,
      add column device_time timestamptz,
      add column sent_code text,
      add column clashes_with uuid,
      add column missing_at timestamptz,
      add column missing_by uuid references people (id),
      add column swapped_at timestamptz,
      add foreign key (estate_id, block_id) references blocks (estate_id, id) on delete cascade,
      add foreign key (estate_id, clashes_with) references bags (estate_id, id);
    create unique index bags_label_once on bags (estate_id, code) where clashes_with is null and state <> 'void';
    create index bags_round on bags (estate_id, round_id);

    create table lab_files (
      id uuid primary key default gen_random_uuid(),
      estate_id uuid not null references estates (id) on delete cascade,
      file_id uuid not null,
      file_name text not null,
      lab_name text not null default '',
      state text not null default 'asks' check (state in ('asks', 'stored', 'dismissed')),
      answers jsonb not null default '{}',
      sent_by uuid references people (id),
      sent_at timestamptz not null default now(),
      stored_by uuid references people (id),
      stored_at timestamptz,
      stored_count int,
      unique (estate_id, id),
      foreign key (estate_id, file_id) references files (estate_id, id)
    );
    create index lab_files_open on lab_files (estate_id, state, sent_at desc);

    -- A label on the bench whose phone has not been heard of: its figures are kept before anybody knows the block.
    alter table readings alter column block_id drop not null;
    alter table readings add constraint readings_placed check (block_id is not null or bag_id is not null);
    alter table readings
      add column instrument text not null default '',
      add column method text not null default '',
      add column analysed_on date,
      add column lab_file_id uuid,
      add column state_by uuid references people (id),
      add column state_at timestamptz,
      add column exclusion_proposal jsonb,
      add foreign key (estate_id, lab_file_id) references lab_files (estate_id, id);
    create index readings_bag on readings (estate_id, bag_id) where bag_id is not null;
  `);
}

export async function down(knex: Knex): Promise<void> {
  await knex.raw(`
    drop index readings_bag;
    delete from readings where block_id is null;
    alter table readings drop constraint readings_placed;
    alter table readings alter column block_id set not null;
    alter table readings
      drop column instrument, drop column method, drop column analysed_on, drop column lab_file_id,
      drop column state_by, drop column state_at, drop column exclusion_proposal;
    drop table lab_files;
    drop index bags_label_once, bags_round;
    alter table bags
      drop column block_id, drop column vines, drop column device_id, drop column device_time, drop column sent_code,
      drop column clashes_with, drop column missing_at, drop column missing_by, drop column swapped_at;
    alter table bags add constraint bags_estate_id_code_key unique (estate_id, code);
  `);
}
