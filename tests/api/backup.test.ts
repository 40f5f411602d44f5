import { execFile } from 'node:child_process';
import { existsSync, mkdirSync, mkdtempSync, readdirSync, readFileSync, rmSync, truncateSync, writeFileSync } from 'node:fs';
import { tmpdir } from 'node:os';
import { join } from 'node:path';
import { promisify } from 'node:util';
import pg from 'pg';
import { afterEach, beforeEach, expect, test } from 'vitest';
import { checkArchive } from '../../scripts/archive/manifest.mjs';
import { restoreArchive } from '../../scripts/archive/restoreArchive.mjs';
import { writeArchive } from '../../scripts/archive/writeArchive.mjs';
import { addExtensions, query } from '../../scripts/postgres/query.mjs';
import { createTestDatabase, type TestDatabase } from './setup/testDatabase.ts';

const run = promisify(execFile);
/** Enough for tests that run whole scripts, which build the server when it is out of date. */
const scriptsMs = 180_000;

let database: TestDatabase;
let folder: string;
let filesFolder: string;
let archive: string;

beforeEach(async () => {
  database = await createTestDatabase();
  folder = mkdtempSync(join(tmpdir(), 'backup-'));
  filesFolder = join(folder, 'files');
  archive = join(folder, 'estate.tar');
  mkdirSync(join(filesFolder, 'ab'), { recursive: true });
  writeFileSync(join(filesFolder, 'ab', 'ab12'), Buffer.from([0, 255, 10, 13]));
  writeFileSync(join(filesFolder, 'cd34'), 'elevation');
  await query(database.url, `insert into estates (name) values ('Kept'), ('Écart ''n°2''')`);
  await query(database.url, `insert into sessions (sid, sess, expire) values ('signed-in', '{}', now() + interval '1 day')`);
});

afterEach(async () => {
  await database.drop();
  rmSync(folder, { recursive: true });
});

const opened = () => ({ url: database.url, adminUrl: database.url, addExtensions });
const restore = (migrate: () => Promise<void> = () => Promise.resolve()) => restoreArchive({ archive, database: opened(), filesFolder, migrate });
const backUp = () => writeArchive({ url: database.url, filesFolder, target: archive });

const estateNames = async () => (await query(database.url, 'select name from estates order by name')).map(({ name }) => name);
const otherDatabases = async () => query(database.url, `select datname from pg_database where datname like current_database() || '\\_%'`);

/** What happens between backup and restore: rows changed, added, removed; files lost, damaged, added. */
async function spoil(): Promise<void> {
  await query(database.url, `delete from estates where name = 'Kept'; update estates set name = 'Changed'; insert into estates (name) values ('Later')`);
  rmSync(join(filesFolder, 'cd34'));
  writeFileSync(join(filesFolder, 'ab', 'ab12'), 'damaged');
  writeFileSync(join(filesFolder, 'later'), 'x');
}

/** Runs a script as a person would, against the test database and folder. */
async function npmRun(script: string, ...args: string[]): Promise<{ stdout: string; stderr: string }> {
  return run(process.execPath, [`scripts/${script}.mjs`, ...args], { env: { ...process.env, DATABASE_URL: database.url, PATCHROW_DATA: filesFolder } });
}

test('a backup brings back rows and files exactly, and the state before the restore can be had again', async () => {
  const written = await npmRun('backup', archive);
  expect(written.stdout).toContain('2 uploaded files');
  await spoil();

  const restored = await npmRun('restore', archive);
  expect(await estateNames()).toEqual(['Kept', `Écart 'n°2'`]);
  expect(readFileSync(join(filesFolder, 'ab', 'ab12'))).toEqual(Buffer.from([0, 255, 10, 13]));
  expect(readFileSync(join(filesFolder, 'cd34'), 'utf8')).toBe('elevation');
  expect(existsSync(join(filesFolder, 'later'))).toBe(false);

  const undo = JSON.parse(/npm run restore -- (".*")/.exec(restored.stdout)![1]!) as string;
  await npmRun('restore', undo, '--no-safety-copy');
  rmSync(undo);
  expect(await estateNames()).toEqual(['Changed', 'Later']);
  expect(readFileSync(join(filesFolder, 'later'), 'utf8')).toBe('x');
  expect(existsSync(join(filesFolder, 'cd34'))).toBe(false);
}, scriptsMs);

test('a backup is noted for the owner, and so is reading one back for a trial, which touches nothing', async () => {
  await npmRun('backup', archive);
  const drilled = await npmRun('backup', '--drill', archive);
  expect(drilled.stdout).toContain('can be restored');
  const whole = readFileSync(archive);
  const damaged = Buffer.from(whole);
  damaged[damaged.indexOf('elevation')]! ^= 1;
  writeFileSync(archive, damaged);
  await expect(npmRun('backup', '--drill', archive)).rejects.toThrow(/damaged/);
  expect(await query(database.url, 'select kind, ok, file_total::int as files from backups order by at')).toEqual([{ kind: 'backup', ok: true, files: 2 }, { kind: 'drill', ok: true, files: 2 }]);
  expect(await estateNames()).toEqual(['Kept', `Écart 'n°2'`]);
  expect(await otherDatabases()).toEqual([]);
  expect(readdirSync(folder).sort()).toEqual(['estate.tar', 'files']);
}, scriptsMs);

test('geometry, the queue and the schema versions survive, sign-ins do not', async () => {
  await query(database.url, `select graphile_worker.add_job('work', '{"jobId": "1"}')`);
  await query(database.url, `create table outline_probe (outline geometry(Polygon, 4326))`);
  await query(database.url, `insert into outline_probe values (ST_GeomFromText('POLYGON((0 0, 0.01 0, 0.01 0.01, 0 0))', 4326))`);
  const facts = `select (select count(*)::int from graphile_worker.jobs) as jobs, (select string_agg(name, ',' order by name) from schema_versions) as versions, (select ST_AsText(outline) from outline_probe) as outline`;
  const before = await query(database.url, facts);
  const manifest = await backUp();
  expect(manifest.database.tables).toMatchObject({ 'public.estates': 2, 'public.outline_probe': 1 });
  await query(database.url, 'drop table outline_probe');
  await restore();
  expect(await query(database.url, facts)).toEqual(before);
  expect(before[0]).toMatchObject({ jobs: 1, outline: 'POLYGON((0 0,0.01 0,0.01 0.01,0 0))' });
  expect(await query(database.url, 'select sid from sessions')).toEqual([]);
});

test('a damaged, cut or foreign archive is refused before anything is touched', async () => {
  await backUp();
  const whole = readFileSync(archive);
  await spoil();
  const damaged = Buffer.from(whole);
  damaged[damaged.indexOf('elevation')]! ^= 1;
  const cases: [Buffer, RegExp][] = [
    [damaged, /files\/cd34 in the archive is damaged/],
    [whole.subarray(0, whole.length / 2), /cut off/],
    [whole.subarray(0, 512), /manifest\.json. It was cut off/],
    [Buffer.alloc(1024), /empty/],
    [Buffer.from('some text '.repeat(200)), /not a tar archive/],
  ];
  for (const [bytes, message] of cases) {
    writeFileSync(archive, bytes);
    await expect(restore()).rejects.toThrow(message);
  }
  expect(await estateNames()).toEqual(['Changed', 'Later']);
  expect(readFileSync(join(filesFolder, 'later'), 'utf8')).toBe('x');
});

test('a restore that fails on the way leaves rows and files as they were and nothing beside them', async () => {
  await backUp();
  await spoil();
  await expect(restore(() => Promise.reject(new Error('schema of a newer version')))).rejects.toThrow('schema of a newer version');
  expect(await estateNames()).toEqual(['Changed', 'Later']);
  expect(readdirSync(filesFolder).sort()).toEqual(['ab', 'later']);
  expect(readdirSync(folder).sort()).toEqual(['estate.tar', 'files']);
  expect(await otherDatabases()).toEqual([]);
});

test('while a program uses the database a restore is refused, and with --force its connection is ended', async () => {
  await backUp();
  await spoil();
  const server = new pg.Client({ connectionString: database.url, application_name: 'the server' });
  const ended = new Promise((resolve) => server.on('error', resolve));
  await server.connect();
  await expect(npmRun('restore', archive, '--no-safety-copy')).rejects.toThrow(/in use by the server .*--force/);
  expect(await estateNames()).toEqual(['Changed', 'Later']);
  await npmRun('restore', archive, '--no-safety-copy', '--force');
  await ended;
  expect(await estateNames()).toEqual(['Kept', `Écart 'n°2'`]);
}, scriptsMs);

test('rows written while a backup is made are in it wholly or not at all', async () => {
  let isWriting = true;
  const writer = (async () => {
    while (isWriting) await query(database.url, `insert into estates (name) select 'Row ' || n from generate_series(1, 50) n`);
  })();
  const manifest = await backUp();
  isWriting = false;
  await writer;
  await restore(); // Compares the number of rows of every table with the manifest.
  const [{ count }] = (await query(database.url, 'select count(*)::int as count from estates')) as [{ count: number }];
  expect(count).toBe(manifest.database.tables['public.estates']);
  expect((count - 2) % 50).toBe(0);
});

test('a backup that cannot be made leaves no half archive behind', async () => {
  await expect(writeArchive({ url: `${database.url}_missing`, filesFolder, target: archive })).rejects.toThrow(/does not exist/);
  expect(readdirSync(folder)).toEqual(['files']);
  truncateSync(join(filesFolder, 'cd34'), 0);
  await backUp();
  expect((await checkArchive(archive)).files.find(({ path }) => path === 'cd34')?.bytes).toBe(0);
});
