// npm run worker: takes jobs from the queue beside the web server. Needs a migrated database.
import { applicationEnv } from './application.mjs';
import { ensureBuilt } from './build.mjs';
import { openDatabase } from './postgres.mjs';
import { builtProgram, startService } from './process/service.mjs';
import { untilStopped } from './process/stopSignals.mjs';
import { Problem, runMain } from './progress.mjs';
import { setUp } from './setup.mjs';

await runMain(async () => {
  await setUp({ database: !process.env.DATABASE_URL });
  await ensureBuilt({ only: 'server' });
  const database = await openDatabase('npm run worker');
  const worker = startService({ name: 'worker', args: [builtProgram('worker.js')], env: applicationEnv(database) });
  const stopped = untilStopped({ onSecondSignal: () => worker.kill() });
  try {
    const end = await Promise.race([worker.ended, stopped]);
    if (typeof end === 'object') throw new Problem(`The worker ended (${end.signal ?? `exit code ${end.code}`}).`);
  } finally {
    await worker.stop();
    await database.close();
  }
});
process.exit();
