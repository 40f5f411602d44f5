// npm run bench [-- options]: seconds and memory of the zoning pipeline, as JSON on standard output.
import { runCommand, CommandFailed } from './process/runCommand.mjs';
import { runMain } from './progress.mjs';
import { setUp } from './setup.mjs';

await runMain(async () => {
  await setUp();
  try {
    await runCommand(process.execPath, ['--import', 'tsx', 'tests/bench/run.ts', ...process.argv.slice(2)], { isShown: true });
  } catch (error) {
    if (!(error instanceof CommandFailed)) throw error;
    process.exitCode = error.code ?? 1;
  }
});
