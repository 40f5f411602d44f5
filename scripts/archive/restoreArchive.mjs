import { createWriteStream, mkdirSync, renameSync, rmSync } from 'node:fs';
import { once } from 'node:events';
import path from 'node:path';
import { filesBelow } from '../filesBelow.mjs';
import { databaseName, identifier, query, withClient, withDatabase } from '../postgres/query.mjs';
import { Problem } from '../progress.mjs';
import { clientPrograms, countRows, restoreDump, serverVersion } from './databaseDump.mjs';
import { checkArchive, dumpName, filesPrefix } from './manifest.mjs';

/** Unpacks a checked archive into a folder, checking it again on the way. */
async function unpack(archive, folder) {
  const streams = [];
  const manifest = await checkArchive(archive, (name) => {
    const file = path.join(folder, name);
    mkdirSync(path.dirname(file), { recursive: true });
    const stream = createWriteStream(file, { mode: 0o600 });
    streams.push(stream);
    return async (chunk) => { if (!stream.write(Buffer.from(chunk))) await once(stream, 'drain'); };
  });
  await Promise.all(streams.map((stream) => new Promise((resolve, reject) => stream.once('error', reject).end(resolve))));
  return manifest;
}

/** Refuses a backup of a newer PostgreSQL, whose dump this server cannot read. */
async function checkVersions(manifest, adminUrl) {
  const version = await serverVersion(adminUrl);
  if (manifest.postgres > version) throw new Problem(`The backup was made with PostgreSQL ${manifest.postgres}; this server is ${version}. Restore it on a server of version ${manifest.postgres} or newer.`);
  clientPrograms(version);
}

/** Names the tables whose number of rows differs. */
async function compareCounts(url, expected) {
  const found = await withClient(url, countRows);
  const different = Object.keys({ ...expected, ...found }).filter((table) => expected[table] !== found[table]);
  if (different.length === 0) return;
  throw new Problem(`The restored database differs from the backup's list of contents; nothing was changed. ${different.map((table) => `${table}: ${expected[table] ?? 'none'} expected, ${found[table] ?? 'none'} found`).join('; ')}.`);
}

/** Another database of the server, to rename and drop ours from. */
const maintenance = (adminUrl) => withDatabase(adminUrl, databaseName(adminUrl) === 'postgres' ? 'template1' : 'postgres');

/** Makes the empty database that the dump goes into, beside the one in use; resolves to its name. */
async function makeFresh({ url, adminUrl, addExtensions }) {
  const name = `${databaseName(url)}_restoring`;
  const owner = decodeURIComponent(new URL(url).username);
  await dropDatabase(adminUrl, name);
  await query(maintenance(adminUrl), `create database ${identifier(name)} owner ${identifier(owner)}`);
  await addExtensions(withDatabase(adminUrl, name));
  return name;
}

const dropDatabase = (adminUrl, name) => query(maintenance(adminUrl), `drop database if exists ${identifier(name)} with (force)`);

/**
 * Gives the fresh database the name of the present one in one transaction, and drops the present one. Meanwhile nobody
 * may connect to it: a program that came back between the end of its connection and the renaming would prevent it.
 */
async function swapDatabases({ url, adminUrl }, fresh) {
  const current = databaseName(url);
  const old = `${current}_replaced`;
  await dropDatabase(adminUrl, old);
  await withClient(maintenance(adminUrl), async (client) => {
    const allowConnections = (isAllowed) => client.query(`alter database ${identifier(current)} with allow_connections ${isAllowed}`);
    await allowConnections(false);
    try {
      await client.query(`select pg_terminate_backend(pid, 5000) from pg_stat_activity where datname in ($1, $2) and backend_type = 'client backend'`, [current, fresh]);
      await client.query(`begin; alter database ${identifier(current)} rename to ${identifier(old)}; alter database ${identifier(fresh)} rename to ${identifier(current)}; commit`);
    } catch (error) {
      await client.query('rollback');
      await allowConnections(true);
      throw error;
    }
  });
  await dropDatabase(adminUrl, old);
}

/** Puts unpacked files in their place. Files are named after their content, so the database in use misses none meanwhile. */
function addFiles(unpacked, filesFolder) {
  for (const name of filesBelow(unpacked, ['.'])) {
    mkdirSync(path.dirname(path.join(filesFolder, name)), { recursive: true });
    renameSync(path.join(unpacked, name), path.join(filesFolder, name));
  }
}

/** Removes files that the restored database does not know. */
function removeOtherFiles(manifest, filesFolder) {
  const known = new Set(manifest.files.map((file) => file.path));
  for (const name of filesBelow(filesFolder, ['.'])) {
    if (!known.has(name)) rmSync(path.join(filesFolder, name));
  }
}

/**
 * Reads an archive back for a trial: unpacks and checks it, restores its database beside the present one, counts, and
 * takes all of it away again. Nothing in use is touched. Throws with the reason when the backup would be of no use.
 */
export async function tryArchive({ archive, database, filesFolder }) {
  const manifest = await checkArchive(archive);
  await checkVersions(manifest, maintenance(database.adminUrl));
  const unpacked = `${filesFolder}.trial`;
  rmSync(unpacked, { recursive: true, force: true });
  let fresh = null;
  try {
    await unpack(archive, unpacked);
    fresh = await makeFresh(database);
    const freshUrl = withDatabase(database.url, fresh);
    await restoreDump(freshUrl, path.join(unpacked, dumpName));
    await compareCounts(freshUrl, manifest.database.tables);
    return manifest;
  } finally {
    if (fresh !== null) await dropDatabase(database.adminUrl, fresh);
    rmSync(unpacked, { recursive: true, force: true });
  }
}

/**
 * Replaces database and uploaded files by those of an archive. Nothing in use is touched until the archive is unpacked
 * and checked, its database restored beside the present one, counted, and brought to the present schema by `migrate(url)`.
 * Interrupted at any point, the old or the new state is whole. Resolves to the manifest.
 */
export async function restoreArchive({ archive, database, filesFolder, migrate }) {
  const manifest = await checkArchive(archive);
  await checkVersions(manifest, maintenance(database.adminUrl));
  const unpacked = `${filesFolder}.restoring`;
  rmSync(unpacked, { recursive: true, force: true });
  let fresh = null;
  try {
    await unpack(archive, unpacked);
    fresh = await makeFresh(database);
    const freshUrl = withDatabase(database.url, fresh);
    await restoreDump(freshUrl, path.join(unpacked, dumpName));
    await compareCounts(freshUrl, manifest.database.tables);
    await migrate(freshUrl);
    addFiles(path.join(unpacked, filesPrefix), filesFolder);
    await swapDatabases(database, fresh);
    removeOtherFiles(manifest, filesFolder);
    return manifest;
  } catch (error) {
    if (fresh !== null) await dropDatabase(database.adminUrl, fresh);
    throw error;
  } finally {
    rmSync(unpacked, { recursive: true, force: true });
  }
}
