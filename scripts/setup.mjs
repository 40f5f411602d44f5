// What a clean clone lacks: npm packages, Debian packages. Needs nothing but Node.
import { setUpDebianPackages } from './setup/debianPackages.mjs';
import { setUpNodePackages } from './setup/nodePackages.mjs';
import { withLock } from './process/withLock.mjs';
import { Problem } from './progress.mjs';

const oldestNode = [20, 19];

function checkNode() {
  const [major, minor] = process.versions.node.split('.').map(Number);
  if (major > oldestNode[0] || (major === oldestNode[0] && minor >= oldestNode[1])) return;
  throw new Problem(`Node ${process.versions.node} is too old; ${oldestNode.join('.')} or newer is needed.`);
}

/**
 * Makes the checkout ready to run. `database` asks for a PostgreSQL server on this machine, `browser` for Chromium.
 * Quick when nothing is missing.
 */
export async function setUp({ database = false, browser = false } = {}) {
  checkNode();
  await withLock('set-up', async () => {
    await setUpDebianPackages({ database, browser });
    await setUpNodePackages();
  });
}
