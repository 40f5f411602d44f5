// npm run restore -- FILE [--force] [--no-safety-copy]: puts database and uploaded files back as they are in a backup.
// What is there now goes into a backup of its own first.
import { existsSync } from 'node:fs';
import path from 'node:path';
import { parseArgs } from 'node:util';
import { applicationEnv, runServerProgram } from './application.mjs';
import { checkArchive } from './archive/manifest.mjs';
import { restoreArchive } from './archive/restoreArchive.mjs';
import { writeArchive } from './archive/writeArchive.mjs';
import { ensureBuilt } from './build.mjs';
import { filesFolder, inState, root } from './checkout.mjs';
import { openDatabase } from './postgres.mjs';
import { databaseName, query } from './postgres/query.mjs';
import { withLock } from './process/withLock.mjs';
import { Problem, runMain, say } from './progress.mjs';
import { setUp } from './setup.mjs';

const usage = 'Usage: npm run restore -- FILE [--force] [--no-safety-copy]';

function readArguments() {
  try {
    const { values, positionals } = parseArgs({ allowPositionals: true, options: { force: { type: 'boolean', default: false }, 'no-safety-copy': { type: 'boolean', default: false } } });
    if (positionals.length !== 1) throw new Problem(usage);
    const archive = path.resolve(process.env.INIT_CWD ?? root, positionals[0]);
    if (!existsSync(archive)) throw new Problem(`There is no file ${archive}.`);
    return { archive, isForced: values.force, wantsSafetyCopy: !values['no-safety-copy'] };
  } catch (error) {
    throw error instanceof Problem ? error : new Problem(`${error.message}\n${usage}`);
  }
}

/** A running server would keep old rows in memory and write into the new database. */
async function refuseWhileInUse({ url, adminUrl }) {
  const users = await query(adminUrl, `select coalesce(nullif(application_name, ''), 'a program without a name') as name from pg_stat_activity where datname = $1 and backend_type = 'client backend' and pid <> pg_backend_pid()`, [databaseName(url)]);
  if (users.length === 0) return;
  throw new Problem(`The database is in use by ${[...new Set(users.map(({ name }) => name))].join(', ')} (${users.length} connections). Stop the server (Ctrl-C) first, or add --force to end those connections.`);
}

async function keepPresentState(database) {
  const target = inState('backups', `before-restore-${Date.now()}.tar`);
  say('Keeping what is there now in a backup …');
  await writeArchive({ url: database.url, filesFolder: filesFolder(), target });
  return target;
}

async function restore({ archive, isForced, wantsSafetyCopy }, database) {
  if (!isForced) await refuseWhileInUse(database);
  const safetyCopy = wantsSafetyCopy ? await keepPresentState(database) : null;
  say('Restoring …');
  const migrate = (url) => runServerProgram('migrate', { env: applicationEnv({ url }) });
  const manifest = await restoreArchive({ archive, database, filesFolder: filesFolder(), migrate });
  console.log(`Restored: the state of ${manifest.createdAt}, ${manifest.files.length} uploaded files. Everybody signs in again.`);
  if (safetyCopy !== null) console.log(`To undo: npm run restore -- ${JSON.stringify(safetyCopy)}`);
}

await runMain(async () => {
  const wanted = readArguments();
  await setUp({ database: !process.env.DATABASE_URL });
  say('Checking the backup …');
  await checkArchive(wanted.archive);
  await ensureBuilt({ only: 'server' });
  await withLock('restore', async () => {
    const database = await openDatabase('npm run restore');
    try {
      await restore(wanted, database);
    } finally {
      await database.close();
    }
  });
});
process.exit();
