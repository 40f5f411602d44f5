/** Runs `action` with a connected client of the pg package, which is there once the set-up has run. */
export async function withClient(url, action) {
  const { default: pg } = await import('pg');
  const client = new pg.Client({ connectionString: url, application_name: 'patchrow-scripts' });
  client.on('error', () => {}); // A connection that breaks fails the query in hand, which reports it.
  await client.connect();
  try {
    return await action(client);
  } finally {
    await client.end();
  }
}

/** Runs one statement and resolves to its rows. */
export const query = (url, text, values = []) => withClient(url, async (client) => (await client.query(text, values)).rows);

/** An SQL identifier, quoted. */
export const identifier = (name) => `"${name.replaceAll('"', '""')}"`;

/** An SQL text literal, quoted; for statements that take no parameters. */
export const literal = (text) => `'${text.replaceAll("'", "''")}'`;

/** The same server and user, another database. */
export function withDatabase(url, name) {
  const changed = new URL(url);
  changed.pathname = `/${encodeURIComponent(name)}`;
  return changed.href;
}

/** Name of the database in a connection address. */
export const databaseName = (url) => decodeURIComponent(new URL(url).pathname.slice(1));

/** Adds the extensions that the schema builds on; PostGIS may only be added by a superuser. */
export const addExtensions = (url) => query(url, 'create extension if not exists postgis; create extension if not exists btree_gist');
