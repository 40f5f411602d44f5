// npm run backup [-- FILE]: database and uploaded files in one checked archive. Works while the server runs.
import path from 'node:path';
import { writeArchive } from './archive/writeArchive.mjs';
import { filesFolder, inState, root } from './checkout.mjs';
import { openDatabase } from './postgres.mjs';
import { Problem, runMain, say } from './progress.mjs';
import { setUp } from './setup.mjs';

/** Name of a new archive in .patchrow/backups, after the time in UTC: patchrow-20260714-153000.tar */
function newArchiveName(now) {
  const digits = now.toISOString().replaceAll(/[-:]/g, '').slice(0, 15).replace('T', '-');
  return inState('backups', `patchrow-${digits}.tar`);
}

await runMain(async () => {
  const [named, ...rest] = process.argv.slice(2);
  if (rest.length > 0 || named?.startsWith('-')) throw new Problem('Usage: npm run backup [-- FILE]');
  const target = named === undefined ? newArchiveName(new Date()) : path.resolve(process.env.INIT_CWD ?? root, named);
  await setUp({ database: !process.env.DATABASE_URL });
  const database = await openDatabase('npm run backup');
  try {
    say('Writing and checking the backup …');
    const manifest = await writeArchive({ url: database.url, filesFolder: filesFolder(), target });
    const rows = Object.values(manifest.database.tables).reduce((sum, count) => sum + count, 0);
    console.log(`Backup written and checked: ${target}\n${rows} rows in ${Object.keys(manifest.database.tables).length} tables, ${manifest.files.length} uploaded files. Keep a copy on another machine.`);
  } finally {
    await database.close();
  }
});
process.exit();
