import { readConfig } from '../config.ts';
import { migrateToLatest, openDatabase } from '../db.ts';
import { prepareQueue } from '../jobs/queue.ts';

/** Brings the database to the newest schema and says what was applied. */
const config = readConfig();
const knex = openDatabase(config.databaseUrl, 2);
try {
  const applied = await migrateToLatest(knex);
  await prepareQueue(config.databaseUrl);
  process.stdout.write(applied.length === 0 ? 'Schema is up to date.\n' : `Schema: applied ${applied.join(', ')}.\n`);
} finally {
  await knex.destroy();
}
