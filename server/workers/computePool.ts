import { MessageChannel } from 'node:worker_threads';
import { Piscina } from 'piscina';
import type { ComputeName } from './compute.ts';

let pool: Piscina | null = null;

/** Opens the threads that do heavy work, so that requests stay fast. */
export function openComputePool(threads: number): void {
  if (pool) return;
  const fromSource = import.meta.url.endsWith('.ts');
  pool = new Piscina({
    filename: new URL(fromSource ? './compute.ts' : './compute.js', import.meta.url).href,
    maxThreads: threads,
    minThreads: 0,
    idleTimeout: 60_000,
    // The GeoTIFF reader refuses to load in a thread without worker data.
    workerData: {},
    execArgv: fromSource ? ['--import', 'tsx'] : [],
  });
}

export async function closeComputePool(): Promise<void> {
  const closing = pool;
  pool = null;
  await closing?.destroy();
}

export interface ComputeOptions {
  onProgress?: (stage: string, progress: number) => void;
  signal?: AbortSignal;
}

/** Runs a named computation in a thread. Input and output cross as structured clones. */
export async function runCompute<Output>(name: ComputeName, input: unknown, options: ComputeOptions = {}): Promise<Output> {
  if (!pool) throw new Error('The compute pool is not open');
  const { port1, port2 } = new MessageChannel();
  port1.on('message', (message: { stage: string; progress: number }) => options.onProgress?.(message.stage, message.progress));
  try {
    return (await pool.run({ name, input, port: port2 }, { transferList: [port2], ...(options.signal ? { signal: options.signal } : {}) })) as Output;
  } finally {
    port1.close();
  }
}
