import type { Knex } from 'knex';

/** Estates, people, access, mail, audit and the progress of jobs. */
export async function up(knex: Knex): Promise<void> {
  await knex.raw(`
    create table estates (
      id uuid primary key default gen_random_uuid(),
      name text not null check (length(trim(name)) between 1 and 120),
      country text not null default '',
      time_zone text not null default 'UTC',
      units text not null default 'metric' check (units in ('metric', 'us')),
      languages text[] not null default '{en}',
      season_start_month int not null default 12 check (season_start_month between 1 and 12),
      marker geometry(Point, 4326),
      is_demo boolean not null default false,
      settings jsonb not null default '{}',
      created_at timestamptz not null default now()
    );

    create table people (
      id uuid primary key default gen_random_uuid(),
      name text not null check (length(trim(name)) between 1 and 120),
      email text check (email = lower(email)),
      password_hash text,
      pin_hash text,
      language text not null default 'en' check (language in ('en', 'es', 'fr', 'it', 'pt')),
      units text not null default 'metric' check (units in ('metric', 'us')),
      theme text not null default 'system' check (theme in ('system', 'light', 'dark', 'outdoor')),
      is_demo boolean not null default false,
      created_at timestamptz not null default now(),
      unique (email)
    );

    create table memberships (
      id uuid primary key default gen_random_uuid(),
      estate_id uuid not null references estates (id) on delete cascade,
      person_id uuid not null references people (id),
      role text not null check (role in ('owner', 'admin', 'agronomist', 'manager', 'winemaker', 'crew', 'lab', 'guest')),
      starts_on date not null default current_date,
      ends_on date,
      ended_at timestamptz,
      created_at timestamptz not null default now(),
      unique (estate_id, id)
    );
    create unique index memberships_one_open on memberships (estate_id, person_id, role) where ended_at is null;
    create index memberships_person on memberships (person_id);

    create table invitations (
      id uuid primary key default gen_random_uuid(),
      estate_id uuid not null references estates (id) on delete cascade,
      email text not null check (email = lower(email)),
      name text not null default '',
      role text not null check (role in ('admin', 'agronomist', 'manager', 'winemaker', 'crew', 'lab', 'guest', 'owner')),
      access_ends_on date,
      language text not null default 'en',
      token_hash text not null unique,
      expires_at timestamptz not null,
      accepted_at timestamptz,
      revoked_at timestamptz,
      invited_by uuid not null references people (id),
      created_at timestamptz not null default now(),
      unique (estate_id, id)
    );

    create table password_resets (
      id uuid primary key default gen_random_uuid(),
      person_id uuid not null references people (id) on delete cascade,
      token_hash text not null unique,
      expires_at timestamptz not null,
      used_at timestamptz,
      created_at timestamptz not null default now()
    );

    create table sessions (
      sid text primary key,
      sess json not null,
      expire timestamptz not null
    );
    create index sessions_expire on sessions (expire);

    create table audit_entries (
      id bigserial primary key,
      estate_id uuid not null references estates (id) on delete cascade,
      person_id uuid references people (id),
      action text not null,
      subject_type text not null,
      subject_id text not null,
      subject_name text not null default '',
      before jsonb,
      after jsonb,
      reason text,
      at timestamptz not null default now()
    );
    create index audit_entries_estate on audit_entries (estate_id, id desc);
    create function audit_entries_stay() returns trigger language plpgsql as $$
      begin
        if tg_op = 'DELETE' and not exists (select 1 from estates where id = old.estate_id) then return old; end if;
        raise exception 'audit entries are append-only';
      end $$;
    create trigger audit_entries_stay before update or delete on audit_entries for each row execute function audit_entries_stay();

    create table mail_messages (
      id uuid primary key default gen_random_uuid(),
      estate_id uuid references estates (id) on delete cascade,
      kind text not null,
      to_address text not null,
      to_name text not null default '',
      language text not null default 'en',
      subject text not null,
      body_text text not null,
      state text not null default 'outbox' check (state in ('outbox', 'sent', 'failed')),
      error text,
      created_at timestamptz not null default now(),
      sent_at timestamptz
    );
    create index mail_messages_estate on mail_messages (estate_id, created_at desc);

    create table jobs (
      id uuid primary key default gen_random_uuid(),
      estate_id uuid not null references estates (id) on delete cascade,
      kind text not null,
      subject_type text not null,
      subject_id uuid,
      state text not null default 'queued' check (state in ('queued', 'running', 'done', 'failed', 'cancelled')),
      stage text not null default 'queued',
      progress real not null default 0 check (progress between 0 and 1),
      input jsonb not null default '{}',
      result jsonb,
      problem text,
      attempts int not null default 0,
      created_by uuid references people (id),
      created_at timestamptz not null default now(),
      started_at timestamptz,
      heartbeat_at timestamptz,
      finished_at timestamptz,
      unique (estate_id, id)
    );
    create index jobs_subject on jobs (estate_id, subject_type, subject_id);

    create table seasons (
      id uuid primary key default gen_random_uuid(),
      estate_id uuid not null references estates (id) on delete cascade,
      name text not null,
      starts_on date not null,
      ends_on date not null check (ends_on > starts_on),
      phases jsonb not null default '{}',
      closed_at timestamptz,
      unique (estate_id, id),
      unique (estate_id, name)
    );
  `);
}

export async function down(knex: Knex): Promise<void> {
  await knex.raw(`
    drop table seasons, jobs, mail_messages, audit_entries, sessions, password_resets, invitations, memberships, people, estates cascade;
    drop function audit_entries_stay();
  `);
}
