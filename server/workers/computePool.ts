import { MessageChannel } from 'node:worker_threads';
import { Piscina } from 'piscina';
import { fromCarried } from './carriedError.ts';
import type { ComputeAnswer, ComputeName, LaneData } from './compute.ts';
import { yieldedNiceness } from './yieldToRequests.ts';

/** quick: what a person waits for at the screen. heavy: jobs that may take minutes and must not hold up the first, nor requests. */
export type Lane = 'quick' | 'heavy';

let pools: Record<Lane, Piscina> | null = null;

/** Opens the threads that do heavy work, so that requests stay fast; one more thread is kept for quick work. */
export function openComputePool(threads: number): void {
  pools ??= { quick: makePool('quick', 1), heavy: makePool('heavy', threads) };
}

function makePool(lane: Lane, threads: number): Piscina {
  const fromSource = import.meta.url.endsWith('.ts');
  return new Piscina({
    filename: new URL(fromSource ? './sourceThread.mjs' : './compute.js', import.meta.url).href,
    maxThreads: threads,
    minThreads: 0,
    idleTimeout: 60_000,
    // The GeoTIFF reader refuses to load in a thread without worker data.
    workerData: (lane === 'heavy' ? { niceness: yieldedNiceness } : {}) satisfies LaneData,
  });
}

export async function closeComputePool(): Promise<void> {
  const closing = pools;
  pools = null;
  await Promise.all(Object.values(closing ?? {}).map((pool) => pool.destroy()));
}

export interface ComputeOptions {
  onProgress?: (stage: string, progress: number) => void;
  signal?: AbortSignal;
  lane?: Lane;
}

/**
 * Runs a named computation in a thread. Input and output cross as structured clones. An ImportProblem or AnalysisError
 * thrown there is thrown here as the same class.
 */
export async function runCompute<Output>(name: ComputeName, input: unknown, options: ComputeOptions = {}): Promise<Output> {
  const pool = pools?.[options.lane ?? 'heavy'];
  if (!pool) throw new Error('The compute pool is not open');
  const { port1, port2 } = new MessageChannel();
  port1.on('message', (message: { stage: string; progress: number }) => options.onProgress?.(message.stage, message.progress));
  try {
    const answer = (await pool.run({ name, input, port: port2 }, { transferList: [port2], ...(options.signal ? { signal: options.signal } : {}) })) as ComputeAnswer;
    if ('refused' in answer) throw fromCarried(answer.refused);
    return answer.value as Output;
  } finally {
    port1.close();
  }
}
