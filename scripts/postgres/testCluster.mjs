// A throw-away cluster for tests: trusted connections, no syncing to disk, gone when the test run ends.
import { mkdtempSync, readdirSync, rmSync, statSync } from 'node:fs';
import { spawnSync } from 'node:child_process';
import os from 'node:os';
import path from 'node:path';
import { identify, isAlive } from '../process/liveProcess.mjs';
import { anyFreePort } from '../process/freePort.mjs';
import { Problem } from '../progress.mjs';
import { createCluster, startCluster, stopCluster } from './cluster.mjs';
import { usablePostgres } from './installedPostgres.mjs';
import { serverUser } from './systemUser.mjs';

const superuser = 'tester';
const namePattern = /^patchrow-test-(\d+)-(\d+)-/;
const settings = {
  fsync: 'off', synchronous_commit: 'off', full_page_writes: 'off', wal_level: 'minimal', max_wal_senders: 0,
  autovacuum: 'off', // A clean-up process that looks into the template would hold up its cloning.
  max_connections: 200,
};

/** Folders of runs that were killed: their name holds the process that made them. Their servers are stopped. */
async function clearLeftovers({ bin, user }) {
  for (const name of readdirSync(os.tmpdir())) {
    const maker = namePattern.exec(name);
    if (maker === null || isAlive({ pid: Number(maker[1]), startTicks: maker[2] })) continue;
    const folder = path.join(os.tmpdir(), name);
    if (statSync(folder).uid !== (user.uid ?? process.getuid())) continue;
    await stopCluster({ folder, bin, user, mode: 'immediate' });
    rmSync(folder, { recursive: true, force: true });
  }
}

/** Starts a cluster in a temporary folder. Resolves to { url, close }; it is stopped at the exit of this process too. */
export async function startTestCluster() {
  const found = usablePostgres();
  if (found === undefined) throw new Problem('PostgreSQL with PostGIS is not installed. "npm test" installs it.');
  const { bin } = found;
  const user = await serverUser();
  await clearLeftovers({ bin, user });
  const self = identify(process.pid);
  const folder = mkdtempSync(path.join(os.tmpdir(), `patchrow-test-${self.pid}-${self.startTicks}-`));
  const cluster = { folder, bin, user };
  const stopAtExit = () => {
    spawnSync(path.join(bin, 'pg_ctl'), ['-D', path.join(folder, 'data'), '-m', 'immediate', 'stop'], { cwd: '/', ...user });
    rmSync(folder, { recursive: true, force: true });
  };
  process.once('exit', stopAtExit);
  await createCluster({ ...cluster, superuser });
  const port = await anyFreePort();
  await startCluster({ ...cluster, port, settings });
  return {
    url: `postgres://${superuser}@127.0.0.1:${port}/postgres`,
    async close() {
      process.off('exit', stopAtExit);
      await stopCluster({ ...cluster, mode: 'immediate' });
      rmSync(folder, { recursive: true, force: true });
    },
  };
}
