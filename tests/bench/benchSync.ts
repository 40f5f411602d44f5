import { spawnSync } from 'node:child_process';
import { mkdtempSync, readFileSync, rmSync } from 'node:fs';
import { tmpdir } from 'node:os';
import { join } from 'node:path';

/**
 * Hundreds of simulated field days against the real API on a real database: the test of sending in full count.
 * One line: runs, taps, requests, and what was lost, doubled, not listed or invented (all must be 0).
 */
export function benchSync(count: number, seed: number): unknown[] {
  const folder = mkdtempSync(join(tmpdir(), 'patchrow-sync-'));
  const report = join(folder, 'report.jsonl');
  const { status } = spawnSync(process.execPath, ['node_modules/vitest/vitest.mjs', 'run', '--project', 'api', 'tests/api/sync.test.ts', '--reporter=dot'], {
    env: { ...process.env, PATCHROW_SYNC_RUNS: String(count), PATCHROW_SYNC_SEED: String(seed), PATCHROW_SYNC_REPORT: report },
    stdio: ['ignore', 'ignore', 'inherit'],
  });
  try {
    const lines = readFileSync(report, 'utf8').trim().split('\n').map((line) => JSON.parse(line) as unknown);
    if (status !== 0) process.exitCode = 1;
    return lines;
  } finally {
    rmSync(folder, { recursive: true, force: true });
  }
}
