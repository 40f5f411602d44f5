import type { Knex } from 'knex';

/** Field work on many phones: findings one by one, what a reader saw on the post, photos, shared phones and lost ones. */
export async function up(knex: Knex): Promise<void> {
  await knex.raw(`
    alter table readings add column typed_by uuid references people (id), add column seen_as jsonb;

    alter table reading_conflicts drop constraint reading_conflicts_choice_check;
    alter table reading_conflicts
      add constraint reading_conflicts_choice_check check (choice in ('keepOne', 'repeat', 'bothReal', 'leaveOut', 'moved')),
      add column round_id uuid,
      add column block_id uuid;
    create index reading_conflicts_open on reading_conflicts (estate_id, state, created_at desc);

    create table vine_findings (
      id uuid primary key,
      estate_id uuid not null references estates (id) on delete cascade,
      block_id uuid not null,
      row_id uuid not null,
      ordinal int not null,
      state text not null check (state in ('missing', 'dead', 'replant', 'offType', 'sick')),
      round_id uuid,
      person_id uuid references people (id),
      typed_by uuid references people (id),
      device_id text,
      noted_at timestamptz not null,
      received_at timestamptz not null default now(),
      unique (estate_id, id),
      foreign key (estate_id, block_id) references blocks (estate_id, id) on delete cascade,
      foreign key (estate_id, row_id) references block_rows (estate_id, id) on delete cascade,
      foreign key (estate_id, round_id) references rounds (estate_id, id)
    );
    create index vine_findings_round on vine_findings (estate_id, round_id);

    create table field_photos (
      id uuid primary key,
      estate_id uuid not null references estates (id) on delete cascade,
      block_id uuid not null,
      round_id uuid,
      row_id uuid not null,
      ordinal int not null,
      file_id uuid not null,
      note text not null default '',
      person_id uuid references people (id),
      taken_at timestamptz not null,
      received_at timestamptz not null default now(),
      unique (estate_id, id),
      foreign key (estate_id, block_id) references blocks (estate_id, id) on delete cascade,
      foreign key (estate_id, row_id) references block_rows (estate_id, id) on delete cascade,
      foreign key (estate_id, round_id) references rounds (estate_id, id),
      foreign key (estate_id, file_id) references files (estate_id, id)
    );
    create index field_photos_block on field_photos (estate_id, block_id, taken_at desc);

    create table crew_codes (
      id uuid primary key default gen_random_uuid(),
      estate_id uuid not null references estates (id) on delete cascade,
      code_hash text not null unique,
      expires_at timestamptz not null,
      ended_at timestamptz,
      made_by uuid not null references people (id),
      made_at timestamptz not null default now(),
      unique (estate_id, id)
    );
    create unique index crew_codes_one_open on crew_codes (estate_id) where ended_at is null;

    create table crew_pins (
      estate_id uuid not null references estates (id) on delete cascade,
      person_id uuid not null references people (id),
      pin_hash text not null,
      failures int not null default 0,
      locked_until timestamptz,
      set_by uuid not null references people (id),
      set_at timestamptz not null default now(),
      primary key (estate_id, person_id)
    );

    create table phones (
      id uuid primary key default gen_random_uuid(),
      estate_id uuid not null references estates (id) on delete cascade,
      device_id text not null,
      person_id uuid not null references people (id),
      last_contact_at timestamptz not null,
      waiting int not null default 0 check (waiting >= 0),
      is_ready boolean,
      clock_off_s int not null default 0,
      lost_at timestamptz,
      lost_by uuid references people (id),
      emptied_at timestamptz,
      unique (estate_id, id),
      unique (estate_id, device_id)
    );
  `);
}

export async function down(knex: Knex): Promise<void> {
  await knex.raw(`
    drop table phones, crew_pins, crew_codes, field_photos, vine_findings cascade;
    drop index reading_conflicts_open;
    alter table reading_conflicts drop column round_id, drop column block_id, drop constraint reading_conflicts_choice_check;
    alter table reading_conflicts add constraint reading_conflicts_choice_check check (choice in ('keepOne', 'repeat', 'bothReal'));
    alter table readings drop column typed_by, drop column seen_as;
  `);
}
