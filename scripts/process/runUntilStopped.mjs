import { readFileSync } from 'node:fs';
import { say } from '../progress.mjs';
import { parentOf } from './liveProcess.mjs';

const signals = ['SIGINT', 'SIGTERM', 'SIGHUP'];
const watchEveryMs = 1_000;

function commandName(pid) {
  try {
    return readFileSync(`/proc/${pid}/comm`, 'utf8').trim();
  } catch {
    return '';
  }
}

/** npm and the shell it may put between itself and us, as child → parent pairs that break when npm is killed. */
function chainToNpm() {
  const chain = [[process.pid, process.ppid]];
  if (/^(sh|dash|bash)$/.test(commandName(process.ppid))) chain.push([process.ppid, parentOf(process.ppid)]);
  return chain;
}

/** Calls `onStop` at every signal to end, and when the npm that started this command was killed. */
function onStopRequest(onStop) {
  for (const signal of signals) process.on(signal, onStop);
  if (process.env.npm_lifecycle_event === undefined) return;
  const chain = chainToNpm();
  const timer = setInterval(() => {
    if (chain.every(([child, parent]) => parentOf(child) === parent)) return;
    clearInterval(timer);
    onStop();
  }, watchEveryMs);
  timer.unref();
}

/**
 * Runs `work` until it ends or this command is told to stop, then closes what the work has kept, last first.
 * `work` gets `keep`, which takes anything with a `close`, or a promise of it, and hands it back. A second signal kills
 * what can be killed, for those who do not want to wait. Resolves to what the work resolved to, or to undefined.
 */
export async function runUntilStopped(work) {
  const kept = [];
  const keep = (resource) => {
    kept.unshift(resource);
    return resource;
  };
  let isStopping = false;
  const stopped = new Promise((resolve) => {
    onStopRequest(() => {
      if (isStopping) kept.forEach((resource) => resource.kill?.());
      else say('Stopping …');
      isStopping = true;
      resolve();
    });
  });
  try {
    return await Promise.race([work(keep), stopped]);
  } finally {
    for (const resource of kept) {
      const opened = await Promise.resolve(resource).catch(() => null); // What could not be opened needs no closing.
      await opened?.close();
    }
  }
}
