// What every script that runs the application shares: its environment, schema, demo estate and address.
import { randomBytes } from 'node:crypto';
import { existsSync, readFileSync, rmSync, writeFileSync } from 'node:fs';
import { inState } from './checkout.mjs';
import { query } from './postgres/query.mjs';
import { CommandFailed, runCommand } from './process/runCommand.mjs';
import { builtProgram } from './process/service.mjs';
import { Problem, say } from './progress.mjs';

const isProduction = () => process.env.NODE_ENV === 'production';

/** Whether demo accounts may sign in: the environment's word, else everywhere but in production. */
export const allowsDemo = () => (process.env.PATCHROW_DEMO ? process.env.PATCHROW_DEMO === '1' : !isProduction());

/** Secret for session cookies, made once and kept, so that people stay signed in over a restart. Production sets its own. */
function sessionSecret() {
  if (process.env.SESSION_SECRET) return process.env.SESSION_SECRET;
  if (isProduction()) throw new Problem('With NODE_ENV=production the environment must hold SESSION_SECRET: at least 16 random characters, the same at every start. For instance: SESSION_SECRET="$(openssl rand -hex 32)"');
  const file = inState('secret');
  if (!existsSync(file)) writeFileSync(file, randomBytes(32).toString('hex'), { mode: 0o600 });
  return readFileSync(file, 'utf8');
}

/** Environment of the application's programs. */
export function applicationEnv({ url }) {
  const secret = sessionSecret();
  return { ...process.env, DATABASE_URL: url, PATCHROW_DEMO: allowsDemo() ? '1' : '0', SESSION_SECRET: secret };
}

/** Runs one of the server's command-line programs; `from` is 'built' (dist) or 'source' (through tsx). */
export async function runServerProgram(name, { env, args = [], from = 'built' }) {
  const program = from === 'built' ? [builtProgram(`cli/${name}.js`)] : ['--import', 'tsx', `server/cli/${name}.ts`];
  try {
    return await runCommand(process.execPath, [...program, ...args], { env });
  } catch (error) {
    if (error instanceof CommandFailed) throw new Problem(`${name} failed.\n${error.output.trim()}`);
    throw error;
  }
}

/** True when no estate has been made yet. */
async function isEmpty(url) {
  const [{ found }] = await query(url, 'select exists (select from estates) as found');
  return !found;
}

/**
 * Brings the schema up to date and fills a database that has no estate with the demo estate. A mark is there while the
 * demo is being made, so that an interrupted first start is finished by the next one.
 */
export async function prepareDatabase(database, { from = 'built' } = {}) {
  const env = applicationEnv(database);
  await runServerProgram('migrate', { env, from });
  const begun = inState('demo-begun');
  if (!allowsDemo() || !(existsSync(begun) || (await isEmpty(database.url)))) return;
  say('Making the demo estate (once) …');
  writeFileSync(begun, '');
  await runServerProgram('seedDemo', { env, from });
  rmSync(begun);
}

const demoPeople = ['owner', 'agronomist', 'manager', 'crew', 'winemaker', 'lab'];

/** The lines printed when the application is ready. */
export function banner({ address, logFile }) {
  const signIns = allowsDemo() ? ['', 'Demo estate, password patchrow-demo:', ...demoPeople.map((role) => `  ${role}@demo.example`)] : [];
  return ['', `Patchrow is ready: ${address}`, ...signIns, '', `Ctrl-C stops it. Log: ${logFile}`, ''].join('\n');
}
