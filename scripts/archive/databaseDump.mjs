// Dump and restore of a database with PostgreSQL's own programs, and the row counts that prove them equal.
import { existsSync, readdirSync } from 'node:fs';
import path from 'node:path';
import { identifier, query, withClient } from '../postgres/query.mjs';
import { CommandFailed, runCommand } from '../process/runCommand.mjs';
import { Problem } from '../progress.mjs';

const clientFolder = '/usr/lib/postgresql';
/** Sign-ins are not worth keeping, and a restored one could outlive the end of somebody's access. */
const sessionTable = 'sessions';

/** Folder of pg_dump and pg_restore of the server's version, or of the next newer one that is installed. */
export function clientPrograms(serverVersion) {
  const versions = existsSync(clientFolder) ? readdirSync(clientFolder).map(Number).filter((version) => existsSync(path.join(clientFolder, String(version), 'bin', 'pg_restore'))) : [];
  const fitting = versions.filter((version) => version >= serverVersion).sort((a, b) => a - b)[0];
  if (fitting === undefined) throw new Problem(`pg_dump and pg_restore of PostgreSQL ${serverVersion} are needed. Install them: apt-get install postgresql-client-${serverVersion}`);
  return path.join(clientFolder, String(fitting), 'bin');
}

/** Major version of the server. */
export async function serverVersion(url) {
  const [{ version }] = await query(url, `select current_setting('server_version_num')::int / 10000 as version`);
  return version;
}

/** Address without password, and the password where other users of the machine cannot read it. */
function connection(url) {
  const open = new URL(url);
  const { password } = open;
  open.password = '';
  return { target: open.href, env: { ...process.env, ...(password === '' ? {} : { PGPASSWORD: decodeURIComponent(password) }) } };
}

/** Tables of the application and of its queue; what belongs to an extension is made by the extension. */
const tableQuery = `
  select n.nspname as schema, c.relname as name
  from pg_class c join pg_namespace n on n.oid = c.relnamespace
  where c.relkind = 'r' and n.nspname not in ('pg_catalog', 'information_schema') and n.nspname not like 'pg\\_%' and c.relname <> $1
    and not exists (select from pg_depend d where d.classid = 'pg_class'::regclass and d.objid = c.oid and d.deptype = 'e')
  order by 1, 2`;

/** Rows of every table, as { 'schema.table': count }. */
export async function countRows(client) {
  const { rows: tables } = await client.query(tableQuery, [sessionTable]);
  if (tables.length === 0) return {};
  const counts = tables.map(({ schema, name }) => `(select count(*)::int from ${identifier(schema)}.${identifier(name)})`);
  const { rows: [values] } = await client.query({ text: `select ${counts.join(', ')}`, rowMode: 'array' });
  return Object.fromEntries(tables.map(({ schema, name }, index) => [`${schema}.${name}`, values[index]]));
}

/** Writes a dump in pg_dump's custom format; the counts are of the very same moment. Resolves to the counts. */
export function dumpDatabase(url, file) {
  return withClient(url, async (client) => {
    const bin = clientPrograms(await serverVersion(url));
    await client.query('begin isolation level repeatable read read only');
    const { rows: [{ snapshot }] } = await client.query('select pg_export_snapshot() as snapshot');
    const tables = await countRows(client);
    const { target, env } = connection(url);
    const excluded = ['spatial_ref_sys', sessionTable].map((name) => `--exclude-table-data=*.${name}`);
    await runCommand(path.join(bin, 'pg_dump'), ['--format=custom', `--snapshot=${snapshot}`, ...excluded, `--file=${file}`, target], { env });
    return tables;
  });
}

/** Fills an empty database, which has our extensions already, from a dump. */
export async function restoreDump(url, file) {
  const bin = clientPrograms(await serverVersion(url));
  const { target, env } = connection(url);
  try {
    await runCommand(path.join(bin, 'pg_restore'), ['--exit-on-error', '--single-transaction', '--no-owner', '--no-privileges', '--no-comments', `--dbname=${target}`, file], { env });
  } catch (error) {
    if (error instanceof CommandFailed) throw new Problem(`The database of the backup could not be restored; nothing was changed.\n${error.message}`);
    throw error;
  }
}
