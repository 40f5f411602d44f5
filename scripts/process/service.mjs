import { spawn } from 'node:child_process';
import { once } from 'node:events';
import { closeSync, openSync, readFileSync, statSync } from 'node:fs';
import { inCheckout, root } from '../checkout.mjs';
import { Problem } from '../progress.mjs';
import { waitForAnswer } from './untilReady.mjs';

const stopWithinMs = 10_000;
const keptLogBytes = 5_000_000;
const preload = ['--import', new URL('./exitWithParent.mjs', import.meta.url).href];

/** The end of a log file. */
const logTail = (file, lines = 20) => readFileSync(file, 'utf8').trim().split('\n').slice(-lines).join('\n');

/** Opens a log for appending; one that has grown large starts anew. */
function openLog(file) {
  const size = statSync(file, { throwIfNoEntry: false })?.size ?? 0;
  return openSync(file, size > keptLogBytes ? 'w' : 'a', 0o600);
}

/**
 * Starts a Node program that runs until it is stopped. It has a process group of its own, so that Ctrl-C reaches only
 * the script, which then stops things in order. Without `logFile` its output goes to the terminal.
 */
export function startService({ name, args, env, logFile = null }) {
  const log = logFile === null ? null : openLog(logFile);
  const child = spawn(process.execPath, [...preload, ...args], {
    cwd: root, env: { ...process.env, ...env }, detached: true,
    stdio: ['ignore', log ?? 'inherit', log ?? 'inherit', 'ipc'],
  });
  if (log !== null) closeSync(log);
  const ended = once(child, 'exit').then(([code, signal]) => ({ code, signal }));
  const isRunning = () => child.exitCode === null && child.signalCode === null;
  return {
    name,
    isRunning,
    /** Waits for an end that nobody asked for, which is a fault. */
    async untilFault() {
      const { code, signal } = await ended;
      throw new Problem(`The ${name} ended (${signal ?? `exit code ${code}`}).${logFile === null ? '' : `\n${logTail(logFile)}`}`);
    },
    /** Asks the program to stop; after ten seconds its whole group is killed. */
    async close() {
      if (!isRunning()) return;
      child.kill('SIGTERM');
      const timer = setTimeout(() => killGroup(child.pid), stopWithinMs);
      await ended;
      clearTimeout(timer);
    },
    kill: () => isRunning() && killGroup(child.pid),
  };
}

function killGroup(pid) {
  try {
    process.kill(-pid, 'SIGKILL');
  } catch (error) {
    if (error.code !== 'ESRCH') throw error; // It ended by itself meanwhile.
  }
}

/** Waits until the address answers with a 2xx status while the service runs. */
export async function untilReady(service, { url, logFile }) {
  const tried = await waitForAnswer(url, { isRunning: service.isRunning });
  if (!service.isRunning()) throw new Problem(`The ${service.name} did not start (log: ${logFile}):\n${logTail(logFile)}`);
  if (tried !== null) throw new Problem(`The ${service.name} does not answer at ${url}. ${tried} Log: ${logFile}\n${logTail(logFile)}`);
}

/** Path of a built program of the server. */
export const builtProgram = (name) => inCheckout('dist', 'server', name);
