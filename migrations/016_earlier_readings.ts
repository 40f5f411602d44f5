import type { Knex } from 'knex';

/** Tables of readings of earlier visits: read, asked about, stored at once, and taken back as a whole. */
export async function up(knex: Knex): Promise<void> {
  await knex.raw(`
    create table earlier_files (
      id uuid primary key default gen_random_uuid(),
      estate_id uuid not null references estates (id) on delete cascade,
      file_id uuid not null,
      file_name text not null,
      state text not null default 'asks' check (state in ('asks', 'stored', 'dismissed', 'takenBack')),
      answers jsonb not null default '{}',
      -- Some answers were taken over from the last table with the same columns.
      remembered boolean not null default false,
      signature text not null default '',
      summary jsonb,
      sent_by uuid references people (id),
      sent_at timestamptz not null default now(),
      stored_by uuid references people (id),
      stored_at timestamptz,
      taken_back_by uuid references people (id),
      taken_back_at timestamptz,
      taken_back_reason text,
      unique (estate_id, id),
      foreign key (estate_id, file_id) references files (estate_id, id)
    );
    create index earlier_files_newest on earlier_files (estate_id, sent_at desc);
    alter table readings
      add column earlier_file_id uuid,
      add foreign key (estate_id, earlier_file_id) references earlier_files (estate_id, id);
    create index readings_earlier_file on readings (estate_id, earlier_file_id) where earlier_file_id is not null;
  `);
}

export async function down(knex: Knex): Promise<void> {
  await knex.raw(`
    alter table readings drop column earlier_file_id;
    drop table earlier_files;
  `);
}
