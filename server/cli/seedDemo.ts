import { readConfig } from '../config.ts';
import { openDatabase } from '../db.ts';
import { seedDemo } from '../demo/seedDemo.ts';
import { openFileStore } from '../storage/fileStore.ts';
import { closeComputePool, openComputePool } from '../workers/computePool.ts';

/** Lays the demo estate on first use; `--reset` lays it anew. Other estates are not touched. */
const config = readConfig();
if (!config.demo) {
  process.stderr.write('The demo estate is laid only where PATCHROW_DEMO=1 asks for it.\n');
  process.exit(1);
}
const knex = openDatabase(config.databaseUrl, 4);
openComputePool(config.computeThreads);
try {
  await openFileStore(config.dataFolder);
  const started = Date.now();
  const laid = await seedDemo({ now: new Date(), reset: process.argv.includes('--reset'), onStep: (step) => process.stdout.write(`  ${step}\n`) });
  process.stdout.write(laid ? `Demo estate laid in ${((Date.now() - started) / 1000).toFixed(1)} s.\n` : 'The demo estate is there.\n');
} finally {
  await closeComputePool();
  await knex.destroy();
}
