// npm run backup [-- FILE]: database and uploaded files in one checked archive. Works while the server runs.
// npm run backup -- --drill [FILE]: reads a backup (the newest, unless one is named) back for a trial, and takes it away again.
import { existsSync, readdirSync } from 'node:fs';
import path from 'node:path';
import { checkArchive } from './archive/manifest.mjs';
import { noteBackup } from './archive/noteBackup.mjs';
import { tryArchive } from './archive/restoreArchive.mjs';
import { writeArchive } from './archive/writeArchive.mjs';
import { filesFolder, inState, root } from './checkout.mjs';
import { openDatabase } from './postgres.mjs';
import { withLock } from './process/withLock.mjs';
import { Problem, runMain, say } from './progress.mjs';
import { setUp } from './setup.mjs';

/** Name of a new archive in .patchrow/backups, after the time in UTC: patchrow-20260714-153000.tar */
function newArchiveName(now) {
  const digits = now.toISOString().replaceAll(/[-:]/g, '').slice(0, 15).replace('T', '-');
  return inState('backups', `patchrow-${digits}.tar`);
}

const inCaller = (file) => path.resolve(process.env.INIT_CWD ?? root, file);

function newestArchive() {
  const folder = inState('backups');
  const names = existsSync(folder) ? readdirSync(folder).filter((name) => /^patchrow-.*\.tar$/.test(name)).sort() : [];
  if (names.length === 0) throw new Problem('There is no backup yet. Make one with npm run backup, or name a file.');
  return path.join(folder, names.at(-1));
}

/** Restores a backup beside what is in use, says whether it is whole, and takes it away again. */
async function drill(archive) {
  if (!existsSync(archive)) throw new Problem(`There is no file ${archive}.`);
  await setUp({ database: !process.env.DATABASE_URL });
  await withLock('restore', async () => {
    const database = await openDatabase('npm run backup -- --drill');
    try {
      say('Reading the backup back for a trial …');
      const manifest = await checkArchive(archive);
      const problem = await tryArchive({ archive, database, filesFolder: filesFolder() }).then(() => null, (error) => error);
      await noteBackup(database.url, { kind: 'drill', isGood: problem === null, manifest });
      if (problem !== null) throw problem;
      console.log(`The backup of ${manifest.createdAt} can be restored: every row and file of its list is there. Nothing in use was touched.`);
    } finally {
      await database.close();
    }
  });
}

await runMain(async () => {
  const isDrill = process.argv[2] === '--drill';
  const [named, ...rest] = process.argv.slice(isDrill ? 3 : 2);
  if (rest.length > 0 || named?.startsWith('-')) throw new Problem('Usage: npm run backup [-- [--drill] FILE]');
  if (isDrill) return drill(named === undefined ? newestArchive() : inCaller(named));
  const target = named === undefined ? newArchiveName(new Date()) : inCaller(named);
  await setUp({ database: !process.env.DATABASE_URL });
  const database = await openDatabase('npm run backup');
  try {
    say('Writing and checking the backup …');
    const manifest = await writeArchive({ url: database.url, filesFolder: filesFolder(), target });
    const rows = Object.values(manifest.database.tables).reduce((sum, count) => sum + count, 0);
    await noteBackup(database.url, { kind: 'backup', isGood: true, manifest });
    console.log(`Backup written and checked: ${target}\n${rows} rows in ${Object.keys(manifest.database.tables).length} tables, ${manifest.files.length} uploaded files. Keep a copy on another machine.`);
  } finally {
    await database.close();
  }
});
process.exit();
