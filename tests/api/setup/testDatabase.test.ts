import pg from 'pg';
import { expect, inject, test } from 'vitest';
import { createTestDatabase } from './testDatabase.ts';

async function ask<Row>(url: string, statement: string): Promise<Row[]> {
  const client = new pg.Client({ connectionString: url });
  await client.connect();
  try {
    return (await client.query(statement)).rows as Row[];
  } finally {
    await client.end();
  }
}

test('each test file gets a database with PostGIS and the schema, and what it writes stays its own', async () => {
  const [one, other] = await Promise.all([createTestDatabase(), createTestDatabase()]);
  await ask(one.url, `insert into sessions (sid, sess, expire) values ('a', '{}', now())`);
  expect(await ask(one.url, 'select sid from sessions')).toEqual([{ sid: 'a' }]);
  expect(await ask(other.url, 'select sid from sessions')).toEqual([]);
  // A disc of radius 1 has the area pi; drawn as a polygon of 128 corners it comes out 0.04 % smaller.
  const [{ area }] = (await ask<{ area: number }>(one.url, `select ST_Area(ST_Buffer('POINT(0 0)'::geometry, 1, 32)) as area`)) as [{ area: number }];
  expect(area).toBeCloseTo(Math.PI, 2);
  await Promise.all([one.drop(), other.drop()]);
});

test('dropping a test database removes it from the server even while somebody is connected', async () => {
  const database = await createTestDatabase();
  const client = new pg.Client({ connectionString: database.url });
  client.on('error', () => undefined);
  await client.connect();
  await database.drop();
  const name = new URL(database.url).pathname.slice(1);
  expect(await ask(inject('testServerUrl'), `select 1 from pg_database where datname = '${name}'`)).toEqual([]);
});
