import { existsSync, readFileSync } from 'node:fs';
import { inCheckout } from '../checkout.mjs';
import { CommandFailed, runCommand } from '../process/runCommand.mjs';
import { Problem, say } from '../progress.mjs';

/**
 * Paths of packages that the lock file asks for and that are missing or of another version in what npm says it
 * installed (node_modules/.package-lock.json, written when an install has succeeded). Optional packages are left out:
 * most of them are binaries for other machines.
 */
export function stalePackages(lock, installed) {
  return Object.entries(lock.packages)
    .filter(([path, entry]) => path !== '' && !entry.optional && !entry.link)
    .filter(([path, entry]) => installed.packages?.[path]?.version !== entry.version)
    .map(([path]) => path);
}

function readJson(file) {
  return existsSync(file) ? JSON.parse(readFileSync(file, 'utf8')) : {};
}

/** Installs the npm packages of the lock file when one is missing or of another version. */
export async function setUpNodePackages() {
  const lock = readJson(inCheckout('package-lock.json'));
  const stale = stalePackages(lock, readJson(inCheckout('node_modules', '.package-lock.json')));
  if (stale.length === 0) return;
  say(`Installing npm packages (${stale.length} missing or outdated; about a minute) …`);
  const npm = process.env.npm_execpath;
  const [command, first] = npm === undefined ? ['npm', []] : [process.execPath, [npm]];
  try {
    await runCommand(command, [...first, 'ci', '--include=dev', '--no-audit', '--no-fund', '--loglevel=error']);
  } catch (error) {
    if (!(error instanceof CommandFailed) && error.code !== 'ENOENT') throw error;
    throw new Problem(`The npm packages could not be installed. Check the network, then run the command again.\n${error.message}`);
  }
}
