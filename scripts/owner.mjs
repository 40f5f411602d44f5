// npm run owner -- --email …: a link that lets an owner in, and the first estate where there is none.
import { applicationEnv, runServerProgram } from './application.mjs';
import { ensureBuilt } from './build.mjs';
import { openDatabase } from './postgres.mjs';
import { runMain } from './progress.mjs';
import { setUp } from './setup.mjs';

await runMain(async () => {
  await setUp({ database: !process.env.DATABASE_URL });
  await ensureBuilt({ only: 'server' });
  const database = await openDatabase('npm run owner');
  try {
    const env = applicationEnv(database);
    await runServerProgram('migrate', { env });
    const output = await runServerProgram('owner', { env, args: process.argv.slice(2) });
    console.log(output.trim());
  } finally {
    await database.close();
  }
});
process.exit();
