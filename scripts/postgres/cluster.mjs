// One PostgreSQL cluster in a folder: made, started, stopped. It listens on loopback TCP only: no socket file, so the
// length of the checkout's path does not matter. `folder` holds data/ and server.log and belongs to the server's user.
import { chmodSync, chownSync, existsSync, mkdirSync, readFileSync, readlinkSync, realpathSync, renameSync, rmSync, writeFileSync } from 'node:fs';
import path from 'node:path';
import { setTimeout as sleep } from 'node:timers/promises';
import { CommandFailed, runCommand } from '../process/runCommand.mjs';
import { Problem } from '../progress.mjs';

const startTries = 20;
const dataOf = (folder) => path.join(folder, 'data');

/** Major version that made the data, or null when there are none yet. */
export function dataVersion(folder) {
  const file = path.join(dataOf(folder), 'PG_VERSION');
  return existsSync(file) ? Number(readFileSync(file, 'utf8')) : null;
}

/** Makes a folder that only the server's user can enter, below one that everybody may pass through. */
function makeServerFolder(folder, user) {
  const made = mkdirSync(path.dirname(folder), { recursive: true });
  if (made !== undefined) chmodSync(path.dirname(folder), 0o755);
  mkdirSync(folder, { recursive: true });
  if (user.uid !== undefined) chownSync(folder, user.uid, user.gid);
  chmodSync(folder, 0o700);
}

/**
 * Makes the data folder with one superuser. With a password every connection needs it (scram-sha-256); without one,
 * everybody on loopback is trusted, which is for throw-away clusters only. A half-made folder is thrown away first.
 */
export async function createCluster({ folder, bin, user, superuser, password = null }) {
  makeServerFolder(folder, user);
  const draft = path.join(folder, 'data.new');
  const passwordFile = path.join(folder, 'password.new');
  rmSync(draft, { recursive: true, force: true });
  const access = password === null ? ['--auth=trust', '--no-sync'] : ['--auth=scram-sha-256', `--pwfile=${passwordFile}`];
  try {
    if (password !== null) {
      writeFileSync(passwordFile, password, { mode: 0o600 });
      if (user.uid !== undefined) chownSync(passwordFile, user.uid, user.gid);
    }
    await runCommand(path.join(bin, 'initdb'), ['-D', draft, '-U', superuser, '--encoding=UTF8', '--locale=C.UTF-8', '--no-instructions', ...access], { cwd: folder, ...user });
  } finally {
    rmSync(passwordFile, { force: true });
  }
  renameSync(draft, dataOf(folder));
}

/** First lines of postmaster.pid, or null: process number, data folder, start time, port. */
function pidFile(folder) {
  try {
    const [pid, , , port] = readFileSync(path.join(dataOf(folder), 'postmaster.pid'), 'utf8').split('\n');
    return { pid: Number(pid), port: Number(port) };
  } catch {
    return null;
  }
}

/**
 * Whose process the pid file names: 'ours', 'other' (the number went to another process, or to nobody) or 'unknown'.
 * The server works in its data folder, which tells it from another server; a root without ptrace rights, as in a
 * container, cannot read that and goes by the command line.
 */
function ownerOf({ pid }, folder) {
  const data = realpathSync(dataOf(folder));
  try {
    if (readFileSync(`/proc/${pid}/comm`, 'utf8').trim() !== 'postgres') return 'other';
    const command = readFileSync(`/proc/${pid}/cmdline`, 'utf8').split('\0');
    if (command[command.indexOf('-D') + 1] === data) return 'ours';
    return readlinkSync(`/proc/${pid}/cwd`) === data ? 'ours' : 'other';
  } catch (error) {
    return error.code === 'ENOENT' || error.code === 'ESRCH' ? 'other' : 'unknown';
  }
}

/** The running server of this folder as { pid, port }, or null. */
export function runningServer(folder) {
  const noted = pidFile(folder);
  return noted !== null && ownerOf(noted, folder) === 'ours' ? noted : null;
}

/**
 * After a kill -9 the pid file may name a number that another process has by now, at which PostgreSQL would refuse to
 * start. In doubt the file stays: two servers on one folder would ruin the data.
 */
function forgetDeadServer(folder) {
  const noted = pidFile(folder);
  if (noted !== null && ownerOf(noted, folder) === 'other') rmSync(path.join(dataOf(folder), 'postmaster.pid'), { force: true });
}

const pgCtl = ({ folder, bin, user }, args) => runCommand(path.join(bin, 'pg_ctl'), ['-D', dataOf(folder), ...args], { cwd: folder, ...user });

/**
 * Starts the server and waits until it answers; `settings` are server settings by name.
 * Sessions of a killed server keep its shared memory for a moment, so a failed start is tried again.
 */
export async function startCluster({ folder, bin, user, port, settings = {} }) {
  const all = { listen_addresses: '127.0.0.1', port, unix_socket_directories: '', log_timezone: 'UTC', timezone: 'UTC', ...settings };
  const options = Object.entries(all).map(([name, value]) => `-c ${name}='${value}'`).join(' ');
  const log = path.join(folder, 'server.log');
  for (let attempt = 1; ; attempt++) {
    forgetDeadServer(folder);
    try {
      await pgCtl({ folder, bin, user }, ['-w', '-t', '60', '-l', log, '-o', options, 'start']);
      return;
    } catch (error) {
      if (!(error instanceof CommandFailed)) throw error;
      const tail = existsSync(log) ? readFileSync(log, 'utf8').trim().split('\n').slice(-8).join('\n') : error.message;
      if (attempt >= startTries || !/still in use|is another postmaster|lock file/.test(tail)) throw new Problem(`The database server did not start (log: ${log}):\n${tail}`);
      await sleep(500);
    }
  }
}

/** Stops the server; `fast` lets writes finish, `immediate` is for data that is thrown away. */
export async function stopCluster({ folder, bin, user, mode = 'fast' }) {
  if (runningServer(folder) === null) return;
  await pgCtl({ folder, bin, user }, ['-w', '-t', '60', '-m', mode, 'stop']);
}
