import { createHash } from 'node:crypto';
import { spawn } from 'node:child_process';
import { once } from 'node:events';
import { existsSync, mkdirSync, readFileSync, rmSync } from 'node:fs';
import { tmpdir } from 'node:os';
import { join, resolve } from 'node:path';
import pg from 'pg';
import type { TestProject } from 'vitest/node';

declare module 'vitest' {
  export interface ProvidedContext {
    demoDatabase: string;
    demoFiles: string;
  }
}

const root = resolve(import.meta.dirname, '../../..');

/**
 * Before the browser journeys: the demo estate is laid once, by the built server, into a template that each journey clones.
 * It is laid again when the server or the day changes. Runs after the set-up that provides the server and the schema.
 */
export default async function setUp(project: TestProject): Promise<void> {
  const { testServerUrl, templateDatabase } = project.getProvidedContext();
  const state = createHash('sha256').update(readFileSync(join(root, 'dist/server.stamp'))).update(new Date().toISOString().slice(0, 10)).digest('hex').slice(0, 12);
  const database = `patchrow_demo_${state}`;
  const files = join(process.env.PATCHROW_TEST_FILES ?? tmpdir(), database);
  await lay({ testServerUrl, templateDatabase, database, files });
  project.provide('demoDatabase', database);
  project.provide('demoFiles', files);
}

async function lay({ testServerUrl, templateDatabase, database, files }: { testServerUrl: string; templateDatabase: string; database: string; files: string }): Promise<void> {
  const client = new pg.Client({ connectionString: testServerUrl });
  await client.connect();
  try {
    await client.query(`select pg_advisory_lock(hashtext('patchrow demo'))`);
    const { rows: [known] } = await client.query<{ isTemplate: boolean }>('select datistemplate as "isTemplate" from pg_database where datname = $1', [database]);
    if (known?.isTemplate && existsSync(files)) return;
    if (known?.isTemplate) await client.query(`alter database ${database} with is_template false`);
    await client.query(`drop database if exists ${database} with (force)`);
    await client.query(`create database ${database} template ${templateDatabase} strategy file_copy`);
    rmSync(files, { recursive: true, force: true });
    mkdirSync(files, { recursive: true });
    const url = new URL(testServerUrl);
    url.pathname = `/${database}`;
    await seed(url.href, files);
    await client.query(`alter database ${database} with is_template true allow_connections false`);
  } finally {
    await client.end();
  }
}

async function seed(url: string, files: string): Promise<void> {
  const env = { ...process.env, NODE_ENV: 'development', DATABASE_URL: url, PATCHROW_DATA: files, PATCHROW_DEMO: '1', LOG_LEVEL: 'error' };
  const child = spawn(process.execPath, [join(root, 'dist/server/cli/seedDemo.js')], { env, stdio: ['ignore', 'ignore', 'inherit'] });
  const [code] = (await once(child, 'exit')) as [number];
  if (code !== 0) throw new Error(`The demo estate could not be laid: its program ended with ${code}`);
}
