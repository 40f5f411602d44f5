import { createHash } from 'node:crypto';
import { readdirSync, readFileSync, statSync } from 'node:fs';
import { join } from 'node:path';
import pg from 'pg';
import type { TestProject } from 'vitest/node';
import { startTestCluster } from '../../../scripts/postgres/testCluster.mjs';
import { migrateToLatest, openDatabase } from '../../../server/db.ts';
import { prepareQueue } from '../../../server/jobs/queue.ts';

declare module 'vitest' {
  export interface ProvidedContext {
    testServerUrl: string;
    templateDatabase: string;
  }
}

/** What decides the content of the template. */
const schemaSources = ['migrations', 'server/db.ts', 'server/jobs/queue.ts', 'shared/catalog', 'package-lock.json'];

/**
 * Before the tests of a project: a throw-away PostgreSQL server, or the one that PATCHROW_TEST_DATABASE names
 * (postgres://user@host:port/postgres, a superuser), with a template database that holds extensions and schema.
 */
export default async function setUp(project: TestProject): Promise<() => Promise<void>> {
  const existing = process.env.PATCHROW_TEST_DATABASE;
  const server = existing ? { url: existing, close: () => Promise.resolve() } : await startTestCluster();
  const templateDatabase = `patchrow_template_${hashOf(schemaSources)}`;
  await makeTemplate(server.url, templateDatabase);
  project.provide('testServerUrl', server.url);
  project.provide('templateDatabase', templateDatabase);
  return () => server.close();
}

/** Two projects may start at once on the same server: the first makes the template, the second waits and finds it. */
async function makeTemplate(serverUrl: string, name: string): Promise<void> {
  const client = new pg.Client({ connectionString: serverUrl });
  await client.connect();
  try {
    await client.query(`select pg_advisory_lock(hashtext('patchrow template'))`);
    const { rows: [known] } = await client.query<{ isTemplate: boolean }>('select datistemplate as "isTemplate" from pg_database where datname = $1', [name]);
    if (known?.isTemplate) return;
    await client.query(`drop database if exists ${name} with (force)`);
    await client.query(`create database ${name}`);
    await fillTemplate(serverUrl, name);
    await client.query(`alter database ${name} with is_template true allow_connections false`);
  } finally {
    await client.end();
  }
}

async function fillTemplate(serverUrl: string, name: string): Promise<void> {
  const url = new URL(serverUrl);
  url.pathname = `/${name}`;
  const knex = openDatabase(url.href, 2);
  try {
    await migrateToLatest(knex);
    await prepareQueue(url.href);
  } finally {
    await knex.destroy();
  }
}

function hashOf(paths: string[]): string {
  const hash = createHash('sha256');
  for (const file of paths.flatMap(filesBelow).sort()) hash.update(file).update(readFileSync(file));
  return hash.digest('hex').slice(0, 12);
}

function filesBelow(path: string): string[] {
  return statSync(path).isFile() ? [path] : readdirSync(path).flatMap((name) => filesBelow(join(path, name)));
}
