// npm run reset-demo: puts the demo estate back as it was; other estates stay.
import { applicationEnv, runServerProgram } from './application.mjs';
import { ensureBuilt } from './build.mjs';
import { openDatabase } from './postgres.mjs';
import { runMain, say } from './progress.mjs';
import { setUp } from './setup.mjs';

await runMain(async () => {
  await setUp({ database: !process.env.DATABASE_URL });
  await ensureBuilt({ only: 'server' });
  const database = await openDatabase('npm run reset-demo');
  try {
    const env = applicationEnv(database);
    await runServerProgram('migrate', { env });
    say('Making the demo estate anew …');
    await runServerProgram('seedDemo', { env, args: ['--reset'] });
    console.log('The demo estate is as on the first day.');
  } finally {
    await database.close();
  }
});
process.exit();
