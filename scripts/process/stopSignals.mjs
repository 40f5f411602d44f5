import { readFileSync } from 'node:fs';
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

/**
 * Resolves when this command shall end: by a signal, or because the npm that started it was killed.
 * A second signal calls `onSecondSignal`, for those who do not want to wait.
 */
export function untilStopped({ onSecondSignal }) {
  return new Promise((resolve) => {
    let isStopping = false;
    const stop = (reason) => {
      if (isStopping && signals.includes(reason)) onSecondSignal();
      isStopping = true;
      resolve(reason);
    };
    for (const signal of signals) process.on(signal, stop);
    if (process.env.npm_lifecycle_event === undefined) return;
    const chain = chainToNpm();
    const timer = setInterval(() => {
      if (chain.every(([child, parent]) => parentOf(child) === parent)) return;
      clearInterval(timer);
      stop('npm has ended');
    }, watchEveryMs);
    timer.unref();
  });
}
