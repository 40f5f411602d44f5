// npm test [-- filter …]: set-up, build, type check and all tests; lint too where CI asks for it (elsewhere: npm run lint). With a filter (file names as vitest takes them,
// or vitest options) only the tests it names. npm run journeys: the long journeys in the browser. The last line is `N passed, N failed`.
import { spawn } from 'node:child_process';
import { once } from 'node:events';
import { existsSync, mkdtempSync, readFileSync, rmSync } from 'node:fs';
import os from 'node:os';
import path from 'node:path';
import { ensureBuilt } from './build.mjs';
import { npmProgram, root } from './checkout.mjs';
import { startTestCluster } from './postgres/testCluster.mjs';
import { CommandFailed, runCommand } from './process/runCommand.mjs';
import { runUntilStopped } from './process/runUntilStopped.mjs';
import { Problem, runMain, say } from './progress.mjs';
import { setUp } from './setup.mjs';
import { closingLines, countRun } from './testSummary.mjs';

const longestRunMs = 25 * 60_000;
const graceMs = 5_000;

const checks = [
  { name: 'types', command: ['vue-tsc', ['-p', 'tsconfig.json', '--noEmit']], isWanted: () => true },
  { name: 'lint', command: ['eslint', ['.']], isWanted: () => process.env.CI === 'true' },
];

/** Runs one check; resolves to its name in a list when it failed. What it found is printed, and the tests still run. */
async function failureOf(name, action) {
  try {
    await action();
    return [];
  } catch (error) {
    if (!(error instanceof CommandFailed) && !(error instanceof Problem)) throw error;
    console.log(error.output?.trim() ?? error.message);
    return [name];
  }
}

/** Runs the checks beside the tests at the same time; resolves to the names of those that failed. */
async function runChecks() {
  say('Checking types and style …');
  const wanted = checks.filter(({ isWanted }) => isWanted());
  return (await Promise.all(wanted.map(({ name, command }) => failureOf(name, () => runCommand(npmProgram(command[0]), command[1]))))).flat();
}

/** Without a filter: everything but the long journeys. */
const everyDay = ['core', 'api', 'client', 'e2e'].flatMap((project) => ['--project', project]);

/** Runs vitest in a process group of its own; resolves to whether it failed. */
async function runVitest(filter, { env, reportFile, keep }) {
  say('Running the tests …');
  const args = [npmProgram('vitest'), 'run', '--reporter=default', '--reporter=json', `--outputFile.json=${reportFile}`, ...(filter.length === 0 ? everyDay : filter)];
  const child = spawn(process.execPath, args, { cwd: root, env, detached: true, stdio: ['ignore', 'inherit', 'inherit'] });
  const ended = once(child, 'exit');
  const close = () => endGroup(child, ended);
  keep({ close });
  const timer = setTimeout(() => {
    say(`The tests took longer than ${longestRunMs / 60_000} minutes and are stopped.`);
    void close();
  }, longestRunMs);
  const [code] = await ended;
  clearTimeout(timer);
  return code !== 0;
}

/** Asks the whole group to end, so that browsers and servers of the tests end too; after a while it is killed. */
async function endGroup(child, ended) {
  if (child.exitCode !== null || child.signalCode !== null) return;
  process.kill(-child.pid, 'SIGTERM');
  const timer = setTimeout(() => process.kill(-child.pid, 'SIGKILL'), graceMs);
  await ended;
  clearTimeout(timer);
}

/** Sets up and runs everything that is asked for; resolves to counts and the names of failed checks. */
async function runAll(filter, { workFolder, keep }) {
  await setUp({ database: true, browser: true });
  const failedChecks = await failureOf('build', () => ensureBuilt());
  if (filter.length === 0) failedChecks.push(...(await runChecks()));
  const existing = process.env.PATCHROW_TEST_DATABASE;
  const { url } = existing ? { url: existing } : await keep(startTestCluster());
  const reportFile = path.join(workFolder, 'report.json');
  const env = { ...process.env, NODE_ENV: 'test', PATCHROW_TEST_DATABASE: url, PATCHROW_TEST_FILES: workFolder };
  delete env.DATABASE_URL; // The tests never touch a real database.
  const vitestFailed = await runVitest(filter, { env, reportFile, keep });
  const report = existsSync(reportFile) ? JSON.parse(readFileSync(reportFile, 'utf8')) : null;
  return { counts: countRun({ report, vitestFailed, failedChecks }), failedChecks };
}

await runMain(async () => {
  const startedAt = Date.now();
  const workFolder = mkdtempSync(path.join(os.tmpdir(), 'patchrow-run-'));
  process.exitCode = 1;
  try {
    const result = await runUntilStopped((keep) => runAll(process.argv.slice(2), { workFolder, keep }));
    if (result === undefined) return;
    console.log(closingLines({ ...result, seconds: (Date.now() - startedAt) / 1000 }).join('\n'));
    if (result.counts.failed === 0 && result.counts.passed > 0) process.exitCode = 0;
  } finally {
    rmSync(workFolder, { recursive: true, force: true });
  }
});
process.exit();
