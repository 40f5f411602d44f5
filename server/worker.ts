import { readConfig } from './config.ts';
import { openDatabase } from './db.ts';
import { prepareQueue } from './jobs/queue.ts';
import { startRunner } from './jobs/runner.ts';
import { log, setLogLevel } from './log.ts';
import { openFileStore } from './storage/fileStore.ts';
import { closeComputePool, openComputePool } from './workers/computePool.ts';

/** Takes jobs only; any number of these may run beside the web server, on any machine that reaches the database. */
async function main(): Promise<void> {
  const config = readConfig();
  setLogLevel(config.logLevel);
  const knex = openDatabase(config.databaseUrl);
  await prepareQueue(config.databaseUrl);
  await openFileStore(config.dataFolder);
  openComputePool(config.computeThreads);
  const runner = await startRunner(config.databaseUrl);
  log.info('taking jobs');
  const stop = async () => {
    await runner.stop().catch(() => undefined);
    await closeComputePool();
    await knex.destroy();
    process.exit(0);
  };
  process.once('SIGINT', () => void stop());
  process.once('SIGTERM', () => void stop());
}

main().catch((error: unknown) => {
  log.error('start failed', error);
  process.exit(1);
});
