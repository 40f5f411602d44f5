import { readConfig } from './config.ts';
import { openDatabase } from './db.ts';
import { besideServer } from './jobs/jobProcess.ts';
import { prepareQueue } from './jobs/queue.ts';
import { startRunner } from './jobs/runner.ts';
import { log, setLogLevel } from './log.ts';
import { openFileStore } from './storage/fileStore.ts';
import { closeComputePool, openComputePool } from './workers/computePool.ts';
import { yieldWholeProcess } from './workers/yieldToRequests.ts';

/** Takes jobs only; the web server starts one of these, and any number may run beside it, on any machine that reaches the database. */
async function main(): Promise<void> {
  const isBesideServer = process.argv.includes(besideServer);
  if (isBesideServer) yieldWholeProcess();
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
  process.once('SIGTERM', () => void stop());
  if (!isBesideServer) {
    process.once('SIGINT', () => void stop());
    return;
  }
  // Ctrl-C reaches the server too, which then ends this process; one whose server is gone ends by itself.
  process.on('SIGINT', () => undefined);
  process.once('disconnect', () => void stop());
  if (!process.connected) await stop();
}

main().catch((error: unknown) => {
  log.error('start failed', error);
  process.exit(1);
});
