// npm run zone -- --block … --layer …: zones of one block from files. Builds the program first when its sources are newer.
import { existsSync, statSync } from 'node:fs';
import { inCheckout, root } from './checkout.mjs';
import { filesBelow } from './filesBelow.mjs';

const program = inCheckout('dist/server/cli/zone.js');
const sources = ['server', 'shared', 'tsconfig.json', 'package-lock.json'];

/** By time, which costs a few milliseconds; whether a newer file differs is for the build to find out. */
function isBuilt() {
  const stamp = inCheckout('dist/server.stamp');
  if (!existsSync(program) || !existsSync(stamp)) return false;
  const built = statSync(stamp).mtimeMs;
  return filesBelow(root, sources).every((file) => statSync(inCheckout(file)).mtimeMs <= built);
}

if (!isBuilt()) {
  const [{ ensureBuilt }, { setUp }, { runMain }] = await Promise.all([import('./build.mjs'), import('./setup.mjs'), import('./progress.mjs')]);
  await runMain(async () => {
    await setUp();
    await ensureBuilt({ only: 'server' });
  });
}
if (process.exitCode === undefined) await import(program);
