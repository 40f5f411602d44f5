// npm run worker: takes jobs from the queue beside the web server. Needs a migrated database.
import { applicationEnv } from './application.mjs';
import { ensureBuilt } from './build.mjs';
import { openDatabase } from './postgres.mjs';
import { runUntilStopped } from './process/runUntilStopped.mjs';
import { builtProgram, startService } from './process/service.mjs';
import { runMain } from './progress.mjs';
import { setUp } from './setup.mjs';

await runMain(() => runUntilStopped(async (keep) => {
  await setUp({ database: !process.env.DATABASE_URL });
  await ensureBuilt({ only: 'server' });
  const database = await keep(openDatabase('npm run worker'));
  const worker = keep(startService({ name: 'worker', args: [builtProgram('worker.js')], env: applicationEnv(database) }));
  await worker.untilFault();
}));
process.exit();
