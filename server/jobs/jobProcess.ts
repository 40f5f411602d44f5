import { fork, type ChildProcess } from 'node:child_process';
import { once } from 'node:events';
import { fileURLToPath } from 'node:url';
import { log } from '../log.ts';

/** Argument of a process that a server on the same machine started. */
export const besideServer = '--beside-server';

/** After an end that nobody asked for a new process is started; the pause keeps one that cannot start from filling the log. */
const restartAfterMs = 2000;
const stopWithinMs = 8000;

export interface JobProcess {
  /** Of the process that takes jobs now; null in the pause before a new one. */
  processId: () => number | null;
  stop: () => Promise<void>;
}

/**
 * Takes jobs in a process of their own with a low priority: loading what a zoning needs, computing it and writing what came
 * out would each keep requests waiting for tenths of a second, and running out of memory would end the server.
 */
export function startJobProcess(): JobProcess {
  const fromSource = import.meta.url.endsWith('.ts');
  const program = fileURLToPath(new URL(fromSource ? '../worker.ts' : '../worker.js', import.meta.url));
  let child: ChildProcess | null = null;
  let restart: NodeJS.Timeout | null = null;
  let isStopping = false;
  const start = () => {
    child = fork(program, [besideServer], fromSource ? { execArgv: ['--import', 'tsx'] } : {});
    child.once('error', (error) => log.error('job process', error));
    child.once('exit', (code, signal) => {
      child = null;
      if (isStopping) return;
      log.error('job process ended', new Error(signal ?? `exit code ${code}`));
      restart = setTimeout(start, restartAfterMs);
    });
  };
  start();
  return {
    processId: () => child?.pid ?? null,
    stop: async () => {
      isStopping = true;
      if (restart !== null) clearTimeout(restart);
      if (child === null) return;
      const ended = once(child, 'exit');
      const late = setTimeout(() => child?.kill('SIGKILL'), stopWithinMs);
      child.kill('SIGTERM');
      await ended;
      clearTimeout(late);
    },
  };
}
