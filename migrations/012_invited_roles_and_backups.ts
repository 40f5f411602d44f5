import type { Knex } from 'knex';

/** An invitation may carry several roles; what was backed up, and whether it could be read back, is remembered. */
export async function up(knex: Knex): Promise<void> {
  await knex.raw(`
    alter table invitations add column roles text[];
    update invitations set roles = array[role];
    alter table invitations
      alter column roles set not null,
      add constraint invitations_roles check (cardinality(roles) between 1 and 8
        and roles <@ array['admin', 'agronomist', 'manager', 'winemaker', 'crew', 'lab', 'guest', 'owner']),
      drop column role;

    create table backups (
      id uuid primary key default gen_random_uuid(),
      kind text not null check (kind in ('backup', 'drill')),
      ok boolean not null,
      row_total bigint not null default 0,
      file_total bigint not null default 0,
      archived_at timestamptz not null,
      at timestamptz not null default now()
    );
    create index backups_at on backups (kind, at desc);
    create index sessions_person on sessions ((sess -> 'passport' ->> 'user'));
    create index password_resets_person on password_resets (person_id, created_at desc);
  `);
}

export async function down(knex: Knex): Promise<void> {
  await knex.raw(`
    drop index password_resets_person, sessions_person;
    drop table backups;
    alter table invitations add column role text not null default 'crew';
    update invitations set role = roles[1];
    alter table invitations drop column roles;
  `);
}
