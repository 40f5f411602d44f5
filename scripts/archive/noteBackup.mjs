import { query } from '../postgres/query.mjs';

/** Remembers in the database that a backup was written, or that one was read back for a trial, so that owners are told. */
export async function noteBackup(url, { kind, isGood, manifest }) {
  const [{ known }] = await query(url, `select to_regclass('public.backups') is not null as known`);
  if (!known) return;
  const rows = Object.values(manifest.database.tables).reduce((sum, count) => sum + count, 0);
  await query(url, 'insert into backups (kind, ok, row_total, file_total, archived_at) values ($1, $2, $3, $4, $5)', [kind, isGood, rows, manifest.files.length, manifest.createdAt]);
}
