import { runCompute } from '../workers/computePool.ts';
import type { ComputeName } from '../workers/compute.ts';
import type { JobContext } from './runner.ts';

/** Runs a computation for a job: its progress is the job's, and a job that was cancelled stops the thread. */
export async function computeInJob<Output>({ report }: Pick<JobContext, 'report'>, name: ComputeName, input: unknown): Promise<Output> {
  const stop = new AbortController();
  let cancelled: unknown = null;
  const onProgress = (stage: string, progress: number) => {
    report(stage, progress).catch((error: unknown) => {
      cancelled = error;
      stop.abort();
    });
  };
  try {
    return await runCompute<Output>(name, input, { signal: stop.signal, onProgress });
  } catch (error) {
    throw cancelled ?? error;
  }
}
