import { mkdtempSync, readdirSync, rmSync, statSync } from 'node:fs';
import { tmpdir } from 'node:os';
import { join } from 'node:path';
import { prepareQueue } from '../../../server/jobs/queue.ts';
import { startRunner } from '../../../server/jobs/runner.ts';
import { openFileStore } from '../../../server/storage/fileStore.ts';
import { closeComputePool, openComputePool } from '../../../server/workers/computePool.ts';
import type { Agent, TestApp } from './testApp.ts';

export interface Files {
  /** Originals that are kept, and uploads that were left lying about. */
  kept: () => string[];
  incoming: () => string[];
  close: () => Promise<void>;
}

/** Everything that uploads need beside the application: a folder of originals, compute threads, and a runner of jobs. */
export async function startFiles(app: TestApp): Promise<Files> {
  const folder = mkdtempSync(join(tmpdir(), 'patchrow-files-'));
  await openFileStore(folder);
  await prepareQueue(app.config.databaseUrl);
  openComputePool(1);
  const runner = await startRunner(app.config.databaseUrl);
  return {
    kept: () => readdirSync(folder).filter((name) => name !== 'incoming' && statSync(join(folder, name)).isDirectory()).flatMap((name) => readdirSync(join(folder, name))),
    incoming: () => readdirSync(join(folder, 'incoming')),
    close: async () => {
      await runner.stop().catch(() => undefined);
      await closeComputePool();
      rmSync(folder, { recursive: true, force: true });
    },
  };
}

/** Waits for a job to end and returns how it ended. */
export async function jobEnd(agent: Agent, base: string, jobId: string): Promise<{ state: string; problem: string | null; result: unknown }> {
  for (let tries = 0; tries < 400; tries++) {
    const { body } = await agent.get(`${base}/jobs/${jobId}`);
    if (['done', 'failed', 'cancelled'].includes(body.state as string)) return body;
    await new Promise((resolve) => setTimeout(resolve, 50));
  }
  throw new Error(`Job ${jobId} did not end`);
}
